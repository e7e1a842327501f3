import type { RowProblem } from '../api/plan.ts';

/** So many different problems are listed; the rest are counted together. */
const MAX_PROBLEMS = 100;

/** Gathers what is to be told of a file, each kind once with its first line and its number. */
export class Problems {
  private readonly found = new Map<string, RowProblem>();

  /**
   * @param line where it was seen, from 1; null if it has no place
   * @param column the column's name; null if it is of the whole row
   * @param reason a sentence that does not name the line
   * @param count how many there are
   */
  add(line: number | null, column: string | null, reason: string, count = 1): void {
    let key = `${column ?? ''}\n${reason}`;
    if (!this.found.has(key) && this.found.size >= MAX_PROBLEMS) {
      key = '';
      reason = 'Further problems of other kinds.';
      column = null;
    }
    const known = this.found.get(key);
    if (known) known.count += count;
    else this.found.set(key, { line, column, reason, count });
  }

  /** All of them, in order of their first line. */
  list(): RowProblem[] {
    return [...this.found.values()].sort((a, b) => (a.line ?? Infinity) - (b.line ?? Infinity) || 0);
  }
}
