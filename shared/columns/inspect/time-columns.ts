import type { SampleRow } from './sample.ts';
import { paceOf, type Pace, type TimeReading, timeReadings } from './times.ts';
import { type HeadingWords } from './words.ts';

/** A way to read the times of a file. */
export interface TimeChoice {
  columns: number[];
  format: string;
  /** Per row of the sample, in the order given; NaN where the row has no such time. */
  times: Float64Array;
  zoned: boolean;
  /** Only dates: a row is a day. */
  days: boolean;
  epoch: boolean;
  pace: Pace;
  reason: string;
  /** Other formats that read the same cells as well, such as month before day. */
  rivals: { format: string; pace: Pace }[];
}

/** Cuts times of all rows into the groups of neighbours that they are of. */
export function inGroups(times: Float64Array, lengths: readonly number[]): Float64Array[] {
  const groups: Float64Array[] = [];
  let at = 0;
  for (const length of lengths) {
    groups.push(times.subarray(at, at + length));
    at += length;
  }
  return groups;
}

interface Candidate extends TimeChoice {
  score: number;
}

/** A reading wanders much less than another if the days that follow each other by it are days in a row. */
const clearlyBetter = (a: Pace, b: Pace): boolean =>
  b.wander > a.wander * 1.5 + 0.5 || b.step > a.step * 20 || (a.filled > b.filled * 3 && a.filled > 0.1);

/** Takes the readings of one column apart: the best, and those that read as well. */
function bestOf(
  readings: readonly TimeReading[],
  lengths: readonly number[],
): { best: TimeReading; pace: Pace; rivals: { format: string; pace: Pace; times: Float64Array }[] } | null {
  const fit = readings.filter(({ share }) => share >= 0.8 && share >= readings[0].share - 0.005);
  if (fit.length === 0) return null;
  const paced = fit.map((reading) => ({ reading, pace: paceOf(inGroups(reading.times, lengths)) }));
  paced.sort((a, b) => (clearlyBetter(a.pace, b.pace) ? -1 : clearlyBetter(b.pace, a.pace) ? 1 : 0));
  const [first, ...others] = paced;
  return {
    best: first.reading,
    pace: first.pace,
    rivals: others
      .filter(({ pace, reading }) => !clearlyBetter(first.pace, pace) && !sameTimes(reading.times, first.reading.times))
      .map(({ reading, pace }) => ({ format: reading.format, pace, times: reading.times })),
  };
}

function sameTimes(a: Float64Array, b: Float64Array): boolean {
  return a.every((time, i) => Object.is(time, b[i]));
}

/** The readings of every column as times, tried once. */
export function timeColumns(rows: readonly SampleRow[], width: number, decimal: string): TimeReading[][] {
  return Array.from({ length: width }, (_, c) =>
    timeReadings(
      rows.map(({ cells }) => cells[c] ?? ''),
      decimal,
    ),
  );
}

/**
 * The columns that hold the rows' times.
 * @param readings of every column, see `timeColumns`
 * @param headings what the headings say
 * @param lengths how many of the rows are neighbours, group by group
 * @returns the best choice and the others that would do; empty if the file has no times
 */
export function chooseTime(
  readings: readonly TimeReading[][],
  headings: readonly HeadingWords[],
  lengths: readonly number[],
): TimeChoice[] {
  const candidates: Candidate[] = [];
  const has = (c: number, concept: Parameters<HeadingWords['has']>[0]): boolean => headings[c]?.has(concept) ?? false;
  const said = (c: number): boolean =>
    has(c, 'time') || has(c, 'start') || has(c, 'end') || has(c, 'utc') || has(c, 'local');
  const score = (columns: number[], pace: Pace, zoned: boolean): number => {
    let sum = pace.way !== 0 ? 2 : 0;
    sum += Math.min(pace.regular, 1) * 2;
    if (zoned) sum += 0.5;
    const [c] = columns;
    if (has(c, 'utc')) sum += 0.6;
    if (said(c)) sum += 0.5;
    // Of a start and an end the start is taken.
    if (has(c, 'end') && !has(c, 'start')) sum -= 0.3;
    return sum - c * 0.01;
  };
  readings.forEach((column, c) => {
    const found = bestOf(
      column.filter(({ part }) => part !== 'time'),
      lengths,
    );
    if (!found) return;
    const { best, pace, rivals } = found;
    if (best.likeNumbers) {
      // Numbers are taken for times only if they run as times do, or are called so.
      // Dates of eight digits, day after day, are no accident, also where several channels repeat them.
      const daily = best.format.startsWith('yyyyMMdd') && pace.regular > 0.5 && best.share > 0.95;
      const runs = (pace.way !== 0 && pace.wander < 1.01 && pace.distinct > 2) || daily;
      const named = headings.length === 0 ? c === 0 : said(c);
      if (!(runs && (named || best.format.startsWith('epoch') || best.format.startsWith('yyyyMMdd')))) return;
      if (best.format === 'excelSerial' && !named) return;
    }
    if (best.part === 'date') {
      readings.forEach((other, t) => {
        const clock = other.find(({ part, share }) => part === 'time' && share >= 0.8);
        if (!clock) return;
        const join = (dates: Float64Array): Float64Array => dates.map((date, i) => date + clock.times[i]);
        const times = join(best.times);
        const joined = paceOf(inGroups(times, lengths));
        const format =
          best.format === 'iso' && /^HH:mm(:ss)?$/.test(clock.format)
            ? 'iso'
            : `${best.format === 'iso' ? 'yyyy-MM-dd' : best.format} ${clock.format}`;
        candidates.push({
          columns: [c, t],
          format,
          times,
          zoned: false,
          days: false,
          epoch: false,
          pace: joined,
          reason: 'a column of dates and one of times of day',
          rivals: rivals
            .map((rival) => ({
              format: `${rival.format} ${clock.format}`,
              pace: paceOf(inGroups(join(rival.times), lengths)),
            }))
            .filter((rival) => !clearlyBetter(joined, rival.pace)),
          score: score([c], joined, false) + (t === c + 1 ? 0.3 : 0) + 1,
        });
      });
    }
    candidates.push({
      columns: [c],
      format: best.format,
      times: best.times,
      zoned: best.zoned,
      days: best.part === 'date',
      epoch: best.format.startsWith('epoch'),
      pace,
      reason: pace.regular > 0.5 ? 'its times follow each other evenly' : 'it holds times',
      rivals: rivals.map(({ format, pace: other }) => ({ format, pace: other })),
      score: score([c], pace, best.zoned) - (best.part === 'date' ? 0.5 : 0),
    });
  });
  return candidates.sort((a, b) => b.score - a.score);
}
