import type { TextDecoder } from 'node:util';
import type { Feed } from '../../shared/columns/feed.ts';
import { Lines } from '../../shared/columns/lines.ts';

/** One way to bring the bytes of a file to its feed. */
export interface ByteReader {
  /** Takes the next bytes. @throws LogRefused if they cannot be read */
  push(bytes: Uint8Array): void;
  end(): void;
}

/** The general reader: decodes whatever encoding the plan names and reads line by line. */
export class GeneralReader implements ByteReader {
  private readonly lines: Lines;

  constructor(
    feed: Feed,
    private readonly decoder: TextDecoder,
  ) {
    this.lines = new Lines((text, line, torn) => feed.line(text, line, torn));
  }

  push(bytes: Uint8Array): void {
    this.lines.push(this.decoder.decode(bytes, { stream: true }));
  }

  end(): void {
    this.lines.push(this.decoder.decode());
    this.lines.end();
  }
}
