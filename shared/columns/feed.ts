import type { ColumnPlan } from '../api/plan.ts';
import { Interpreter, type OnRejected } from './interpret.ts';
import { Records } from './records.ts';
import { LogRefused } from './refusal.ts';

/** Brings the lines of a file to the interpreter: past the preamble, the heading and the row of units, to the rows. */
export class Feed {
  /** Made with the first row of data. */
  interpreter: Interpreter | null = null;
  private readonly records: Records;
  private header: string[] | null = null;
  private headed: boolean;
  private unitRow: boolean;
  private skip: number;
  private torn = false;
  private lastLine = 0;

  /** @param hold keeps all days to the end, see `Collector` */
  constructor(
    private readonly plan: ColumnPlan,
    private readonly hold: boolean,
    private readonly onRejected: OnRejected,
  ) {
    this.headed = plan.headerLine === null;
    this.unitRow = plan.unitRow === true;
    this.skip = plan.skipRows ?? 0;
    this.records = new Records(plan.delimiter, (cells, line, text) => this.record(cells, line, text));
  }

  /** Whether a quoted cell is open, so that the next line is not a row of its own. */
  get open(): boolean {
    return this.records.open;
  }

  /** Takes the next line. @throws LogRefused if the plan does not fit the file */
  line(text: string, line: number, torn: boolean): void {
    this.lastLine = line;
    if (!this.headed && line < (this.plan.headerLine ?? 0)) return;
    this.torn = torn;
    this.records.push(text, line);
  }

  /** Says that there are no more lines. @throws LogRefused if the heading was not reached */
  end(): Interpreter {
    this.records.end();
    if (!this.headed)
      throw new LogRefused(
        `The plan says that the heading is in line ${this.plan.headerLine}, but the file has ${this.lastLine}.`,
      );
    const interpreter = (this.interpreter ??= new Interpreter(this.plan, this.header, [], this.hold, this.onRejected));
    interpreter.end();
    return interpreter;
  }

  private record(cells: string[], line: number, text: string): void {
    if (!this.headed) {
      this.headed = true;
      this.header = cells;
      return;
    }
    if (this.interpreter === null) {
      const blank = cells.every((cell) => cell.trim() === '');
      if (this.unitRow) {
        if (!blank) this.unitRow = false;
        return;
      }
      if (this.skip > 0) {
        this.skip--;
        return;
      }
      if (blank) return;
      this.interpreter = new Interpreter(this.plan, this.header, cells, this.hold, this.onRejected);
    }
    this.interpreter.row(cells, line, text, this.torn);
  }
}
