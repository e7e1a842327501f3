import type { CylinderAnswer } from '../../shared/api/day.ts';
import { DEFAULTS } from '../../shared/energy/defaults.ts';
import type { Database } from '../database/connection.ts';
import { problem } from '../http/problems.ts';
import { homeOf } from '../properties/properties.service.ts';

/** A cylinder's standing loss is declared at this difference to its surroundings, K (BS EN 12897). */
const DECLARED_AT_K = 45;

/**
 * What is known of how a property's cylinder holds its heat: from readings, and as declared
 * (UA = S × 1000 / 24 / 45, S in kWh per day).
 */
export async function readCylinder(db: Database, propertyId: string): Promise<CylinderAnswer> {
  const home = await homeOf(db, propertyId);
  if (!home) throw problem('not-found');
  const declared = home.systems.at(-1)?.cylinder.declaredLossKwhPerDay;
  const f = DEFAULTS.storeFactor.value;
  return {
    uaWPerK: null,
    uaRange: null,
    nights: 0,
    declaredUaWPerK: declared === undefined ? null : (declared * 1000) / 24 / DECLARED_AT_K,
    f,
    fRange: [f, 1],
  };
}
