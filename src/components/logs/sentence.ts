import type { Log, LogStatus } from '../../../shared/api/log.ts';

type Told = Pick<Log, 'status' | 'progress' | 'rows' | 'from' | 'to' | 'questions' | 'failure'>;

const count = (n: number): string => n.toLocaleString('en-GB');
/** `1 row`, `2 rows`. */
export function plural(n: number, one: string, many = `${one}s`): string {
  return `${count(n)} ${n === 1 ? one : many}`;
}

/**
 * The span of a log as civil dates in the property's zone.
 * @returns `1 March 2023 to 31 March 2023`, or one date where both fall on it; null where nothing was read
 */
export function spanWords(from: string | null, to: string | null, timeZone: string): string | null {
  if (!from || !to) return null;
  const date = new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'long', year: 'numeric', timeZone });
  const first = date.format(new Date(from));
  const last = date.format(new Date(to));
  return first === last ? first : `${first} to ${last}`;
}

const SENTENCES: Record<LogStatus, (log: Told, timeZone: string) => string> = {
  waiting: () => 'Waiting its turn to be read. You can leave this page; it carries on.',
  reading: (log) => `Being read: ${Math.floor(log.progress * 100)} % done. You can leave this page; it carries on.`,
  asking: (log) =>
    log.questions.length > 0
      ? `${plural(log.questions.length, 'question')} to answer before it can be read. Nothing of it counts yet.`
      : 'Its columns need your word before it can be read. Nothing of it counts yet.',
  refused: (log) => `Not taken. ${log.failure ?? 'It could not be read as a log.'}`,
  failed: (log) =>
    `Reading stopped. ${log.failure ?? 'Something went wrong on our side.'} The original is kept: read it again.`,
  withdrawn: () => 'Withdrawn: no figure uses it. Bring the same file again to take it back.',
  kept: (log, timeZone) => {
    const span = spanWords(log.from, log.to, timeZone);
    const rows = `${plural(log.rows.accepted, 'row')} of ${count(log.rows.read)} taken${span ? `, ${span}` : ''}.`;
    const rest = [
      log.rows.rejected > 0 ? `${count(log.rows.rejected)} rejected` : '',
      log.rows.unchanged > 0 ? `${count(log.rows.unchanged)} repeated what was there` : '',
    ].filter(Boolean);
    return rest.length > 0 ? `${rows} ${rest.join(', ')}.` : rows;
  },
};

/** Where a log stands, in a sentence: the fact, the consequence, what to do. */
export function logSentence(log: Told, timeZone: string): string {
  return SENTENCES[log.status](log, timeZone);
}

/** `12.4 MB`, in powers of ten. */
export function sizeWords(bytes: number): string {
  if (bytes < 1000) return plural(bytes, 'byte');
  const units = ['kB', 'MB', 'GB'];
  let value = bytes / 1000;
  let at = 0;
  while (value >= 999.5 && at < units.length - 1) {
    value /= 1000;
    at += 1;
  }
  return `${value < 10 ? value.toFixed(1) : Math.round(value)} ${units[at]}`;
}
