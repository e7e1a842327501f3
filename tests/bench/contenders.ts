import { DuckDBInstance } from '@duckdb/node-api';
import fs from 'node:fs';
import { from as copyFrom } from 'pg-copy-streams';
import pg from 'pg';
import { finished } from 'node:stream/promises';
import { inspectBytes, inspectSummary } from '../../server/ingest/inspect.ts';
import { readSeries } from '../../server/readings/series.service.ts';
import { kwhOf, newPlace, pieces, statusOf } from './place.ts';
import type { Place } from './place.ts';
import { startProduct } from './product.ts';
import { minuteFile, YEAR_PLAN } from './year.ts';
import type { BenchFile } from './year.ts';

/** What takes turns in a measurement: `before` is not timed, `run` is, and so may say its own figures. */
export interface Contender {
  before?(): Promise<void>;
  run(): Promise<Record<string, number> | void>;
  /** After each round: throws if the result is not what it must be. */
  check?(): Promise<void>;
  close(): Promise<void>;
}

const FILE = (name: string) => `${process.env.BENCH_FOLDER}/${name}.csv`;
const FACTS = (name: string) =>
  JSON.parse(fs.readFileSync(`${process.env.BENCH_FOLDER}/${name}.json`, 'utf8')) as Facts;
type Facts = Omit<BenchFile, 'csv'>;

/** The files that the rows need, made once, and what must come out of them. */
export const FILES: Record<string, () => BenchFile> = {
  year: () => minuteFile('2023-01-01', 365),
  overlap: () => minuteFile('2022-07-02', 365, 1),
  decade: () => minuteFile('2014-01-01', 3652, 2),
  month: () => minuteFile('2023-12-01', 31, 3),
  day: () => minuteFile('2024-01-01', 1, 4),
};

const load = (name: string) => ({ csv: fs.readFileSync(FILE(name)), facts: FACTS(name) });

/** Rows and energy must be those that were written into the file; the seam of days at its ends is within a reading. */
async function mustHold(place: Place, id: string, n: number, facts: Facts): Promise<void> {
  const log = await statusOf(place, id, n);
  if (log?.status !== 'kept' || log.rows !== facts.rows) throw new Error(`Log ${n}: ${JSON.stringify(log)}`);
  const kwh = await kwhOf(place, id);
  for (const name of ['export', 'import', 'diversion'] as const)
    if (!kwh || Math.abs(kwh[name] - facts.kwh[name]) > 0.001 * facts.kwh[name])
      throw new Error(`${name}: ${kwh?.[name]} kWh came out of ${facts.kwh[name]}`);
}

const NOT_PLAIN = { ...YEAR_PLAN, missing: ['n0ne'] };

async function ingest(name: string, plan = YEAR_PLAN): Promise<Contender> {
  const place = await newPlace();
  const { csv, facts } = load(name);
  let id = '';
  let n = 0;
  return {
    before: async () => {
      id = await place.property();
      ({ n } = await place.upload(id, csv, plan));
    },
    run: () => place.ingest(id, n),
    check: () => mustHold(place, id, n, facts),
    close: () => place.close(),
  };
}

/** A property with logs already, and one more to come. */
async function oneMore(there: string): Promise<Contender> {
  const place = await newPlace();
  const base = load(there).csv;
  const { csv } = load('day');
  const id = await place.property();
  await place.ingest(id, (await place.upload(id, base)).n);
  let n = 0;
  return {
    before: async () => {
      if (n > 0) {
        // As if the day had never come.
        await place.deps.db.query('delete from log_blocks where property_id = $1 and log > 1', [id]);
        await place.deps.db.query(
          `delete from day_blocks b where property_id = $1 and not exists (
             select from log_blocks r where r.property_id = $1 and r.utc_day = b.utc_day and r.hash = b.hash)`,
          [id],
        );
        await place.deps.db.query('delete from logs where property_id = $1 and n > 1', [id]);
      }
      ({ n } = await place.upload(id, csv));
    },
    run: () => place.ingest(id, n),
    close: () => place.close(),
  };
}

/** Peak of resident memory while a file is ingested, above what the process takes when idle, in MB. */
async function memory(name: string): Promise<Contender> {
  const place = await newPlace();
  const small = await place.property();
  await place.ingest(small, (await place.upload(small, load('day').csv)).n);
  const id = await place.property();
  const { n } = await place.upload(id, load(name).csv);
  return {
    run: async () => {
      globalThis.gc?.();
      // Linux: begins a new high-water mark.
      fs.writeFileSync('/proc/self/clear_refs', '5');
      const idle = process.memoryUsage.rss();
      await place.ingest(id, n);
      const peak = Number(/VmHWM:\s+(\d+) kB/.exec(fs.readFileSync('/proc/self/status', 'utf8'))?.[1]) * 1024;
      return { megabytes: (peak - idle) / 1e6 };
    },
    close: () => place.close(),
  };
}

const SERVER_CLIENT = async () => {
  const client = new pg.Client({ connectionString: process.env.BENCH_SERVER });
  await client.connect();
  return client;
};

export const CONTENDERS: Record<string, () => Promise<Contender>> = {
  copy: async () => {
    const client = await SERVER_CLIENT();
    const { csv } = load('year');
    await client.query(
      'create temp table rows (at timestamptz, export float8, import float8, heater float8, tank float8)',
    );
    return {
      before: async () => void (await client.query('truncate rows')),
      run: async () => {
        const stream = client.query(copyFrom('copy rows from stdin (format csv, header)'));
        for await (const piece of pieces(csv))
          if (!stream.write(piece)) await new Promise((go) => stream.once('drain', go));
        stream.end();
        await finished(stream);
      },
      close: () => client.end(),
    };
  },

  duck: async () => {
    const instance = await DuckDBInstance.create(':memory:', { threads: '1' });
    const connection = await instance.connect();
    const sql = `select cast(time at time zone 'Europe/London' as date) as day, sum(export_w), sum(import_w),
        sum(heater_w), avg(tank_top_c)
      from read_csv('${FILE('year')}', columns = {'time': 'TIMESTAMPTZ', 'export_w': 'DOUBLE', 'import_w': 'DOUBLE',
        'heater_w': 'DOUBLE', 'tank_top_c': 'DOUBLE'}, header = true) group by day order by day`;
    return {
      run: async () => {
        const reader = await connection.runAndReadAll(sql);
        if (reader.currentRowCount !== 365) throw new Error(`${reader.currentRowCount} days`);
      },
      close: async () => instance.closeSync(),
    };
  },

  year: () => ingest('year'),
  general: () => ingest('year', NOT_PLAIN),
  decade: () => ingest('decade'),

  again: async () => {
    const place = await newPlace();
    const { csv } = load('year');
    const id = await place.property();
    await place.ingest(id, (await place.upload(id, csv)).n);
    const written = async () => {
      const [row] = await place.deps.db.query(
        `select (select count(*)::int from logs) as logs, (select count(*)::int from day_blocks) as blocks,
           (select count(*)::int from original_chunks) as chunks, (select count(*)::int from log_blocks) as refs,
           (select count(*)::int from graphile_worker._private_jobs) as jobs`,
      );
      return JSON.stringify(row);
    };
    const before = await written();
    return {
      run: async () => {
        const { same } = await place.upload(id, csv);
        if (!same) throw new Error('The same file was not known again.');
      },
      check: async () => {
        if ((await written()) !== before) throw new Error('A repeat wrote something.');
      },
      close: () => place.close(),
    };
  },

  overlap: async () => {
    const place = await newPlace();
    const first = load('overlap').csv;
    const { csv, facts } = load('year');
    let id = '';
    let n = 0;
    return {
      before: async () => {
        id = await place.property();
        await place.ingest(id, (await place.upload(id, first)).n);
        ({ n } = await place.upload(id, csv));
      },
      run: () => place.ingest(id, n),
      check: async () => {
        const log = await statusOf(place, id, n);
        if (log?.status !== 'kept' || log.rows !== facts.rows) throw new Error(`Log ${n}: ${JSON.stringify(log)}`);
      },
      close: () => place.close(),
    };
  },

  moreOnMonth: () => oneMore('month'),
  moreOnDecade: () => oneMore('decade'),

  direct: async () => {
    const place = await newPlace();
    const { csv, facts } = load('year');
    let id = '';
    let n = 0;
    return {
      before: async () => void (id = await place.property()),
      run: async () => {
        ({ n } = await place.upload(id, csv));
        await place.ingest(id, n);
      },
      check: () => mustHold(place, id, n, facts),
      close: () => place.close(),
    };
  },

  /** Over HTTP with a worker; `acknowledged` is the part until the answer. */
  http: async () => {
    const product = await startProduct();
    const { csv, facts } = load('year');
    let id = '';
    return {
      before: async () => void (id = await product.place.property()),
      run: async () => {
        const started = performance.now();
        const log = await product.send(id, csv);
        const acknowledged = performance.now() - started;
        await product.kept(log);
        return { acknowledged };
      },
      check: () => mustHold(product.place, id, 1, facts),
      close: () => product.close(),
    };
  },

  memoryYear: () => memory('year'),
  memoryDecade: () => memory('decade'),

  inspection: async () => {
    const { csv } = load('year');
    return { run: async () => void (await inspectBytes(pieces(csv), 'year.csv', HOME)), close: async () => undefined };
  },
  correction: async () => {
    const { csv } = load('year');
    const { summary } = await inspectBytes(pieces(csv), 'year.csv', HOME);
    return { run: async () => void inspectSummary(summary, HOME, YEAR_PLAN), close: async () => undefined };
  },

  chart: async () => {
    const place = await newPlace();
    const id = await place.property();
    await place.ingest(id, (await place.upload(id, load('year').csv)).n);
    return {
      run: async () => {
        const { points } = await readSeries(place.deps.db, id, {
          channel: 'import',
          from: '2023-01-01T00:00:00Z',
          to: '2024-01-01T00:00:00Z',
          points: 2000,
          asRead: false,
        });
        if (points.length < 1500) throw new Error(`${points.length} points`);
      },
      close: () => place.close(),
    };
  },
  chartSql: async () => {
    const client = await SERVER_CLIENT();
    await client.query(
      `create temp table readings (channel smallint, at timestamptz, value float8, primary key (channel, at));
       create temp table rows (at timestamptz, a float8, b float8, c float8, d float8)`,
    );
    const stream = client.query(copyFrom('copy rows from stdin (format csv, header)'));
    stream.end(load('year').csv);
    await finished(stream);
    await client.query(
      `insert into readings select k, at, v from rows, lateral (values (1, a), (2, b), (3, c), (4, d)) x (k, v)`,
    );
    await client.query('analyze readings');
    return {
      run: async () => {
        const { rows } = await client.query(
          `select floor(extract(epoch from at - '2023-01-01Z'::timestamptz) / 31536) as part, min(value), max(value)
           from readings where channel = 2 and at >= '2023-01-01Z' and at < '2024-01-01Z' group by 1 order by 1`,
        );
        if (rows.length !== 1000) throw new Error(`${rows.length} parts`);
      },
      close: () => client.end(),
    };
  },
};

const HOME = { timeZone: 'Europe/London', latitude: null, longitude: null, country: 'GB' };
