import { inject, provide, shallowReadonly, shallowRef } from 'vue';
import type { InjectionKey, ShallowRef } from 'vue';
import type { Day, FigureName, Totals } from '../../shared/api/day.ts';
import type { FigureContext } from './figures.ts';

/** A figure whose working was asked for: of one day, or of a stretch of days. */
export interface Slip extends FigureContext {
  figure: FigureName;
  day: Day | Totals;
  /** "Monday, 23 November 2026", "the week from 23 to 29 November 2026" */
  about: string;
}

export interface Slips {
  slip: Readonly<ShallowRef<Slip | null>>;
  open: (slip: Slip) => void;
  close: () => void;
}

const KEY: InjectionKey<Slips> = Symbol('slip');

/** One slip for the whole page; the shell shows it. */
export function provideSlip(): Slips {
  const slip = shallowRef<Slip | null>(null);
  const slips: Slips = {
    slip: shallowReadonly(slip),
    open: (next) => (slip.value = next),
    close: () => (slip.value = null),
  };
  provide(KEY, slips);
  return slips;
}

/** @throws Error where no shell provides the slip */
export function useSlip(): Slips {
  const slips = inject(KEY);
  if (!slips) throw new Error('useSlip needs provideSlip above it');
  return slips;
}
