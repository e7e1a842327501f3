import type { Fuel } from '../../../shared/api/property.ts';

/** One kind of boiler from `GET /api/reference/boiler-kinds`. */
export interface BoilerKind {
  id: string;
  label: string;
  fuels: Fuel[];
  winter: number;
  summer: number;
  source: string;
}

export const FUEL_WORDS: Record<Fuel, string> = { gas: 'Gas', lpg: 'LPG', oil: 'Oil', none: 'None: no boiler' };
export const FUEL_OPTIONS = (Object.keys(FUEL_WORDS) as Fuel[]).map((value) => ({ value, title: FUEL_WORDS[value] }));

/** The kinds that burn a fuel, after “not known”. */
export function kindOptions(kinds: readonly BoilerKind[], fuel: Fuel): { value: string; title: string }[] {
  return [
    { value: '', title: 'Not known' },
    ...kinds.filter((kind) => kind.fuels.includes(fuel)).map((kind) => ({ value: kind.id, title: kind.label })),
  ];
}
