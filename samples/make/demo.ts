import { setTimeout as pause } from 'node:timers/promises';
import { pathToFileURL } from 'node:url';
import { Caller, DemoFailure } from './caller.ts';
import { civilDate, dayNumber, ZoneClock } from './civil.ts';
import { DEMO_HOMES, demoFiles, type DemoHome, type DemoLog, type DemoPerson } from './demo-homes.ts';

/** What the loader needs to know. */
export interface DemoOptions {
  /** Where the product is served, such as http://127.0.0.1:3000. */
  baseUrl: string;
  password: string;
  /** The present moment, ms; logs end with the day before, in each home's zone. */
  now: number;
  homes?: readonly DemoHome[];
  /** Told what is being done, a sentence at a time. */
  tell?(line: string): void;
}

/** What loading did. */
export interface DemoResult {
  properties: number;
  logs: number;
}

interface LogShown {
  id: string;
  fileName: string;
  status: string;
  failure?: string | null;
  questions?: { about: string }[];
}

const address = (person: DemoPerson): string => `${person}@example.test`;

/** Statuses of a log that will not become part of the figures any more. */
const LOST = new Set(['failed', 'refused']);
const WORKING = new Set(['waiting', 'reading']);

/**
 * Brings the demo up to yesterday: makes the invented properties that are missing, gives their grants, sends the logs
 * that are missing, and waits until every figure is up to date. Run again it does only what is left to do.
 * @throws DemoFailure with a sentence that says what was refused
 */
export async function loadDemo(options: DemoOptions): Promise<DemoResult> {
  const tell = options.tell ?? (() => undefined);
  const homes = options.homes ?? DEMO_HOMES;
  const people = new Map<DemoPerson, Promise<Caller>>();
  const as = (person: DemoPerson): Promise<Caller> => {
    const known = people.get(person);
    if (known) return known;
    const caller = new Caller(options.baseUrl, address(person));
    const signedIn = caller.signIn(options.password).then(() => caller);
    people.set(person, signedIn);
    return signedIn;
  };
  const result: DemoResult = { properties: 0, logs: 0 };
  const waiting: (() => Promise<void>)[] = [];
  for (const demo of homes) {
    const owner = await as(demo.owner);
    const { id, made } = await property(owner, demo);
    if (made) {
      result.properties++;
      tell(`made ${demo.property.name}`);
    }
    await share(owner, id, demo, as);
    for (const log of await bring(owner, id, demo, options.now, tell)) {
      result.logs++;
      waiting.push(() => kept(owner, log, demo));
    }
  }
  // The product reads the first logs while the next are written.
  for (const wait of waiting) await wait();
  return result;
}

async function property(owner: Caller, demo: DemoHome): Promise<{ id: string; made: boolean }> {
  type Shown = { id: string; name: string };
  const { properties } = await owner.call<{ properties: Shown[] }>('GET', '/api/properties');
  const there = properties.find((one) => one.name === demo.property.name);
  if (there) return { id: there.id, made: false };
  const made = await owner.call<Shown>('POST', '/api/properties', demo.property);
  return { id: made.id, made: true };
}

interface GrantShown {
  id: string;
  role: string;
  status: string;
  email: string | null;
}

/** Gives and accepts the grants that were never given; one that a person ended stays ended. */
async function share(
  owner: Caller,
  id: string,
  demo: DemoHome,
  as: (person: DemoPerson) => Promise<Caller>,
): Promise<void> {
  const path = `/api/properties/${id}/grants`;
  const { grants } = await owner.call<{ grants: GrantShown[] }>('GET', path);
  for (const { with: person, role } of demo.shared) {
    const email = address(person);
    const known = grants.find((grant) => grant.email === email && grant.role === role);
    const grant = known ?? (await owner.call<GrantShown>('POST', path, { email, role }));
    if (grant.status === 'given') await (await as(person)).call('POST', `/api/grants/${grant.id}/accept`, {});
  }
}

/** A demo file's name: the log, its first and its last date. */
function fileName(log: DemoLog, from: string, to: string): string {
  return `invented-${log.name}_${from}_${to}.csv`;
}

/** The dates of a log's files that are there, withdrawn ones included: what a person took out stays out. */
function datesOf(log: DemoLog, shown: readonly LogShown[]): { from: string; to: string } | null {
  const form = new RegExp(`^invented-${log.name}_(\\d{4}-\\d\\d-\\d\\d)_(\\d{4}-\\d\\d-\\d\\d)\\.csv$`);
  const dates = shown
    .filter(({ status }) => !LOST.has(status))
    .flatMap(({ fileName: name }) => form.exec(name)?.slice(1) ?? [])
    .sort();
  return dates.length === 0 ? null : { from: dates[0], to: dates[dates.length - 1] };
}

/** Sends what is missing of a home's logs. Returns the logs to wait for, those still at work from an earlier run included. */
async function bring(
  owner: Caller,
  id: string,
  demo: DemoHome,
  now: number,
  tell: (line: string) => void,
): Promise<LogShown[]> {
  const { logs: shown } = await owner.call<{ logs: LogShown[] }>('GET', `/api/properties/${id}/logs`);
  const yesterday = civilDate(new ZoneClock(demo.home.timeZone).dayOf(now) - 1);
  const there = new Map(demo.logs.map((log) => [log, datesOf(log, shown)]));
  const firsts = [...there.values()].flatMap((dates) => (dates ? [dates.from] : [])).sort();
  const first = firsts[0] ?? demo.firstDate(yesterday);
  const waiting = shown.filter(({ status }) => WORKING.has(status));
  const wanted = new Map<string, DemoLog[]>();
  for (const log of demo.logs) {
    const to = there.get(log)?.to;
    const from = to === undefined ? first : civilDate(dayNumber(to) + 1);
    if (from <= yesterday) wanted.set(from, [...(wanted.get(from) ?? []), log]);
  }
  for (const [from, logs] of wanted) {
    tell(`writing the invented logs of ${demo.property.name}, ${from} to ${yesterday}`);
    const files = demoFiles(demo, first, from, yesterday);
    // Writing takes seconds without a pause, in which the product may have closed an idle connection: let that be seen.
    await pause(20);
    for (const log of logs) {
      const form = new FormData();
      form.append('plan', JSON.stringify(log.plan));
      form.append('file', new Blob(files.get(log) ?? [], { type: 'text/csv' }), fileName(log, from, yesterday));
      const answer = await owner.call<{ log: LogShown }>('POST', `/api/properties/${id}/logs`, form);
      waiting.push(answer.log);
    }
  }
  return waiting;
}

/** Waits until a log is kept. @throws DemoFailure if it comes to another end */
async function kept(owner: Caller, { id }: LogShown, demo: DemoHome): Promise<void> {
  for (;;) {
    const { log } = await owner.call<{ log: LogShown }>('GET', `/api/logs/${id}?wait=30`);
    if (log.status === 'kept' || log.status === 'withdrawn') return;
    if (!WORKING.has(log.status)) {
      const why = log.failure ?? log.questions?.map(({ about }) => about).join(' ') ?? '';
      throw new DemoFailure(`${demo.property.name}: ${log.fileName} is ${log.status}. ${why}`.trim());
    }
  }
}

/**
 * `DEMO_PASSWORD=… node demo.mjs <url>`: loads the demo. Exit codes: 0 it is there, 1 it could not be loaded (the reason
 * on stderr), 2 wrongly called.
 */
async function main(): Promise<number> {
  const baseUrl = process.argv[2]?.replace(/\/+$/, '');
  const password = process.env.DEMO_PASSWORD;
  if (!baseUrl || !password) {
    process.stderr.write('Call it as: DEMO_PASSWORD=… node demo.mjs http://localhost:3000\n');
    return 2;
  }
  const began = Date.now();
  try {
    const tell = (line: string): boolean => process.stderr.write(`demo: ${line}\n`);
    const { properties, logs } = await loadDemo({ baseUrl, password, now: began, tell });
    if (properties + logs > 0)
      tell(`${properties} properties made, ${logs} logs read in ${((Date.now() - began) / 1000).toFixed(1)} s`);
    return 0;
  } catch (error) {
    if (!(error instanceof DemoFailure)) throw error;
    process.stderr.write(`The demo could not be loaded. ${error.message}\n`);
    return 1;
  }
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) process.exitCode = await main();
