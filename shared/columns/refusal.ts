/** A file, or a plan for it, that cannot be read at all, said in words for the person who brought it. */
export class LogRefused extends Error {
  /**
   * @param reason a sentence
   * @param line the line of the file, from 1, where there is one
   * @param column the column's name, where there is one
   */
  constructor(
    readonly reason: string,
    readonly line: number | null = null,
    readonly column: string | null = null,
  ) {
    super(reason);
    this.name = 'LogRefused';
  }
}
