import { getTimes } from 'suncalc';
import { DAY_MS } from '../../time/civil.ts';
import { type Zone, zoneOf } from '../../time/zone.ts';

const HOUR_MS = 3_600_000;

/** A zone that the file's clock may have kept. */
export interface ClockGuess {
  zone: string;
  reason: string;
}

export interface ClockVerdict {
  zone: string;
  confidence: number;
  reason: string;
  /** Set where it must be asked. */
  choices: ClockGuess[];
}

/** Local times of rows in the order of the file, in groups of neighbours, and what shines in them. */
export interface ClockEvidence {
  groups: readonly Float64Array[];
  /** Values of generation per group, or of another channel that the sun alone can raise; null if there is none. */
  light: readonly Float64Array[] | null;
  /** Whether `light` is generation, whose hours lie evenly about noon. */
  generation: boolean;
  step: number;
  /** What the changes say, where rows of whole days were counted instead of looked at. */
  told?: { yes: number; no: number; once: number };
}

export interface Place {
  timeZone: string;
  latitude: number | null;
  longitude: number | null;
}

const offsetName = (ms: number): string => {
  if (ms === 0) return 'UTC';
  const minutes = Math.abs(ms) / 60_000;
  const two = (n: number): string => String(Math.floor(n)).padStart(2, '0');
  return `${ms < 0 ? '-' : '+'}${two(minutes / 60)}:${two(minutes % 60)}`;
};

/** The changes of a zone within a span of local time. */
function changesWithin(zone: Zone, from: number, to: number): { at: number; before: number; after: number }[] {
  const changes = [];
  let span = zone.spanAt(from - DAY_MS);
  while (span.to < to + DAY_MS) {
    const next = zone.spanAt(span.to);
    if (next.offset !== span.offset) changes.push({ at: span.to, before: span.offset, after: next.offset });
    span = next;
  }
  return changes;
}

/**
 * What the rows around a zone's changes say: whether the clock followed them, and how often the hour that comes twice
 * stands there once, which a clock that does not follow writes, and a logger that keeps one row for each time too.
 */
function followed(
  zone: Zone,
  evidence: ClockEvidence,
  from: number,
  to: number,
): { yes: number; no: number; once: number } {
  let yes = 0;
  let no = 0;
  let once = 0;
  const { groups, step } = evidence;
  if (!(step > 0 && step <= HOUR_MS)) return { yes, no, once };
  for (const { at, before, after } of changesWithin(zone, from, to)) {
    const low = at + Math.min(before, after);
    const high = at + Math.max(before, after);
    for (const times of groups) {
      let inside = 0;
      let below = 0;
      let above = 0;
      let back = 0;
      const seen = new Set<number>();
      let last = NaN;
      for (const time of times) {
        if (time !== time) continue;
        if (time >= low && time < high) {
          inside++;
          if (seen.has(time) && time !== last) back++;
          seen.add(time);
        } else if (time >= low - 3 * step && time < low) below++;
        else if (time >= high && time <= high + 3 * step) above++;
        last = time;
      }
      const expected = Math.max(1, Math.round((high - low) / step));
      if (after > before) {
        // Forward: the hour is left out by a clock that follows.
        if (inside >= Math.max(1, expected / 2)) no++;
        else if (inside === 0 && below >= 2 && above >= 2) yes++;
      } else if (back >= Math.max(1, expected / 2) || inside >= 1.5 * expected) yes++;
      else if (inside >= expected / 2 && below >= 2 && above >= 2) once++;
    }
  }
  return { yes, no, once };
}

/**
 * What rows of whole days say of the changes: as many values as the day has hours, or as every day.
 * @param days midnights of the rows, local
 * @param filled per row the number of values, gaps at its end left off
 * @param gaps whether the row has no values where the clock leaves an hour out
 */
export function followedAcross(
  timeZone: string,
  days: readonly number[],
  filled: readonly number[],
  gaps: readonly boolean[],
  perDay: number,
): { yes: number; no: number; once: number } {
  const zone = zoneOf(timeZone);
  const told = { yes: 0, no: 0, once: 0 };
  days.forEach((day, i) => {
    const { hours } = zone.dayBounds(new Date(day).toISOString().slice(0, 10));
    if (hours === 24) return;
    const passed = Math.round((hours * perDay) / 24);
    if (hours < 24) {
      if (filled[i] === passed || gaps[i]) told.yes++;
      else if (filled[i] > passed) told.no++;
    } else if (filled[i] === passed) told.yes++;
    else if (filled[i] === perDay) told.once++;
  });
  return told;
}

/** How a clock fits the sun: whether the light came by day, and how far its middle lies from noon, in minutes. */
function inLight(
  zone: Zone,
  evidence: ClockEvidence,
  place: Place,
): { nights: number; days: number; aside: number } | null {
  const { latitude, longitude } = place;
  if (evidence.light === null || latitude === null || longitude === null) return null;
  const spans = new Map<number, { first: number; last: number }>();
  let peak = 0;
  for (const values of evidence.light) for (const value of values) if (value > peak) peak = value;
  if (peak === 0) return null;
  evidence.groups.forEach((times, g) => {
    const values = (evidence.light as Float64Array[])[g];
    times.forEach((local, i) => {
      if (local !== local || !(values[i] > peak * 0.01)) return;
      const [utc] = zone.localToUtc(local);
      if (utc === undefined) return;
      const day = Math.floor((utc + (longitude / 15) * HOUR_MS) / DAY_MS);
      const span = spans.get(day) ?? { first: utc, last: utc };
      spans.set(day, { first: Math.min(span.first, utc), last: Math.max(span.last, utc) });
    });
  });
  let nights = 0;
  let days = 0;
  const asides: number[] = [];
  const slack = 20 * 60_000;
  for (const [day, { first, last }] of spans) {
    const noon = day * DAY_MS + DAY_MS / 2 - (longitude / 15) * HOUR_MS;
    const { sunrise, sunset, solarNoon } = getTimes(new Date(noon), latitude, longitude);
    if (!sunrise || !sunset) continue;
    days++;
    if (first < sunrise.getTime() - slack || last > sunset.getTime() + slack + evidence.step) nights++;
    if (last - first > 4 * HOUR_MS) asides.push(((first + last) / 2 - solarNoon.getTime()) / 60_000);
  }
  if (days === 0) return null;
  asides.sort((a, b) => a - b);
  return { nights, days, aside: asides.length > 0 ? asides[Math.floor(asides.length / 2)] : NaN };
}

/**
 * The zone of a file whose stamps name none: told by the changes of its clock or by the sun, asked where neither tells.
 */
export function clockOf(evidence: ClockEvidence, place: Place): ClockVerdict {
  const zone = zoneOf(place.timeZone);
  let from = Infinity;
  let to = -Infinity;
  for (const times of evidence.groups) {
    for (const time of times) {
      if (time < from) from = time;
      if (time > to) to = time;
    }
  }
  const own = {
    zone: place.timeZone,
    reason: `${place.timeZone}, the property's zone: its clocks as people there see them.`,
  };
  const sure = (name: string, confidence: number, reason: string): ClockVerdict => ({
    zone: name,
    confidence,
    reason,
    choices: [],
  });
  if (!(from <= to)) return sure(place.timeZone, 0.5, own.reason);
  const offsets = new Set<number>();
  for (let at = from; at < to + 28 * DAY_MS; at += 28 * DAY_MS) offsets.add(zone.offsetAt(Math.min(at, to)));
  const year: number[] = [];
  for (let week = -26; week <= 26; week++) year.push(zone.offsetAt(from + week * 7 * DAY_MS));
  const standard = Math.min(...year);
  const changes = Math.max(...year) !== standard;
  const fixed = offsetName(standard);
  const { yes, no, once } = evidence.told ?? followed(zone, evidence, from, to);
  const candidates: ClockGuess[] = [own];
  const differs = [...offsets].some((offset) => offset !== standard);
  if (changes && (differs || once > 0))
    candidates.push({ zone: fixed, reason: `${fixed} all year: a clock that is never put forward in spring.` });
  if (![...offsets].every((offset) => offset === 0) && fixed !== 'UTC')
    candidates.push({ zone: 'UTC', reason: 'UTC, whatever the clocks at the property show.' });

  if (yes > 0 && no === 0 && once === 0)
    return sure(place.timeZone, 0.98, `The rows follow the clock changes of ${place.timeZone}.`);
  let left = candidates;
  if (no > 0) left = candidates.filter((guess) => guess.zone !== place.timeZone);
  if (left.length === 0) left = candidates;

  const lights = left.map((guess) => ({ guess, light: inLight(zoneOf(guess.zone), evidence, place) }));
  const lit = lights.filter(({ light }) => light !== null && light.nights <= light.days * 0.1);
  const dark = lights.filter(({ light }) => light !== null && light.nights > light.days * 0.1);
  if (lit.length === 1 && dark.length > 0)
    return sure(
      lit[0].guess.zone,
      0.9,
      `In ${lit[0].guess.zone} the sun's power comes by day; in ${dark.map(({ guess }) => guess.zone).join(' and ')} it would come at night.`,
    );
  const middled = lit.filter(({ light }) => light !== null && light.days >= 3 && light.aside === light.aside);
  if (evidence.generation && middled.length > 1 && middled.length === lit.length) {
    middled.sort((a, b) => Math.abs(a.light?.aside ?? 0) - Math.abs(b.light?.aside ?? 0));
    const [best, next] = middled.map(({ light }) => Math.abs(light?.aside ?? 0));
    if (best <= 20 && next >= 40)
      return sure(
        middled[0].guess.zone,
        0.8,
        `In ${middled[0].guess.zone} the middle of generation lies within ${Math.round(best)} minutes of the sun's noon.`,
      );
  }
  const open = lit.length > 0 ? lit.map(({ guess }) => guess) : left;
  if (open.length === 1)
    return sure(
      open[0].zone,
      no > 0 ? 0.85 : 0.8,
      no > 0 ? `The rows do not follow the clock changes of ${place.timeZone}: ${open[0].reason}` : own.reason,
    );
  // With no change of clocks in sight and none in force, the property's own time is what a logger there shows.
  if (no === 0 && once === 0 && !differs) return sure(place.timeZone, 0.8, own.reason);
  return { zone: open[0].zone, confidence: 0.5, reason: open[0].reason, choices: open };
}
