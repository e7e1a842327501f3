import { MINUTE, type ZoneClock } from './civil.ts';

/** Two digits. */
function two(n: number): string {
  return String(n).padStart(2, '0');
}

/** The parts of a wall clock at an instant. */
function parts(clock: ZoneClock, instant: number) {
  const wall = new Date(clock.wall(instant));
  return {
    year: wall.getUTCFullYear(),
    month: two(wall.getUTCMonth() + 1),
    day: two(wall.getUTCDate()),
    hour: wall.getUTCHours(),
    minute: two(wall.getUTCMinutes()),
    second: two(wall.getUTCSeconds()),
  };
}

/** Ways in which loggers write an instant. */
export const STAMPS = {
  /** 2025-05-05T13:05:00+01:00 */
  isoOffset(clock: ZoneClock, instant: number): string {
    const p = parts(clock, instant);
    const minutes = clock.offset(instant) / MINUTE;
    const size = Math.abs(minutes);
    const offset = `${minutes < 0 ? '-' : '+'}${two(Math.floor(size / 60))}:${two(size % 60)}`;
    return `${p.year}-${p.month}-${p.day}T${two(p.hour)}:${p.minute}:${p.second}${offset}`;
  },
  /** 2025-05-05T12:05:00Z */
  isoUtc(_clock: ZoneClock, instant: number): string {
    return `${new Date(instant).toISOString().slice(0, 19)}Z`;
  },
  /** 2025-05-05 13:05 */
  local(clock: ZoneClock, instant: number): string {
    const p = parts(clock, instant);
    return `${p.year}-${p.month}-${p.day} ${two(p.hour)}:${p.minute}`;
  },
  /** 05.05.2025 13:05 */
  dayFirst(clock: ZoneClock, instant: number): string {
    const p = parts(clock, instant);
    return `${p.day}.${p.month}.${p.year} ${two(p.hour)}:${p.minute}`;
  },
  /** 25/05/2025 1:05 PM */
  twelveHours(clock: ZoneClock, instant: number): string {
    const p = parts(clock, instant);
    return `${p.day}/${p.month}/${p.year} ${p.hour % 12 === 0 ? 12 : p.hour % 12}:${p.minute} ${p.hour < 12 ? 'AM' : 'PM'}`;
  },
  /** 1746446700 */
  epochSeconds(_clock: ZoneClock, instant: number): string {
    return String(Math.round(instant / 1000));
  },
} satisfies Record<string, (clock: ZoneClock, instant: number) => string>;

/** One column of a log: its heading and how its value in row i is written ('' is missing). */
export interface Column {
  heading: string;
  cell(i: number): string;
}

/** A number with so many digits, '' where there is none. */
export function digits(
  values: ArrayLike<number> | undefined,
  count: number,
  times = 1,
  add = 0,
): (i: number) => string {
  return (i) => {
    const value = values?.[i] ?? NaN;
    if (Number.isNaN(value)) return '';
    const text = (value * times + add).toFixed(count);
    return Number(text) === 0 ? (0).toFixed(count) : text;
  };
}

/** A wide table as text: the headings, then a row for each i. A row without any value is left out. */
export function table(
  time: Column,
  columns: Column[],
  rows: number,
  form: { delimiter?: string; decimal?: ',' | '.'; end?: string } = {},
): string {
  const { delimiter = ',', decimal = '.', end = '\n' } = form;
  const lines = [[time, ...columns].map((column) => column.heading).join(delimiter)];
  for (let i = 0; i < rows; i++) {
    const cells = columns.map((column) => column.cell(i));
    if (cells.every((cell) => cell === '')) continue;
    const shown = decimal === ',' ? cells.map((cell) => cell.replace('.', ',')) : cells;
    lines.push([time.cell(i), ...shown].join(delimiter));
  }
  return lines.join(end) + end;
}
