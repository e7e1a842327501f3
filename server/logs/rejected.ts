import { Readable } from 'node:stream';
import type { ColumnPlan } from '../../shared/api/plan.ts';
import type { Database } from '../database/connection.ts';
import { LogRefused, readLog } from '../ingest/read.ts';
import { originalBytes } from './originals.service.ts';

/** A text that a spreadsheet would take for a formula is led by an apostrophe; numbers stay numbers. */
function cell(text: string): string {
  const inert = /^[=+\-@\t\r\n]/.test(text) && !/^[+-]?\d+(?:[.,]\d+)?$/.test(text) ? `'${text}` : text;
  return /[",;\r\n]/.test(inert) ? `"${inert.replaceAll('"', '""')}"` : inert;
}

/**
 * The rows that were not taken, found by reading the original once more: none is kept twice, and none is left out.
 * Given bit by bit, so that any number of them takes little memory.
 */
export function rejectedRows(
  db: Database,
  propertyId: string,
  original: Buffer,
  plan: ColumnPlan | null,
  timeZone: string,
): Readable {
  async function* lines(): AsyncGenerator<string> {
    yield 'line,column,reason,text\r\n';
    if (!plan) return;
    let ready: string[] = [];
    let given = 0;
    let seen = 0;
    let ended = false;
    let left = false;
    let wake: () => void = () => undefined;
    let release: () => void = () => undefined;
    let taken = Promise.resolve();
    const reading = readLog(
      () => originalBytes(db, propertyId, original),
      plan,
      { timeZone },
      {
        layer() {
          if (left) throw new Error('Nobody wants the rest.');
          // The reader goes on when what it has given so far was taken.
          return taken;
        },
        rejected(line, column, reason, text) {
          if (++seen <= given) return;
          given++;
          ready.push(`${line},${cell(column ?? '')},${cell(reason)},${cell(text)}\r\n`);
          if (ready.length === 1) taken = new Promise((resolve) => (release = resolve));
          wake();
        },
        restart() {
          // The rejected rows of the first attempt come again in the same order: those given are skipped.
          seen = 0;
        },
      },
    )
      .catch((error: unknown) => {
        if (!left && !(error instanceof LogRefused)) throw error;
      })
      .finally(() => {
        ended = true;
        wake();
      });
    // Heard of below; until then it must not count as unhandled.
    reading.catch(() => undefined);
    try {
      for (;;) {
        if (ready.length > 0) {
          const out = ready.join('');
          ready = [];
          release();
          yield out;
        } else if (ended) {
          await reading;
          return;
        } else await new Promise<void>((resolve) => (wake = resolve));
      }
    } finally {
      left = true;
      release();
    }
  }
  return Readable.from(lines());
}
