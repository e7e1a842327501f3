import type { Day, Totals } from '../../shared/api/day.ts';
import { counted, percent, said } from './format.ts';

/** The span that a sentence speaks of, as a word: "this week", "the week", "November 2026". */
export interface Period {
  /** "this week’s", "the week’s", "November’s" */
  possessive: string;
  /** "this week", "in week 26", "in November 2026" */
  when: string;
  /** It is still going on. */
  running?: boolean;
}

/** Whether anything at all was logged on a day. */
export function hasLogs(day: Day): boolean {
  return Object.values(day.coverage).some((share) => share > 0) || Object.keys(day.spreadKwh).length > 0;
}

const known = (days: readonly Day[], figure: 'divertedKwh' | 'solarFraction'): number =>
  days.filter((day) => day[figure] !== null).length;

/**
 * What a stretch of days shows, in one sentence. It claims a share only where the totals know it, and says how many
 * days it rests on where that is not all of them. A stretch that is still going on is given up to its last logged day.
 */
export function sunSentence(totals: Totals, days: readonly Day[], period: Period): string {
  const logged = days.filter(hasLogs).length;
  const when = period.running ? `${period.when} so far` : period.when;
  if (logged === 0) return `No logs ${when}`;
  const { solarFraction, divertedKwh, exportKwh } = totals;
  if (solarFraction !== null) {
    const sure = known(days, 'solarFraction');
    const claim = `The sun made ${percent(solarFraction)} of ${period.possessive} hot water${period.running ? ' so far' : ''}`;
    return sure === days.length ? claim : `${claim}, as far as ${sure} of ${counted(days.length, 'day')} tell`;
  }
  if (divertedKwh !== null) {
    const sure = known(days, 'divertedKwh');
    const all = sure === days.length && logged === days.length;
    const rest = all ? '' : `, with logs for ${sure} of ${counted(days.length, 'day')}`;
    if (divertedKwh < 0.005) return `No sun went into the cylinder ${when}${rest}`;
    return `The sun put ${all ? '' : 'at least '}${said('divertedKwh', divertedKwh, null)} into the cylinder ${when}${rest}`;
  }
  if (exportKwh !== null)
    return `${said('exportKwh', exportKwh, null)} went to the grid ${when}; what went into the cylinder is not logged`;
  return `The logs ${when} do not say what the sun put into the cylinder`;
}

/** The same for one day. */
export function daySentence(day: Day): string {
  if (!hasLogs(day)) return 'No logs on this day';
  if (day.solarFraction !== null) return `The sun made ${percent(day.solarFraction)} of this day’s hot water`;
  if (day.divertedKwh !== null) {
    if (day.divertedKwh < 0.005) return 'No sun went into the cylinder on this day';
    const amount = said('divertedKwh', day.divertedKwh, null);
    return day.complete
      ? `The sun put ${amount} into the cylinder on this day`
      : `The sun put ${amount} into the cylinder in the logged part of this day`;
  }
  if (day.exportKwh !== null)
    return `${said('exportKwh', day.exportKwh, null)} went to the grid; what went into the cylinder is not logged`;
  return 'The logs of this day do not say what the sun put into the cylinder';
}

/** Whether the water was ready in the evening, in a few words. */
export function readyWords(day: Day): string {
  const { readyMet, atReadyC } = day.tank;
  if (readyMet === null || atReadyC === null) return 'not known';
  return readyMet ? 'ready' : 'not hot enough';
}

/** How many evenings the water was ready, as a sentence. */
export function readySentence(evenings: Totals['readyEvenings'], days: number, time: string): string {
  const { met, known: sure } = evenings;
  if (sure === 0) return `Not known whether the water was ready at ${time}`;
  const of = sure === days ? '' : ` known, of ${days}`;
  if (met === sure) {
    if (sure === 1) return `Ready at ${time} on the one evening known`;
    return `Ready at ${time} on ${sure === days ? 'every evening' : `all ${counted(sure, 'evening')}${of}`}`;
  }
  if (met === 0) return `Not ready at ${time} on any of ${counted(sure, 'evening')}${of}`;
  return `Ready at ${time} on ${met} of ${counted(sure, 'evening')}${of}`;
}

/** What it is worth and what was not burnt, as a second sentence; null where neither is known. */
export function worthSentence(totals: Totals, gas: boolean, currency: string | null): string | null {
  const { netSaving, gasDisplacedM3, fuelDisplacedLitres, gasDisplacedKwh } = totals;
  const saved =
    gas && gasDisplacedM3 !== null
      ? `${said('gasDisplacedM3', gasDisplacedM3, null)} of gas`
      : fuelDisplacedLitres !== null
        ? `${said('fuelDisplacedLitres', fuelDisplacedLitres, null)} of fuel`
        : gasDisplacedKwh !== null
          ? `${said('gasDisplacedKwh', gasDisplacedKwh, null)} of fuel`
          : null;
  const worth = netSaving === null ? null : said('netSaving', netSaving, currency);
  if (worth && saved) return `Worth ${worth} net; ${saved} not burnt.`;
  if (worth) return `Worth ${worth} net.`;
  return saved ? `${saved} not burnt.` : null;
}
