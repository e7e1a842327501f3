/** Heat capacity of water, Wh/(litre·K): 4.1868 / 3.6. IAPWS-IF97 gives 1.165 at 10 °C to 1.140 at 65 °C. */
export const WATER_WH_PER_LITRE_K = 1.163;
export const MIXED_C = 40;

/** Mains cold water by month, °C (SAP 10.2 Table J1 from memory; it reproduces a published worksheet). */
const MAINS_C = [8.0, 8.2, 9.3, 12.7, 14.6, 16.7, 18.4, 17.6, 16.6, 14.3, 11.1, 8.5];

/**
 * Cold feed by month, °C: SAP Table J1 for Great Britain, taken six months later south of the equator.
 *
 * @param month 1 to 12
 */
export function coldFeedC(month: number, latitude: number | null): number {
  const at = latitude !== null && latitude < 0 ? (month + 5) % 12 : month - 1;
  return MAINS_C[at];
}

/**
 * Litres of water at 40 °C that an amount of heat makes: E / (0.001163 × (40 − cold)).
 *
 * @param kwh heat, kWh
 * @param coldC cold feed, °C
 * @returns litres, null where 40 − cold is 5 K or less
 */
export function litresAt40(kwh: number, coldC: number): number | null {
  const rise = MIXED_C - coldC;
  return rise <= 5 ? null : (kwh * 1000) / (WATER_WH_PER_LITRE_K * rise);
}
