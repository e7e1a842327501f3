import { deflateRawSync, gzipSync } from 'node:zlib';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { inspectBytes, shapeKey } from '../../../../server/ingest/inspect.ts';
import { LogRefused, readLog } from '../../../../server/ingest/read.ts';
import { unpacked } from '../../../../server/ingest/unpack.ts';
import { pieces, planOf, read } from './reading.ts';
import { writtenLogs } from './written.ts';

/** `FUZZ` times as many cases, for long runs. */
const MORE = Number(process.env.FUZZ ?? 1);
const place = { timeZone: 'Europe/London', latitude: 51.5, longitude: -0.1, country: null };

const damage = fc.array(
  fc.record({
    how: fc.constantFrom('cut', 'drop', 'double', 'write', 'nuls', 'swap'),
    at: fc.nat(),
    length: fc.nat(300),
    byte: fc.nat(255),
  }),
  { minLength: 1, maxLength: 6 },
);

/** Bytes cut, dropped, doubled, overwritten and turned round. */
function damaged(
  bytes: Uint8Array,
  changes: readonly { how: string; at: number; length: number; byte: number }[],
): Uint8Array {
  let out = Buffer.from(bytes);
  for (const { how, at, length, byte } of changes) {
    if (out.length === 0) break;
    const from = at % out.length;
    const to = Math.min(out.length, from + length);
    if (how === 'cut') out = out.subarray(0, from);
    else if (how === 'drop') out = Buffer.concat([out.subarray(0, from), out.subarray(to)]);
    else if (how === 'double') out = Buffer.concat([out.subarray(0, to), out.subarray(from)]);
    else if (how === 'write') out[from] = byte;
    else if (how === 'nuls') out.fill(0, from, to);
    else out.subarray(from, to).reverse();
  }
  return out;
}

/** Inspects and reads whatever it is; the answer must be clear either way. */
async function answers(bytes: Uint8Array): Promise<void> {
  const { plan, problems, summary, sample } = await inspectBytes(bytes, 'log.csv', place);
  shapeKey(summary);
  if (!plan) {
    expect(problems[0].reason.length).toBeGreaterThan(10);
    return;
  }
  expect(sample.readings.length).toBe(sample.lines.length);
  for (const choice of ['best', 'general'] as const) {
    const got = await read(bytes, plan, { choice, size: 700 }).catch((error: unknown) => error);
    if (got instanceof Error) {
      expect(got).toBeInstanceOf(LogRefused);
      continue;
    }
    const { result, layers, rejected } = got as Awaited<ReturnType<typeof read>>;
    const { rows } = result;
    expect(rows.accepted + rows.rejected + rows.unchanged).toBe(rows.read);
    expect(rejected).toHaveLength(rows.rejected);
    for (const { line, reason } of rejected) expect(line > 0 && reason.length > 10).toBe(true);
    for (const { utcDay, instants } of layers) {
      expect(instants.every((at) => Math.floor(at / 86_400_000) === utcDay)).toBe(true);
      expect(instants.every((at, i) => i === 0 || at > instants[i - 1])).toBe(true);
    }
  }
}

describe('hostile and broken files', { timeout: 120_000 * MORE }, () => {
  it('get a clear answer when they are damaged logs', async () => {
    await fc.assert(
      fc.asyncProperty(writtenLogs, damage, async ({ bytes }, changes) =>
        answers(damaged(bytes.subarray(0, 20_000), changes)),
      ),
      { numRuns: 80 * MORE },
    );
  });

  it('get a clear answer when they are bytes of any kind', async () => {
    const text = (arbitrary: fc.Arbitrary<string>) => arbitrary.map((one) => new TextEncoder().encode(one));
    const parts = ['2025-01-01', '00:30', '1,5', '2.5', '', '"', 'NaN', '\n', '\r\n', ';', ',', '1735689600', 'kWh'];
    const noise = fc.oneof(
      fc.uint8Array({ maxLength: 3000 }),
      text(fc.string({ unit: fc.constantFrom(...'0123456789.,;:\t\n\r"-/ TZab\0é'), maxLength: 2000 })),
      text(fc.array(fc.constantFrom(...parts), { maxLength: 400 }).map((some) => some.join(''))),
    );
    await fc.assert(fc.asyncProperty(noise, answers), { numRuns: 150 * MORE });
  });

  it('give no value that is not written in them', async () => {
    await fc.assert(
      fc.asyncProperty(fc.array(fc.nat(99_999), { minLength: 3, maxLength: 30 }), damage, async (numbers, changes) => {
        const lines = numbers.map((n, i) => `2025-01-01T00:${String(i).padStart(2, '0')}:00Z,${n}`);
        const bytes = damaged(new TextEncoder().encode(['time,export', ...lines].join('\n') + '\n'), changes);
        const got = await read(bytes, planOf()).catch((error: unknown) => error);
        if (got instanceof Error) {
          expect(got).toBeInstanceOf(LogRefused);
          return;
        }
        const { readings } = got as Awaited<ReturnType<typeof read>>;
        const cells = Buffer.from(bytes)
          .toString()
          .split(/[,\r\n"]/)
          .map(Number);
        for (const [, value] of readings[0]) expect(cells).toContain(value);
      }),
      { numRuns: 200 * MORE },
    );
  });
});

/** A zip file, made by hand after APPNOTE 4.3. */
function zip(entries: { name: string; data: Uint8Array; stored?: boolean; locked?: boolean }[]): Buffer {
  const parts: Buffer[] = [];
  const central: Buffer[] = [];
  let at = 0;
  for (const { name, data, stored, locked } of entries) {
    const packed = stored ? Buffer.from(data) : deflateRawSync(data);
    const fields = Buffer.alloc(26);
    fields.writeUInt16LE(locked ? 1 : 0, 2);
    fields.writeUInt16LE(stored ? 0 : 8, 4);
    fields.writeUInt32LE(packed.length, 14);
    fields.writeUInt32LE(data.length, 18);
    fields.writeUInt16LE(name.length, 22);
    parts.push(Buffer.from('PK\u0003\u0004'), fields, Buffer.from(name), packed);
    const tail = Buffer.alloc(14);
    tail.writeUInt32LE(at, 10);
    central.push(Buffer.from('PK\u0001\u0002'), Buffer.from([20, 0]), fields, tail, Buffer.from(name));
    at += 30 + name.length + packed.length;
  }
  const directory = Buffer.concat(central);
  const end = Buffer.alloc(18);
  end.writeUInt16LE(entries.length, 4);
  end.writeUInt16LE(entries.length, 6);
  end.writeUInt32LE(directory.length, 8);
  end.writeUInt32LE(at, 12);
  return Buffer.concat([...parts, directory, Buffer.from('PK\u0005\u0006'), end]);
}

describe('packed files', { timeout: 60_000 }, () => {
  const text = 'time,export\n2026-01-01T00:00Z,0.5\n2026-01-01T00:30Z,0.25\n';
  const data = new TextEncoder().encode(text);
  const all = async (bytes: Uint8Array, size = 50): Promise<string> => {
    const out: Uint8Array[] = [];
    for await (const chunk of unpacked(pieces(bytes, size))) out.push(chunk);
    return Buffer.concat(out).toString();
  };

  it.each([1, 3, 1000])('come out whole in pieces of %d, as do files that are not packed', async (size) => {
    expect(await all(gzipSync(data), size)).toBe(text);
    expect(await all(zip([{ name: 'log.csv', data }]), size)).toBe(text);
    expect(await all(zip([{ name: 'log.csv', data, stored: true }]), size)).toBe(text);
    const more = [
      { name: '__MACOSX/._log.csv', data },
      { name: 'readme.md', data: new Uint8Array(3) },
    ];
    expect(await all(zip([...more, { name: 'log.csv', data }]), size)).toBe(text);
    expect(await all(data, size)).toBe(text);
    expect(await all(new Uint8Array(0), size)).toBe('');
  });

  it('are refused in words where they cannot be read', async () => {
    await expect(all(gzipSync(data).subarray(0, 30))).rejects.toThrow(/damaged/);
    await expect(all(zip([{ name: 'a.csv', data }]).subarray(0, 60))).rejects.toThrow(/damaged/);
    await expect(
      all(
        zip([
          { name: 'a.csv', data },
          { name: 'b.csv', data },
        ]),
      ),
    ).rejects.toThrow(/2 files/);
    await expect(all(zip([{ name: 'a.csv', data, locked: true }]))).rejects.toThrow(/password/);
    await expect(all(zip([{ name: '[Content_Types].xml', data }]))).rejects.toThrow(/workbook/);
  });

  it('are refused where they unpack to far more than readings do', async () => {
    const zeros = Buffer.alloc(70 * 1024 * 1024, 0x30);
    await expect(all(gzipSync(zeros), 65_536)).rejects.toThrow(/far more/);
    const inZip = zip([{ name: 'log.csv', data: zeros }]);
    const sink = { layer() {}, rejected() {} };
    await expect(readLog(pieces(inZip, 65_536), planOf(), { timeZone: 'UTC' }, sink)).rejects.toBeInstanceOf(
      LogRefused,
    );
    const { plan, problems } = await inspectBytes(inZip, 'log.zip', place);
    expect([plan, problems.length]).toEqual([null, 1]);
  });
});
