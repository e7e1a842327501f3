import { TextDecoder } from 'node:util';
import { linesOf, type TextSample } from '../../shared/columns/inspect/sample.ts';
import { MAX_LINE } from '../../shared/columns/lines.ts';
import { dialectOf } from './dialect.ts';

/** What inspection keeps of a file: enough to look again under another plan without its bytes. Plain JSON. */
export interface FileSummary {
  fileName: string;
  /** Bytes of the file, unpacked. */
  bytes: number;
  encoding: string;
  mark: number;
  /** Why it is no table, in a sentence; null if it may be one. */
  refusal: string | null;
  refusalLine: number | null;
  /** The first bytes, a character each. */
  head: string;
  /** Pieces from further on, cut anywhere, a character per byte. */
  further: string[];
  whole: boolean;
  lineCount: number | null;
}

const HEAD = 256 * 1024;
const PIECE = 2048;
const MAX_PIECES = 160;
/** Lines of larger files are not counted. */
const COUNTED = 8 * 1024 * 1024;

const latin1 = (bytes: Uint8Array): string =>
  Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).toString('latin1');

/** Says of a block of a file which of its lines are worth keeping, as a span of bytes; null for none. */
export type Watch = (block: Uint8Array) => { from: number; to: number } | null;

/** Gathers the summary of a file from its bytes as they come. */
export class Summariser {
  private head = Buffer.alloc(0);
  private block: Uint8Array[] = [];
  private blockBytes = 0;
  private blocks = 0;
  private stride = 1;
  private pieces: { at: number; text: string }[] = [];
  private kept: { at: number; text: string }[] = [];
  private overlap: Uint8Array = new Uint8Array(0);
  private tail: Uint8Array = new Uint8Array(0);
  private bytes = 0;
  private lines = 0;
  private watch: Watch | null = null;

  /**
   * @param fileName as uploaded
   * @param watcher is called once with the summary of the head, and may give a watch over the rest
   */
  constructor(
    private readonly fileName: string,
    private readonly watcher: (head: FileSummary) => Watch | null = () => null,
  ) {}

  push(chunk: Uint8Array): void {
    this.bytes += chunk.length;
    if (this.bytes <= COUNTED) for (const byte of chunk) if (byte === 10) this.lines++;
    let rest = chunk;
    if (this.head.length < HEAD) {
      const part = chunk.subarray(0, HEAD - this.head.length);
      this.head = Buffer.concat([this.head, part]);
      rest = chunk.subarray(part.length);
      if (rest.length > 0) this.watch = this.watcher(this.summary(false));
    }
    if (rest.length === 0) return;
    this.block.push(rest);
    this.blockBytes += rest.length;
    if (this.blockBytes >= HEAD) this.endBlock();
  }

  /** The summary of the whole file. */
  end(): FileSummary {
    if (this.blockBytes > 0) this.endBlock();
    return this.summary(true);
  }

  private endBlock(): void {
    const start = this.bytes - this.blockBytes;
    const block = Buffer.concat([this.overlap, ...this.block]);
    const from = start - this.overlap.length;
    const found = this.watch?.(block);
    if (found && this.kept.length < MAX_PIECES)
      this.kept.push({ at: from + found.from, text: latin1(block.subarray(found.from, found.to)) });
    if (this.blocks % this.stride === 0) {
      // Pieces begin at even places, so that two-byte encodings stay whole.
      const middle = (from + (block.length >> 1)) % 2 === 0 ? block.length >> 1 : (block.length >> 1) + 1;
      this.pieces.push({ at: from + middle, text: latin1(block.subarray(middle, middle + PIECE)) });
      if (this.pieces.length > MAX_PIECES) {
        this.pieces = this.pieces.filter((_, i) => i % 2 === 0);
        this.stride *= 2;
      }
    }
    this.blocks++;
    const tailFrom = Math.max(0, block.length - 2 * PIECE);
    this.tail = block.slice((from + tailFrom) % 2 === 0 ? tailFrom : tailFrom + 1);
    this.overlap = block.slice(Math.max(0, block.length - 16_384 - ((from + block.length) % 2)));
    this.block = [];
    this.blockBytes = 0;
  }

  private summary(ended: boolean): FileSummary {
    const whole = ended && this.bytes <= HEAD;
    const dialect = dialectOf(this.head, whole);
    const further = [...this.pieces, ...this.kept].sort((a, b) => a.at - b.at).map(({ text }) => text);
    if (ended && this.tail.length > 0) further.push(latin1(this.tail));
    return {
      fileName: this.fileName,
      bytes: this.bytes,
      encoding: dialect.encoding,
      mark: dialect.mark,
      refusal: dialect.refusal,
      refusalLine: dialect.refusal === null ? null : 1,
      head: latin1(this.head),
      further,
      whole,
      lineCount: ended && this.bytes <= COUNTED ? this.lines : null,
    };
  }
}

/**
 * The lines of a summary.
 * @param encoding another than the one found, if a plan says so
 * @throws RangeError if there is no such encoding
 */
export function sampleOf(summary: FileSummary, encoding: string = summary.encoding): TextSample {
  const label = summary.mark > 0 ? summary.encoding : encoding;
  const decode = (text: string, from = 0): string =>
    new TextDecoder(label, { ignoreBOM: true }).decode(Buffer.from(text, 'latin1').subarray(from));
  const { lines, torn } = linesOf(decode(summary.head, summary.mark));
  const last = summary.further.length - 1;
  return {
    fileName: summary.fileName,
    encoding: label,
    head: lines,
    // Pieces are cut anywhere: their first line is half a line, and their last one too, save at the file's end.
    further: summary.further.map((text, i) => linesOf(decode(text)).lines.slice(1, i === last ? undefined : -1)),
    whole: summary.whole,
    lineCount: summary.lineCount,
    torn,
  };
}

/** Whether the head has a line without end. */
export function endlessLine(sample: TextSample): number | null {
  const at = sample.head.findIndex((line) => line.length > MAX_LINE);
  return at < 0 ? null : at + 1;
}
