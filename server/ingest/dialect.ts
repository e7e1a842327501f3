import { TextDecoder } from 'node:util';

/** What the first bytes of a file are. */
export interface Dialect {
  /** A WHATWG label. */
  encoding: string;
  /** Bytes of the byte-order mark. */
  mark: number;
  /** Why this is no text, in a sentence; null if it is text. */
  refusal: string | null;
}

const starts = (bytes: Uint8Array, signature: readonly number[]): boolean =>
  signature.every((byte, i) => bytes[i] === byte);
const ascii = (text: string): number[] => [...text].map((char) => char.charCodeAt(0));

const BINARY: [number[], string][] = [
  [ascii('%PDF'), 'This is a PDF document, not a CSV file. Export the readings as CSV.'],
  [ascii('PK\u0003\u0004'), 'This is a packed file that holds no single CSV file.'],
  [[0xd0, 0xcf, 0x11, 0xe0], 'This is a spreadsheet workbook, not a CSV file. Save the sheet as CSV.'],
  [[0x89, 0x50, 0x4e, 0x47], 'This is a picture, not a CSV file.'],
  [[0xff, 0xd8, 0xff], 'This is a picture, not a CSV file.'],
  [ascii('GIF8'), 'This is a picture, not a CSV file.'],
  [ascii('SQLite format 3'), 'This is a database file, not a CSV file. Export the readings as CSV.'],
  [ascii('PAR1'), 'This is a binary table, not a CSV file. Export the readings as CSV.'],
];

/** A sentence on marked-up text, which is text but no table; null if it is none. */
function markup(text: string): string | null {
  const head = text.trimStart().slice(0, 200).toLowerCase();
  if (/^<(?:!doctype html|html|head|body|script)/.test(head))
    return 'This is a web page, not a CSV file. Download the file itself.';
  if (/^<(?:\?xml|!doctype|[a-z]+[ >])/.test(head)) return 'This is an XML file, not a CSV file.';
  if (/^\{\s*["}]/.test(head) || /^\[\s*[[{]/.test(head)) return 'This is a JSON file, not a CSV file.';
  return null;
}

function isUtf8(bytes: Uint8Array, whole: boolean): boolean {
  try {
    new TextDecoder('utf-8', { fatal: true }).decode(bytes, { stream: !whole });
    return true;
  } catch {
    return false;
  }
}

/**
 * Encoding of a file: its byte-order mark, then a NUL test, then strict UTF-8, else Windows-1252.
 * @param head its first bytes
 * @param whole whether they are all
 */
export function dialectOf(head: Uint8Array, whole: boolean): Dialect {
  const found = (encoding: string, mark: number, refusal: string | null = null): Dialect => ({
    encoding,
    mark,
    refusal,
  });
  for (const [signature, refusal] of BINARY) if (starts(head, signature)) return found('utf-8', 0, refusal);
  let dialect: Dialect;
  if (starts(head, [0xef, 0xbb, 0xbf])) dialect = found('utf-8', 3);
  else if (starts(head, [0xff, 0xfe])) dialect = found('utf-16le', 2);
  else if (starts(head, [0xfe, 0xff])) dialect = found('utf-16be', 2);
  else {
    const nuls = [0, 0];
    const seen = Math.min(head.length, 65_536);
    let controls = 0;
    for (let i = 0; i < seen; i++) {
      if (head[i] === 0) nuls[i % 2]++;
      else if (head[i] < 32 && head[i] !== 9 && head[i] !== 10 && head[i] !== 13 && head[i] !== 12) controls++;
    }
    const half = seen / 2;
    if (nuls[1] > half * 0.7 && nuls[0] < half * 0.1) dialect = found('utf-16le', 0);
    else if (nuls[0] > half * 0.7 && nuls[1] < half * 0.1) dialect = found('utf-16be', 0);
    else if (nuls[0] + nuls[1] > seen * 0.5 || controls > seen * 0.05)
      return found('utf-8', 0, 'This is a binary file, not a CSV file.');
    else dialect = found(isUtf8(head, whole) ? 'utf-8' : 'windows-1252', 0);
  }
  const text = new TextDecoder(dialect.encoding).decode(head.subarray(dialect.mark, 2000));
  return { ...dialect, refusal: markup(text) };
}
