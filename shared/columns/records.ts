/** A record may run over this many lines inside quotes; beyond, its opening quote was no quote. */
const MAX_LINES = 50;
const MAX_CHARS = 65_536;

function blankFrom(text: string, from: number): number {
  const found = text.slice(from).search(/[ \t]/);
  return found < 0 ? -1 : from + found;
}

/** Takes one record. `line` is that of its first character, from 1; `text` is the record as it stands in the file. */
export type OnRecord = (cells: string[], line: number, text: string) => void;

/**
 * Puts lines together to records and cuts them into cells: RFC 4180, tolerant. A quote opens a quoted cell only at the
 * cell's beginning; one that is never closed is a character like any other, so that it cannot swallow the file.
 */
export class Records {
  private readonly runs: boolean;
  private pending: string[] = [];
  private pendingLine = 0;
  private pendingChars = 0;
  private cells: string[] = [];
  private cell = '';

  /** @param delimiter between cells; two blanks or more mean a run of blanks */
  constructor(
    private readonly delimiter: string,
    private readonly onRecord: OnRecord,
  ) {
    this.runs = /^ {2,}$/.test(delimiter);
  }

  /** Whether a quoted cell is open, so that the next line belongs to the same record. */
  get open(): boolean {
    return this.pending.length > 0;
  }

  /** Takes the next line, without its line end. */
  push(text: string, line: number): void {
    if (this.pending.length === 0) {
      if (!text.includes('"')) {
        this.onRecord(this.split(text), line, text);
        return;
      }
      this.cells = [];
      this.cell = '';
      this.pendingLine = line;
      this.pendingChars = 0;
      if (this.quoted(text, false)) this.onRecord(this.cells, line, text);
      else this.hold(text);
      return;
    }
    this.cell += '\n';
    if (this.quoted(text, true)) {
      this.pending.push(text);
      const whole = this.pending.join('\n');
      this.pending = [];
      this.onRecord(this.cells, this.pendingLine, whole);
    } else this.hold(text);
  }

  /** Says that there are no more lines. */
  end(): void {
    if (this.pending.length > 0) this.giveUp();
  }

  private hold(text: string): void {
    this.pending.push(text);
    this.pendingChars += text.length;
    if (this.pending.length > MAX_LINES || this.pendingChars > MAX_CHARS) this.giveUp();
  }

  /** The quote was none: every held line is a record of its own. */
  private giveUp(): void {
    const lines = this.pending;
    this.pending = [];
    lines.forEach((text, i) => {
      this.cells = [];
      this.cell = '';
      const whole = text.includes('"') && this.quoted(text, false);
      this.onRecord(whole ? this.cells : this.split(text), this.pendingLine + i, text);
    });
  }

  /** Cuts a line that has no quoted cells. */
  private split(text: string): string[] {
    if (!this.runs) {
      // Several times as quick as String.split on lines that are slices of a large text.
      const cells: string[] = [];
      const { delimiter } = this;
      let at = 0;
      for (let next = text.indexOf(delimiter); next >= 0; next = text.indexOf(delimiter, at)) {
        cells.push(text.slice(at, next));
        at = next + delimiter.length;
      }
      cells.push(at === 0 ? text : text.slice(at));
      return cells;
    }
    const trimmed = text.trim();
    return trimmed === '' ? [''] : trimmed.split(/[ \t]+/);
  }

  /**
   * Cuts a line with quotes into `cells`; false if it ends inside a quoted cell.
   * @param inside whether it begins inside one
   */
  private quoted(text: string, inside: boolean): boolean {
    const { delimiter, runs } = this;
    let at = 0;
    let open = inside;
    for (;;) {
      if (!open) {
        while (text[at] === ' ' && (runs || text[at] !== delimiter)) {
          this.cell += runs ? '' : ' ';
          at++;
        }
        if (text[at] === '"') {
          open = true;
          at++;
          this.cell = '';
        }
      }
      while (open) {
        const close = text.indexOf('"', at);
        if (close < 0) {
          this.cell += text.slice(at);
          return false;
        }
        this.cell += text.slice(at, close);
        at = close + 1;
        if (text[at] === '"') {
          this.cell += '"';
          at++;
        } else open = false;
      }
      let next = runs ? blankFrom(text, at) : text.indexOf(delimiter, at);
      if (next < 0) next = text.length;
      this.cell += text.slice(at, next);
      if (next >= text.length) {
        if (!runs || this.cell !== '' || this.cells.length === 0) this.cells.push(this.cell);
        this.cell = '';
        return true;
      }
      this.cells.push(this.cell);
      this.cell = '';
      at = next + (runs ? 1 : delimiter.length);
      if (runs) while (text[at] === ' ' || text[at] === '\t') at++;
    }
  }
}
