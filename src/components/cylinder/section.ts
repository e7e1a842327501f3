import type { System } from '../../../shared/api/property.ts';
import type { TankChannel } from '../../../shared/units/channels.ts';
import { CHANNEL_LABELS } from '../../composables/figure-channels.ts';
import { number, said, temperature } from '../../composables/format.ts';

/** What the drawing is made from. */
export interface CylinderModel {
  volumeLitres: number;
  heaters: readonly { position: 'lower' | 'upper'; viaDiverter: boolean }[];
  /** Whether a boiler heats the cylinder through a coil. */
  coil: boolean;
  /** One per temperature sensor; `c` is null where its reading is not known. */
  sensors: readonly { channel: TankChannel; height: number; assumed: boolean; c: number | null }[];
  readyC: number;
}

/** A horizontal slice of the cylinder, heights as shares from the bottom; `c` null: unmeasured. */
export interface Layer {
  from: number;
  to: number;
  c: number | null;
}

/** Heat put in during the period, in kWh; null where it is not known. */
export interface HeatSources {
  sun: number | null;
  bought: number | null;
  fuel: number | null;
}

/** Where a sensor sits if the record is silent: common practice, no source. */
export const USUAL_HEIGHT: Record<TankChannel, number> = { tankTop: 0.85, tankMiddle: 0.5, tankBottom: 0.15 };
/** How far a sensor speaks for the water above and below it, as a share of the height: common practice, no source. */
const REACH = 0.2;

/** The sensors of a record, with the temperatures given; sensors seen in the logs but not recorded are added. */
export function sensorsOf(
  system: Pick<System, 'cylinder'>,
  temperatures: Partial<Record<TankChannel, number | null>>,
): CylinderModel['sensors'] {
  const recorded = system.cylinder.sensors ?? [];
  const names = new Set<TankChannel>([
    ...recorded.map((sensor) => sensor.channel),
    ...(Object.keys(temperatures) as TankChannel[]),
  ]);
  return [...names]
    .map((channel) => {
      const height = recorded.find((sensor) => sensor.channel === channel)?.height;
      return {
        channel,
        height: height ?? USUAL_HEIGHT[channel],
        assumed: height === undefined,
        c: temperatures[channel] ?? null,
      };
    })
    .sort((a, b) => b.height - a.height);
}

/**
 * The slices of the cylinder from the top down. A sensor speaks for a fifth of the height around it and no further
 * than half-way to the next; the top one also for the water above it, which is at least as warm. The rest is unmeasured.
 */
export function layersOf(sensors: CylinderModel['sensors']): Layer[] {
  const read = sensors.filter((sensor) => sensor.c !== null).sort((a, b) => b.height - a.height);
  const layers: Layer[] = [];
  let edge = 1;
  read.forEach((sensor, i) => {
    const above = read[i - 1];
    const below = read[i + 1];
    let to = Math.min(1, sensor.height + REACH);
    if (above) to = Math.min(to, (above.height + sensor.height) / 2);
    else if (sensor.height >= 0.5) to = 1;
    let from = Math.max(0, sensor.height - REACH);
    if (below) from = Math.max(from, (below.height + sensor.height) / 2);
    if (edge - to > 1e-9) layers.push({ from: to, to: edge, c: null });
    layers.push({ from, to, c: sensor.c });
    edge = from;
  });
  if (edge > 1e-9) layers.push({ from: 0, to: edge, c: null });
  return layers;
}

/**
 * Height to diameter of a hot-water cylinder: small ones are squat, large ones slender. Common practice, no source;
 * 2.0 at 80 litres or less, 3.0 at 250 litres or more, straight between.
 */
export function slenderness(volumeLitres: number): number {
  return 2 + Math.min(1, Math.max(0, (volumeLitres - 80) / 170));
}

/** How strongly a layer is tinted, 0 to 1: 10 °C or less hardly, 70 °C or more fully. */
export function tint(c: number): number {
  return 0.08 + 0.84 * Math.min(1, Math.max(0, (c - 10) / 60));
}

/** The parts of the gauge from the bottom up, in kWh; unknown heat has no size and is said in words. */
export function gaugeParts(heat: HeatSources): { kind: 'sun' | 'fuel' | 'bought'; kwh: number }[] {
  return (['sun', 'fuel', 'bought'] as const).flatMap((kind) => {
    const kwh = heat[kind];
    return kwh !== null && kwh > 0 ? [{ kind, kwh }] : [];
  });
}

/** A round top for the gauge’s scale, and its step, in kWh. */
export function gaugeScale(total: number): { top: number; step: number } {
  // Less than a kilowatt-hour looks as little as it is.
  const least = Math.max(total, 1);
  const rough = least / 4;
  const power = 10 ** Math.floor(Math.log10(rough));
  const step = [1, 2, 5, 10].map((n) => n * power).find((n) => n >= rough)!;
  return { step, top: Math.ceil(least / step - 1e-9) * step };
}

/** The drawing in words, for those who do not see it. */
export function cylinderWords(model: CylinderModel, heat: HeatSources | null, when: string): string {
  const parts = [`A cylinder of ${number(model.volumeLitres, 0)} litres in section.`];
  const read = model.sensors.filter((sensor) => sensor.c !== null);
  if (model.sensors.length === 0) parts.push('It has no temperature sensor, so its temperature is not shown.');
  else if (read.length === 0) parts.push(`No temperature was logged ${when}.`);
  else {
    const list = read.map(
      (sensor) => `${CHANNEL_LABELS[sensor.channel].replace('Tank, ', '')} ${temperature(sensor.c)}`,
    );
    parts.push(`Temperatures ${when}: ${list.join(', ')}; to be ready it needs ${temperature(model.readyC)}.`);
    if (layersOf(model.sensors).some((layer) => layer.c === null)) parts.push('Hatched parts are not measured.');
  }
  if (heat) {
    const known = [
      heat.sun === null ? null : `sun ${said('divertedKwh', heat.sun, null)}`,
      heat.fuel === null ? null : `fuel ${said('fuelHeatKwh', heat.fuel, null)}`,
      heat.bought ? `bought ${said('boughtHeatKwh', heat.bought, null)}` : null,
    ].filter((part) => part !== null);
    if (known.length > 0) parts.push(`Heat put in: ${known.join(', ')}.`);
    const missing = [heat.sun === null ? 'the sun' : null, heat.fuel === null ? 'the fuel' : null].filter(Boolean);
    if (missing.length > 0) parts.push(`What ${missing.join(' and ')} put in is not known.`);
  }
  return parts.join(' ');
}
