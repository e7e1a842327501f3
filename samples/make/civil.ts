export const MINUTE = 60_000;
export const HOUR = 3_600_000;
export const DAY = 86_400_000;

/** Days since 1970-01-01 of a civil date YYYY-MM-DD. */
export function dayNumber(date: string): number {
  const ms = Date.parse(`${date}T00:00:00Z`);
  if (Number.isNaN(ms)) throw new RangeError(`not a civil date: ${date}`);
  return Math.round(ms / DAY);
}

/** The civil date of a day number. */
export function civilDate(day: number): string {
  return new Date(day * DAY).toISOString().slice(0, 10);
}

/** Day of the week of a day number, 0 = Sunday. */
export function weekday(day: number): number {
  return (((day + 4) % 7) + 7) % 7;
}

/** A time of day "HH:MM" in minutes. */
export function clockMinutes(time: string): number {
  const [hours, minutes] = time.split(':').map(Number);
  return hours * 60 + minutes;
}

/** The clock of one zone. Offsets come from the platform's zone data, one look-up per hour at most. */
export class ZoneClock {
  private readonly parts: Intl.DateTimeFormat;
  private readonly offsets = new Map<number, number>();

  constructor(readonly timeZone: string) {
    this.parts = new Intl.DateTimeFormat('en-GB', {
      timeZone,
      hourCycle: 'h23',
      year: 'numeric',
      month: '2-digit',
      day: '2-digit',
      hour: '2-digit',
      minute: '2-digit',
      second: '2-digit',
    });
  }

  /** Offset from UTC in milliseconds at an instant, east positive. Zones change on a whole quarter of an hour. */
  offset(instant: number): number {
    const quarter = Math.floor(instant / (15 * MINUTE));
    const known = this.offsets.get(quarter);
    if (known !== undefined) return known;
    const at = quarter * 15 * MINUTE;
    const p: Record<string, number> = {};
    for (const part of this.parts.formatToParts(at)) p[part.type] = Number(part.value);
    const offset = Date.UTC(p.year, p.month - 1, p.day, p.hour, p.minute, p.second) - at;
    this.offsets.set(quarter, offset);
    return offset;
  }

  /** The instant at which a civil day begins. */
  startOfDay(day: number): number {
    const wall = day * DAY;
    let instant = wall - this.offset(wall);
    instant = wall - this.offset(instant);
    return instant;
  }

  /** The civil day number of an instant. */
  dayOf(instant: number): number {
    return Math.floor((instant + this.offset(instant)) / DAY);
  }

  /** The wall clock of an instant, as milliseconds since 1970 read as if it were UTC. */
  wall(instant: number): number {
    return instant + this.offset(instant);
  }
}
