const RAD = Math.PI / 180;

/** Where the sun stands, by the low-precision formulas of Meeus as used by NOAA's solar calculator. No refraction. */
export interface SunPlace {
  /** Degrees above the horizon. */
  altitude: number;
  /** Degrees from north, clockwise. */
  azimuth: number;
}

/** Declination (radians) and equation of time (minutes) at an instant. */
function yearPlace(instant: number): { declination: number; equation: number } {
  const c = (instant / 86_400_000 + 2440587.5 - 2451545) / 36525;
  const meanLongitude = (280.46646 + c * (36000.76983 + 0.0003032 * c)) * RAD;
  const anomaly = (357.52911 + c * (35999.05029 - 0.0001537 * c)) * RAD;
  const eccentricity = 0.016708634 - c * (0.000042037 + 0.0000001267 * c);
  const centre =
    Math.sin(anomaly) * (1.914602 - c * (0.004817 + 0.000014 * c)) +
    Math.sin(2 * anomaly) * (0.019993 - 0.000101 * c) +
    Math.sin(3 * anomaly) * 0.000289;
  const node = (125.04 - 1934.136 * c) * RAD;
  const longitude = meanLongitude + (centre - 0.00569 - 0.00478 * Math.sin(node)) * RAD;
  const obliquity = (23.439291 - 0.0130042 * c + 0.00256 * Math.cos(node)) * RAD;
  const y = Math.tan(obliquity / 2) ** 2;
  const equation =
    (4 / RAD) *
    (y * Math.sin(2 * meanLongitude) -
      2 * eccentricity * Math.sin(anomaly) +
      4 * eccentricity * y * Math.sin(anomaly) * Math.cos(2 * meanLongitude) -
      0.5 * y * y * Math.sin(4 * meanLongitude) -
      1.25 * eccentricity * eccentricity * Math.sin(2 * anomaly));
  return { declination: Math.asin(Math.sin(obliquity) * Math.sin(longitude)), equation };
}

/**
 * The sun over one day: declination and equation of time move so little that they are taken at both ends.
 * @param from start of the day, ms; @param to its end; @param latitude degrees; @param longitude degrees, east positive
 */
export function sunOfDay(
  from: number,
  to: number,
  latitude: number,
  longitude: number,
): (instant: number, out: SunPlace) => SunPlace {
  const a = yearPlace(from);
  const b = yearPlace(to);
  const sinLat = Math.sin(latitude * RAD);
  const cosLat = Math.cos(latitude * RAD);
  return (instant, out) => {
    const u = (instant - from) / (to - from);
    const declination = a.declination + u * (b.declination - a.declination);
    const equation = a.equation + u * (b.equation - a.equation);
    const minutes = (instant / 60_000) % 1440;
    const hourAngle = ((minutes + equation + 4 * longitude) / 4 - 180) * RAD;
    const sinDec = Math.sin(declination);
    const cosDec = Math.cos(declination);
    const sinAlt = sinLat * sinDec + cosLat * cosDec * Math.cos(hourAngle);
    out.altitude = Math.asin(sinAlt) / RAD;
    const east = -cosDec * Math.sin(hourAngle);
    const north = cosLat * sinDec - sinLat * cosDec * Math.cos(hourAngle);
    out.azimuth = (Math.atan2(east, north) / RAD + 360) % 360;
    return out;
  };
}

/** Where the sun stands at one instant. */
export function sunAt(instant: number, latitude: number, longitude: number): SunPlace {
  return sunOfDay(instant - 1, instant + 1, latitude, longitude)(instant, { altitude: 0, azimuth: 0 });
}

/** Power outside the air on a level square metre, W (solar constant 1361 W/m², distance by day of year). */
export function beyondAir(instant: number, sinAltitude: number): number {
  if (sinAltitude <= 0) return 0;
  const dayOfYear = (instant / 86_400_000) % 365.25;
  return 1361 * (1 + 0.033 * Math.cos((2 * Math.PI * dayOfYear) / 365.25)) * sinAltitude;
}

/** Cloudless sun and sky on a level square metre, W (Haurwitz 1945). */
export function clearSky(sinAltitude: number): number {
  return sinAltitude <= 0.005 ? 0 : 1098 * sinAltitude * Math.exp(-0.057 / sinAltitude);
}

/** Share of the level radiation that is diffuse, from the clearness index (Erbs, Klein and Duffie 1982). */
export function diffuseShare(clearness: number): number {
  const k = Math.max(0, clearness);
  if (k <= 0.22) return 1 - 0.09 * k;
  if (k <= 0.8) return 0.9511 + k * (-0.1604 + k * (4.388 + k * (-16.638 + k * 12.336)));
  return 0.165;
}

/**
 * Radiation on a tilted plane, W/m²: beam by geometry, sky and ground alike from all sides (Liu and Jordan 1963).
 * @param level radiation on the level, W/m²; @param tilt degrees; @param azimuth degrees from north
 */
export function onPlane(level: number, outside: number, sun: SunPlace, tilt: number, azimuth: number): number {
  if (level <= 0 || sun.altitude <= 0) return 0;
  const sinAlt = Math.sin(sun.altitude * RAD);
  const cosAlt = Math.cos(sun.altitude * RAD);
  const diffuse = level * diffuseShare(level / Math.max(outside, 1));
  const facing =
    sinAlt * Math.cos(tilt * RAD) + cosAlt * Math.sin(tilt * RAD) * Math.cos((sun.azimuth - azimuth) * RAD);
  const beam = ((level - diffuse) / Math.max(sinAlt, 0.087)) * Math.max(0, facing);
  const open = (1 + Math.cos(tilt * RAD)) / 2;
  return beam + diffuse * open + 0.2 * level * (1 - open);
}
