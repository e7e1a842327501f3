import { LogRefused } from './refusal.ts';

/** A line longer than this is no row of a table. */
export const MAX_LINE = 1_000_000;

/** The refusal of a line without end. */
export function tooLong(line: number): LogRefused {
  return new LogRefused(`Line ${line} is longer than a million characters: this is no table of readings.`, line);
}

/** Takes one line without its end; `torn` says that the text ends in it without a line end. */
export type OnLine = (text: string, line: number, torn: boolean) => void;

/** Cuts text that comes in pieces into lines that end in LF, CR or both. */
export class Lines {
  /** The number of the next line. */
  line = 1;
  private rest = '';

  constructor(private readonly onLine: OnLine) {}

  /** Takes the next piece. @throws LogRefused on a line without end */
  push(piece: string): void {
    const text = this.rest === '' ? piece : this.rest + piece;
    let at = 0;
    let feed = text.indexOf('\n');
    let carriage = text.indexOf('\r');
    for (;;) {
      if (feed < 0 && carriage < 0) break;
      let end: number;
      let next: number;
      if (carriage >= 0 && (feed < 0 || carriage < feed)) {
        // A CR at the very end may be the first half of a CR LF.
        if (carriage === text.length - 1) break;
        end = carriage;
        next = feed === carriage + 1 ? feed + 1 : carriage + 1;
      } else {
        end = feed;
        next = feed + 1;
      }
      if (end - at > MAX_LINE) throw tooLong(this.line);
      this.onLine(text.slice(at, end), this.line++, false);
      at = next;
      if (feed >= 0 && feed < at) feed = text.indexOf('\n', at);
      if (carriage >= 0 && carriage < at) carriage = text.indexOf('\r', at);
    }
    this.rest = text.slice(at);
    if (this.rest.length > MAX_LINE) throw tooLong(this.line);
  }

  /** Says that the text is at its end. */
  end(): void {
    if (this.rest.endsWith('\r')) this.onLine(this.rest.slice(0, -1), this.line++, false);
    else if (this.rest !== '') this.onLine(this.rest, this.line++, true);
    this.rest = '';
  }
}
