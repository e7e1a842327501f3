import type { ColumnRef } from '../../api/plan.ts';
import type { NumberReader } from '../number.ts';
import { numberOf } from '../number.ts';
import { stateWords } from '../states.ts';
import { type HeadingWords, headingWords } from './words.ts';

/** One thing that a file logs: a column, or a name in a file of long shape. */
export interface Series {
  ref: ColumnRef;
  label: string;
  /** The column's number, from 1. */
  number: number;
  words: HeadingWords;
  /** Per group of neighbouring rows the times and the values, NaN where there is none. */
  times: Float64Array[];
  values: Float64Array[];
  facts: Facts;
}

/** What the values of a series are like. */
export interface Facts {
  /** Cells that are not missing. */
  filled: number;
  /** The share of filled cells that are numbers. */
  numeric: number;
  /** The words of the cells that are no numbers, at most 20, in the lower case. */
  texts: Set<string>;
  /** The share of filled cells that are words for a state, or 0 or 1. */
  stateful: number;
  least: number;
  greatest: number;
  negative: number;
  positive: number;
  /** Distinct values, counted up to 50. */
  distinct: number;
  integers: boolean;
  rises: number;
  falls: number;
  /** Falls that look like a counter's wrap or reset: to near zero, or from just below a power. */
  restarts: number;
  levelSteps: number;
  medianRise: number;
  /** The greatest stretch without change between readings, in milliseconds. */
  longestLevel: number;
  /** All rises, at most 5,000. */
  riseList: number[];
  first: number;
  last: number;
  spanMs: number;
}

const states = stateWords([
  'open',
  'closed',
  'opened',
  'close',
  'ouvert',
  'fermé',
  'ferme',
  'auf',
  'zu',
  'offen',
  'geschlossen',
]);

/** Reads the cells of one series and looks at them. `cells` and `times` are per group. */
export function seriesOf(
  ref: ColumnRef,
  label: string,
  number: number,
  unitCell: string,
  times: Float64Array[],
  cells: readonly string[][],
  reader: NumberReader,
): Series {
  const words = headingWords(label, unitCell);
  const texts = new Set<string>();
  const distinct = new Set<number>();
  let filled = 0;
  let numbers = 0;
  let stateful = 0;
  const values = cells.map((group) => {
    const column = new Float64Array(group.length).fill(NaN);
    group.forEach((cell, i) => {
      if (reader.isMissing(cell)) return;
      filled++;
      if (reader.read(cell, words.unit ?? undefined) === 'number') {
        numbers++;
        column[i] = numberOf(reader.mantissa, reader.decimals);
        if (distinct.size < 50) distinct.add(column[i]);
        if (column[i] === 0 || column[i] === 1) stateful++;
      } else {
        const word = cell.trim().toLowerCase();
        if (texts.size < 20) texts.add(word);
        if (states.has(word)) {
          stateful++;
          // A number for each word, to see when it changes.
          column[i] = [...texts].indexOf(word);
        }
      }
    });
    return column;
  });
  const facts: Facts = {
    ...stepFacts(times, values),
    filled,
    texts,
    numeric: filled === 0 ? 0 : numbers / filled,
    stateful: filled === 0 ? 0 : stateful / filled,
    distinct: distinct.size,
  };
  return { ref, label, number, words, times, values, facts };
}

/** The places of a group's readings in order of time: as they stand, turned round, or sorted if they are shuffled. */
function inTime(times: Float64Array, values: Float64Array): number[] {
  const order: number[] = [];
  let ups = 0;
  let downs = 0;
  for (let i = 0; i < times.length; i++) {
    if (times[i] !== times[i] || values[i] !== values[i]) continue;
    const last = order.at(-1);
    if (last !== undefined && times[i] > times[last]) ups++;
    else if (last !== undefined && times[i] < times[last]) downs++;
    order.push(i);
  }
  if (downs > 9 * ups) order.reverse();
  // A clock that is put back runs backwards once, and the rows are in order all the same.
  else if (ups <= 9 * downs) order.sort((a, b) => times[a] - times[b]);
  return order;
}

/** Whether a fall looks like a counter that wraps or starts again. */
function restarts(before: number, after: number): boolean {
  if (before > 0 && after >= 0 && after < before * 0.02) return true;
  const top = 10 ** Math.ceil(Math.log10(Math.max(before, 1)));
  return before > top * 0.97 && after < top * 0.03;
}

function stepFacts(
  times: Float64Array[],
  values: Float64Array[],
): Omit<Facts, 'filled' | 'numeric' | 'texts' | 'stateful' | 'distinct'> {
  const facts = {
    least: Infinity,
    greatest: -Infinity,
    negative: 0,
    positive: 0,
    integers: true,
    rises: 0,
    falls: 0,
    restarts: 0,
    levelSteps: 0,
    medianRise: NaN,
    longestLevel: 0,
    riseList: [] as number[],
    first: NaN,
    last: NaN,
    spanMs: 0,
  };
  const rises: number[] = [];
  let from = Infinity;
  let to = -Infinity;
  let carried = NaN;
  for (let g = 0; g < values.length; g++) {
    const order = inTime(times[g], values[g]);
    let before = NaN;
    let levelFrom = NaN;
    for (const i of order) {
      const value = values[g][i];
      const time = times[g][i];
      if (value < facts.least) facts.least = value;
      if (value > facts.greatest) facts.greatest = value;
      if (value < 0) facts.negative++;
      else if (value > 0) facts.positive++;
      if (facts.integers && value % 1 !== 0) facts.integers = false;
      if (time < from) {
        from = time;
        facts.first = value;
      }
      if (time >= to) {
        to = time;
        facts.last = value;
      }
      // Between groups only falls tell: a counter does not fall there either.
      const last = before === before ? before : carried;
      if (last === last) {
        const step = value - last;
        if (step > 0 && before === before) rises.push(step);
        else if (step < 0) {
          if (restarts(last, value)) facts.restarts++;
          else if (before === before) facts.falls++;
        }
        if (step === 0 && before === before) {
          facts.levelSteps++;
          facts.longestLevel = Math.max(facts.longestLevel, time - levelFrom);
        } else levelFrom = time;
      } else levelFrom = time;
      before = value;
    }
    carried = before;
  }
  facts.rises = rises.length;
  facts.riseList = rises.slice(0, 5000);
  facts.spanMs = to > from ? to - from : 0;
  if (rises.length > 0) facts.medianRise = [...rises].sort((a, b) => a - b)[Math.floor(rises.length / 2)];
  return facts;
}

/** Whether a series counts on without falling, save where a counter wraps or starts again. */
export function isCounter(facts: Facts): 'yes' | 'no' | 'unclear' {
  const { falls, rises, restarts: again, filled, first, medianRise, spanMs, levelSteps } = facts;
  if (falls > Math.max(1, filled * 0.002)) return 'no';
  if (rises === 0) return 'unclear';
  // Amounts fall to nothing every evening; a counter does so at midnight at the most.
  if (again > Math.max(2, (spanMs / 86_400_000) * 1.5)) return 'no';
  if (Math.abs(first) > 20 * medianRise) return 'yes';
  return rises + levelSteps > 30 && rises > 10 && spanMs >= 86_400_000 ? 'yes' : 'unclear';
}
