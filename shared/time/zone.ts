import { civilDay, civilOfDay, DAY_MS } from './civil.ts';

export { addDays, civilRange, civilDay, civilOfDay, DAY_MS, daysBetween, isCivil } from './civil.ts';

const HOUR_MS = 3_600_000;
/** Offsets lie within -12 h and +14 h; an hour to spare on both sides. */
const LEAST_OFFSET = -13 * HOUR_MS;
const GREATEST_OFFSET = 15 * HOUR_MS;

/** A span of time, end excluded, in which a zone keeps one offset. */
export interface OffsetSpan {
  from: number;
  to: number;
  /** Milliseconds east of UTC. */
  offset: number;
}

/** A civil day as instants: `end` is the start of the next day, excluded. */
export interface DayBounds {
  start: number;
  end: number;
  hours: number;
}

export interface Zone {
  name: string;
  /** Milliseconds east of UTC at an instant. */
  offsetAt(utcMs: number): number;
  /** The span of one offset that holds the instant; long spans may come in pieces. */
  spanAt(utcMs: number): OffsetSpan;
  /**
   * The instants at which the zone's clocks show a civil time: none in the hour that a change leaves out, two in the
   * hour that it repeats, else one. Earliest first.
   * @param localMs the civil time, as milliseconds since 1970-01-01T00:00 on the same clock
   */
  localToUtc(localMs: number): number[];
  /** The first instant of a civil date `YYYY-MM-DD`, also where its midnight is left out. */
  dayStart(civil: string): number;
  dayBounds(civil: string): DayBounds;
  /** The civil date, `YYYY-MM-DD`, whose bounds hold the instant. */
  civilOf(utcMs: number): string;
}

const FIXED = /^(?:UTC|GMT)?([+-])(\d{1,2}):?(\d{2})?$/i;

/** Milliseconds east of UTC of `UTC`, `Z` or `±hh:mm`; `null` for any other name. */
export function fixedOffset(name: string): number | null {
  if (/^(utc|z|gmt|etc\/utc)$/i.test(name)) return 0;
  const match = FIXED.exec(name);
  if (!match) return null;
  const minutes = Number(match[2]) * 60 + Number(match[3] ?? 0);
  if (minutes > 15 * 60 || Number(match[3] ?? 0) > 59) return null;
  return (match[1] === '-' ? -minutes : minutes) * 60_000 || 0;
}

/** Spans of time for which a zone's changes are found together: 64 weeks. */
const BLOCK_MS = 64 * 7 * DAY_MS;
/** No zone changes its offset there and back within so short a time. */
const STEP_MS = 7 * DAY_MS;

/** The offset as Intl gives it, by the difference of the shown civil time from UTC. */
function intlOffset(name: string): (utcMs: number) => number {
  const format = new Intl.DateTimeFormat('en-US', {
    timeZone: name,
    hourCycle: 'h23',
    year: 'numeric',
    month: 'numeric',
    day: 'numeric',
    hour: 'numeric',
    minute: 'numeric',
    second: 'numeric',
    era: 'short',
  });
  return (utcMs) => {
    const part: Record<string, string> = {};
    for (const { type, value } of format.formatToParts(utcMs)) part[type] = value;
    const year = part.era === 'BC' ? 1 - Number(part.year) : Number(part.year);
    const days = new Date(0).setUTCFullYear(year, Number(part.month) - 1, Number(part.day));
    const shown = days + ((Number(part.hour) * 60 + Number(part.minute)) * 60 + Number(part.second)) * 1000;
    return shown - Math.floor(utcMs / 1000) * 1000;
  };
}

/** The spans of one block, changes found by bisection to the second. */
function spansOf(block: number, offset: (utcMs: number) => number): OffsetSpan[] {
  const start = block * BLOCK_MS;
  const spans: OffsetSpan[] = [{ from: start, to: start + BLOCK_MS, offset: offset(start) }];
  for (let at = start; at < start + BLOCK_MS; at += STEP_MS) {
    const next = at + STEP_MS;
    const last = spans[spans.length - 1];
    const after = offset(next);
    if (after === last.offset) continue;
    let low = at;
    let high = next;
    while (high - low > 1000) {
      const middle = Math.floor((low + high) / 2000) * 1000;
      if (offset(middle) === last.offset) low = middle;
      else high = middle;
    }
    if (high >= start + BLOCK_MS) break;
    last.to = high;
    spans.push({ from: high, to: start + BLOCK_MS, offset: offset(high) });
  }
  return spans;
}

function build(name: string, spanAt: (utcMs: number) => OffsetSpan): Zone {
  const localToUtc = (localMs: number): number[] => {
    const found: number[] = [];
    const end = localMs - LEAST_OFFSET;
    for (let span = spanAt(localMs - GREATEST_OFFSET); span.from <= end; span = spanAt(span.to)) {
      const utc = localMs - span.offset;
      if (utc >= span.from && utc < span.to) found.push(utc);
      if (span.to > end) break;
    }
    return found;
  };
  const startOfDay = (day: number): number => {
    const midnight = day * DAY_MS;
    const [first] = localToUtc(midnight);
    if (first !== undefined) return first;
    // The midnight is left out: the day begins with the change that jumps over it.
    let span = spanAt(midnight - GREATEST_OFFSET);
    while (span.from + span.offset <= midnight) span = spanAt(span.to);
    return span.from;
  };
  const dayBounds = (civil: string): DayBounds => {
    const day = civilDay(civil);
    const start = startOfDay(day);
    const end = startOfDay(day + 1);
    return { start, end, hours: (end - start) / HOUR_MS };
  };
  return {
    name,
    spanAt,
    localToUtc,
    dayBounds,
    offsetAt: (utcMs) => spanAt(utcMs).offset,
    dayStart: (civil) => startOfDay(civilDay(civil)),
    civilOf(utcMs) {
      const span = spanAt(utcMs);
      const local = utcMs + span.offset;
      const day = Math.floor(local / DAY_MS);
      // Where clocks go back over midnight, the first midnight begins the day and it is not left again.
      const soonAfterChange = utcMs - span.from < DAY_MS;
      return civilOfDay(soonAfterChange && utcMs >= startOfDay(day + 1) ? day + 1 : day);
    },
  };
}

const zones = new Map<string, Zone>();

/**
 * A time zone with its offset changes, found once by bisection over Intl and kept.
 * @param name an IANA name, `UTC` or `±hh:mm`
 * @throws RangeError if there is no such zone
 */
export function zoneOf(name: string): Zone {
  const known = zones.get(name);
  if (known) return known;
  const fixed = fixedOffset(name);
  let zone: Zone;
  if (fixed !== null) {
    const always: OffsetSpan = { from: -Infinity, to: Infinity, offset: fixed };
    zone = build(name, () => always);
  } else {
    let offset: (utcMs: number) => number;
    try {
      offset = intlOffset(name);
    } catch {
      throw new RangeError(`There is no time zone named "${name}".`);
    }
    const blocks = new Map<number, OffsetSpan[]>();
    let last: OffsetSpan = { from: 0, to: 0, offset: 0 };
    zone = build(name, (utcMs) => {
      if (utcMs >= last.from && utcMs < last.to) return last;
      const number = Math.floor(utcMs / BLOCK_MS);
      let block = blocks.get(number);
      if (!block) blocks.set(number, (block = spansOf(number, offset)));
      last = block.find((span) => utcMs < span.to) ?? block[block.length - 1];
      return last;
    });
  }
  zones.set(name, zone);
  return zone;
}

/** Whether `zoneOf` knows the name. */
export function isZone(name: string): boolean {
  try {
    zoneOf(name);
    return true;
  } catch {
    return false;
  }
}
