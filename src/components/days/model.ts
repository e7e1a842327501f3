import type { Day } from '../../../shared/api/day.ts';
import type { Property } from '../../../shared/api/property.ts';
import type { TankChannel } from '../../../shared/units/channels.ts';
import { sensorsOf } from '../cylinder/section.ts';
import type { CylinderModel } from '../cylinder/section.ts';

/**
 * The property’s cylinder as the drawing wants it.
 * @param temperatures the readings to show, by sensor
 */
export function cylinderModel(
  property: Property,
  temperatures: Partial<Record<TankChannel, number | null>>,
): CylinderModel {
  const { system } = property;
  return {
    volumeLitres: system.cylinder.volumeLitres,
    heaters: system.heaters?.length ? system.heaters : [{ position: 'lower', viaDiverter: true }],
    coil: system.boiler.fuel !== 'none',
    sensors: sensorsOf(system, temperatures),
    readyC: property.ready.temperatureC,
  };
}

/** The last day of a stretch that knows how warm the tank was at the ready time. */
export function lastReadyDay(days: readonly Day[]): Day | null {
  return days.findLast((day) => day.tank.sensor !== null && day.tank.atReadyC !== null) ?? null;
}
