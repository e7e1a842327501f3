import { DAY_MS } from '../time/civil.ts';
import type { Zone } from '../time/zone.ts';

const HOUR_MS = 3_600_000;
/** So many rows of one repeated hour are kept to see their order; beyond, they are placed as they come. */
const MAX_HELD = 100_000;

/** A row whose local time comes twice, kept until the rows around it say which time is meant. */
interface HeldRow {
  local: number;
  mantissas: Float64Array;
  decimals: Int8Array;
  /** What is logged: rows of one key are compared with each other. */
  key: number;
}

/** The part of local time that a change repeats: `from` to `to`, with the two offsets in milliseconds. */
interface Repeated {
  from: number;
  to: number;
  before: number;
  after: number;
}

export type Place = (utcMs: number, mantissas: Float64Array, decimals: Int8Array) => void;

/**
 * Turns local times to instants. On a day without a change that is the day's offset; the two passes of a repeated hour
 * are told apart by the order of rows: rows of that hour are held until the hour is left.
 */
export class LocalClock {
  /** Rows of a repeated hour that was recorded once, so that its pass is assumed to be the first. */
  assumed = 0;
  /** Rows of a repeated hour whose order did not tell the pass either. */
  unclear = 0;

  private day = NaN;
  private offset = NaN;
  private held: HeldRow[] = [];
  private hour: Repeated | null = null;
  /** The local time of the last row placed; the fast path keeps it up to date where it places rows itself. */
  lastLocal = NaN;
  private beforeHeld = NaN;
  /** What single runs have said of each local time, by key, so that a shuffled file finds its second pass. */
  private readonly told = new Map<string, HeldRow[]>();

  /**
   * @param zone the clock's zone
   * @param place takes each row with its instant
   * @param endStamped stamps are the ends of intervals, so that the end of the first pass may be written too
   */
  constructor(
    private readonly zone: Zone,
    private readonly place: Place,
    private readonly endStamped: boolean,
  ) {}

  /** The offset of a local time's day if it is the same all day and the days around, else NaN. */
  dayOffset(local: number): number {
    const day = Math.floor(local / DAY_MS);
    if (day !== this.day) {
      this.day = day;
      const from = day * DAY_MS;
      const span = this.zone.spanAt(from - 15 * HOUR_MS);
      let until = span.to;
      // A long span may come in pieces of one offset.
      while (until <= from + DAY_MS + 13 * HOUR_MS && this.zone.spanAt(until).offset === span.offset)
        until = this.zone.spanAt(until).to;
      this.offset = until > from + DAY_MS + 13 * HOUR_MS ? span.offset : NaN;
    }
    return this.offset;
  }

  /** Whether rows of a repeated hour wait for their order. */
  get holding(): boolean {
    return this.held.length > 0;
  }

  /**
   * Takes a row by its local time.
   * @returns false if the clock never showed that time
   */
  add(local: number, mantissas: Float64Array, decimals: Int8Array, key: number): boolean {
    const offset = this.dayOffset(local);
    if (offset === offset) {
      if (this.held.length > 0) this.release(local);
      this.lastLocal = local;
      this.place(local - offset, mantissas, decimals);
      return true;
    }
    const hour = this.repeatedAt(local);
    if (hour) {
      if (this.held.length > 0 && (this.hour?.from !== hour.from || this.held.length >= MAX_HELD)) this.release(local);
      if (this.held.length === 0) {
        this.beforeHeld = this.lastLocal;
        this.hour = hour;
      }
      this.held.push({ local, mantissas: mantissas.slice(), decimals: decimals.slice(), key });
      this.lastLocal = local;
      return true;
    }
    const candidates = this.zone.localToUtc(local);
    if (candidates.length === 0) return false;
    if (this.held.length > 0) this.release(local);
    this.lastLocal = local;
    this.place(candidates[0], mantissas, decimals);
    return true;
  }

  /** Says that no row follows. */
  end(): void {
    if (this.held.length > 0) this.release(NaN);
  }

  /** The repeated hour that a local time lies in, if any. */
  private repeatedAt(local: number): Repeated | null {
    const [first, second] = this.zone.localToUtc(local);
    if (second !== undefined) {
      const before = local - first;
      const after = local - second;
      const change = this.zone.spanAt(second).from;
      return { from: change + after, to: change + before, before, after };
    }
    if (this.endStamped && first !== undefined) {
      const span = this.zone.spanAt(first);
      const earlier = this.zone.spanAt(span.from - 1).offset;
      if (earlier > span.offset && local === span.from + earlier)
        return { from: span.from + span.offset, to: local, before: earlier, after: span.offset };
    }
    return null;
  }

  private release(nextLocal: number): void {
    const hour = this.hour as Repeated;
    const rows = this.held;
    this.held = [];
    if (this.newestFirst(rows, nextLocal)) rows.reverse();
    const second = this.secondPass(rows);
    rows.forEach((row, i) => {
      let after = second !== null && i >= second;
      if (second === null) {
        const id = `${row.key} ${row.local}`;
        const before = this.told.get(id) ?? [];
        const repeat = before.findIndex((other) =>
          row.mantissas.every((value, c) => Object.is(value, other.mantissas[c])),
        );
        if (row.local === hour.to) after = true;
        else if (repeat >= 0) after = repeat % 2 === 1;
        else if (before.length > 0) {
          this.unclear++;
          after = before.length % 2 === 1;
        } else this.assumed++;
        if (repeat < 0) this.told.set(id, [...before, row]);
      }
      this.place(row.local - (after ? hour.after : hour.before), row.mantissas, row.decimals);
    });
  }

  private newestFirst(rows: readonly HeldRow[], nextLocal: number): boolean {
    const { from } = this.hour as Repeated;
    // What stands before and after the hour says the way; where they do not agree, the rows inside do.
    const before = this.beforeHeld === this.beforeHeld ? Math.sign(this.beforeHeld - from) || -1 : 0;
    const after = nextLocal === nextLocal ? (nextLocal < from ? 1 : -1) : 0;
    if (before + after !== 0) return before + after > 0;
    let downs = 0;
    for (let i = 1; i < rows.length; i++) downs += Math.sign(rows[i - 1].local - rows[i].local);
    return downs > 0;
  }

  /** The index, in order of time, at which the second pass begins; null if the rows do not show it. */
  private secondPass(rows: readonly HeldRow[]): number | null {
    let drop = 0;
    let at: number | null = null;
    const last = new Map<number, number>();
    let equal: number | null = null;
    rows.forEach((row, i) => {
      const before = last.get(row.key);
      if (before !== undefined) {
        if (before - row.local > drop) {
          drop = before - row.local;
          at = i;
        } else if (before === row.local && equal === null) equal = i;
      }
      last.set(row.key, row.local);
    });
    if (at !== null) return at;
    // A row an hour: its two passes bear the same time.
    const locals = new Set(rows.map((row) => row.local));
    const { to } = this.hour as Repeated;
    locals.delete(to);
    return locals.size <= 1 ? equal : null;
  }
}
