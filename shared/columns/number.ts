/** The greatest number of digits after the decimal mark that is kept as a scaled integer. */
export const MAX_SCALE = 15;
/** In `decimals`: the mantissa is the number itself, a plain double. */
export const PLAIN = -1;

/** Exact powers of ten. */
export const POWER10: readonly number[] = Array.from({ length: 23 }, (_, i) => Number(`1e${i}`));

export type CellKind = 'missing' | 'number' | 'invalid';

/** Words that say that there is no value, in the lower case. */
export const MISSING_WORDS: readonly string[] = [
  '',
  '-',
  '--',
  '---',
  '?',
  '.',
  'n/a',
  '#n/a',
  'na',
  'nan',
  '-nan',
  'inf',
  '-inf',
  'infinity',
  '-infinity',
  'null',
  'nil',
  'none',
  'undefined',
  'missing',
  'unknown',
  'unavailable',
  'no data',
  'nodata',
  'k.a.',
  'n.v.t.',
  'n.d.',
  'nd',
];

const DIGIT0 = 48;
const DIGIT9 = 57;

/** What of a written number may follow it in the same cell: its unit, with or without a blank. */
const UNIT_WORDS: Record<string, readonly string[]> = {
  W: ['w', 'watt', 'watts'],
  kW: ['kw'],
  Wh: ['wh'],
  kWh: ['kwh'],
  MWh: ['mwh'],
  MJ: ['mj'],
  m3: ['m3', 'm³', 'm^3', 'cbm'],
  litre: ['l', 'litre', 'litres', 'liter', 'ltr'],
  ft3: ['ft3', 'ft³', 'cf'],
  ft3x100: ['hcf', 'ccf'],
  C: ['c', '°c', 'degc', 'deg c', '℃'],
  F: ['f', '°f', 'degf', 'deg f', '℉'],
  state: [],
};

/**
 * Reads cells as numbers, exactly as written: `mantissa × 10^-decimals`. One reader serves a whole file and keeps the
 * last number in its own fields, so that a cell makes no object.
 */
export class NumberReader {
  /** The digits as an integer, with sign; or the number itself where `decimals` is `PLAIN`. */
  mantissa = NaN;
  decimals = 0;
  private readonly decimalCode: number;
  private readonly thousands: string | null;
  private readonly missing: ReadonlySet<string>;
  /** Whether a word for "missing" looks like a number, so that it must be asked for before parsing. */
  readonly missingNumbers: boolean;

  /**
   * @param decimal the decimal mark
   * @param thousands the mark between groups of three digits, if there may be one
   * @param missing words for "no value" beside the usual ones
   */
  constructor(decimal: '.' | ',', thousands?: string, missing: readonly string[] = []) {
    this.decimalCode = decimal.charCodeAt(0);
    this.thousands = thousands ? thousands : null;
    const own = missing.map((word) => word.trim().toLowerCase());
    this.missing = new Set([...MISSING_WORDS, ...own]);
    this.missingNumbers = own.some((word) => /\d/.test(word));
  }

  /** Whether the cell says that there is no value. */
  isMissing(text: string | undefined): boolean {
    return text === undefined || text.length === 0 || this.missing.has(text.trim().toLowerCase());
  }

  /**
   * Reads one cell.
   * @param text the cell; undefined for one that the row lacks
   * @param unit the unit that may be written behind the number
   */
  read(text: string | undefined, unit?: string): CellKind {
    if (text === undefined || text.length === 0) return 'missing';
    if (this.missingNumbers && this.missing.has(text.trim().toLowerCase())) return 'missing';
    if (this.plainDigits(text)) return 'number';
    const trimmed = text.trim();
    if (this.missing.has(trimmed.toLowerCase())) return 'missing';
    return this.loose(trimmed, unit) ? 'number' : 'invalid';
  }

  /** Sign, digits, decimal mark, digits, and nothing else: nearly every cell. */
  private plainDigits(text: string): boolean {
    const end = text.length;
    let at = 0;
    let negative = false;
    const first = text.charCodeAt(0);
    if (first === 45) {
      negative = true;
      at = 1;
    } else if (first === 43) at = 1;
    if (end - at > 16) return false;
    let mantissa = 0;
    let digits = 0;
    let mark = -1;
    for (; at < end; at++) {
      const code = text.charCodeAt(at);
      if (code >= DIGIT0 && code <= DIGIT9) {
        mantissa = mantissa * 10 + (code - DIGIT0);
        digits++;
      } else if (code === this.decimalCode && mark < 0) mark = at;
      else return false;
    }
    if (digits === 0 || digits > 15) return false;
    this.mantissa = negative && mantissa !== 0 ? -mantissa : mantissa;
    this.decimals = mark < 0 ? 0 : end - 1 - mark;
    return true;
  }

  /** Blanks, thousands, exponents, a unit behind, a typographic minus, and digits beyond 2^53. */
  private loose(trimmed: string, unit: string | undefined): boolean {
    const mark = this.decimalCode === 46 ? '\\.' : ',';
    const match = new RegExp(`^([-+−]?)\\s*([^a-z%°℃℉]*?)(?:e([-+]?\\d{1,3}))?\\s*([a-z%°℃℉][^]*)?$`, 'i').exec(
      trimmed,
    );
    if (!match) return false;
    const [, sign, body, exponent, suffix] = match;
    if (suffix !== undefined) {
      const words = unit ? UNIT_WORDS[unit] : undefined;
      if (!words?.includes(suffix.trim().toLowerCase())) return false;
      // Power is told from energy, and thousand from million, by the case of the letters alone.
      if (/^mw/i.test(suffix) && !suffix.startsWith('M')) return false;
    }
    let plain = body.trim();
    if (this.thousands !== null) {
      const group = /\s/.test(this.thousands) ? '[\\s\\u00a0\\u202f]' : `\\${this.thousands[0]}`;
      if (new RegExp(`^\\d{1,3}(?:${group}\\d{3})+(?:${mark}\\d*)?$`).test(plain)) {
        plain = plain.replace(new RegExp(group, 'g'), '');
      }
    }
    if (!new RegExp(`^(?:\\d+(?:${mark}\\d*)?|${mark}\\d+)$`).test(plain)) return false;
    const [whole, fraction = ''] = plain.split(this.decimalCode === 46 ? '.' : ',');
    let digits = (whole + fraction).replace(/^0+(?=\d)/, '');
    const negative = sign === '-' || sign === '−';
    let decimals = fraction.length - Number(exponent ?? 0);
    // Zeros at the end say nothing of the value; they are taken off as digits, since a number so long may be rounded.
    while (decimals > MAX_SCALE && digits.length > 1 && digits.endsWith('0')) {
      digits = digits.slice(0, -1);
      decimals--;
    }
    let mantissa = Number(digits);
    if (mantissa === 0) decimals = Math.min(Math.max(decimals, 0), MAX_SCALE);
    if (decimals < 0 && decimals >= -22) {
      mantissa *= POWER10[-decimals];
      decimals = 0;
    }
    if (mantissa <= Number.MAX_SAFE_INTEGER && decimals >= 0 && decimals <= MAX_SCALE) {
      this.mantissa = negative && mantissa !== 0 ? -mantissa : mantissa;
      this.decimals = decimals;
      return true;
    }
    const value = Number(`${negative ? '-' : ''}${whole || '0'}.${fraction || '0'}e${exponent ?? 0}`);
    if (!Number.isFinite(value)) return false;
    this.mantissa = value;
    this.decimals = PLAIN;
    return true;
  }
}

/** The number that a mantissa and its decimals stand for. */
export function numberOf(mantissa: number, decimals: number): number {
  return decimals > 0 ? mantissa / POWER10[decimals] : mantissa;
}
