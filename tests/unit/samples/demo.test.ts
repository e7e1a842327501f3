import { createServer, type IncomingMessage, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { loadDemo } from '../../../samples/make/demo.ts';
import { DEMO_HOMES, demoFiles, type DemoHome } from '../../../samples/make/demo-homes.ts';
import { civilDate, dayNumber } from '../../../samples/make/civil.ts';
import { ColumnPlan } from '../../../shared/api/plan.ts';
import { NewProperty } from '../../../shared/api/property.ts';

interface Kept {
  id: string;
  fileName: string;
  status: string;
  text: string;
  plan: unknown;
}

/** A stand-in for the product that knows as much of the contract as the loader uses. */
class StandIn {
  readonly properties: { id: string; name: string }[] = [];
  readonly logs: Kept[] = [];
  readonly grants: { id: string; property: string; email: string; role: string; status: string }[] = [];
  endsAs = 'kept';
  private readonly server: Server = createServer((request, response) => {
    void this.answer(request).then(
      ({ status, body, cookie }) => {
        if (cookie) response.setHeader('set-cookie', `session=${cookie}; HttpOnly; Path=/`);
        response.writeHead(status, { 'content-type': 'application/json' }).end(JSON.stringify(body));
      },
      (error: unknown) => response.writeHead(500).end(String(error)),
    );
  });

  async open(): Promise<string> {
    await new Promise<void>((done) => this.server.listen(0, '127.0.0.1', done));
    return `http://127.0.0.1:${(this.server.address() as AddressInfo).port}`;
  }

  async close(): Promise<void> {
    await new Promise((done) => this.server.close(done));
  }

  private async answer(request: IncomingMessage): Promise<{ status: number; body: unknown; cookie?: string }> {
    const url = new URL(request.url ?? '', 'http://localhost');
    const body = new Response(request as unknown as ReadableStream, {
      headers: { 'content-type': request.headers['content-type'] ?? '' },
    });
    const route = `${request.method} ${url.pathname.replace(/p\d+/, ':id').replace(/l\d+/, ':id')}`;
    if (route === 'POST /api/session') {
      const { email, password } = (await body.json()) as { email: string; password: string };
      if (password !== 'right password')
        return { status: 401, body: { detail: 'The address or the password is wrong.' } };
      return { status: 200, body: { user: { id: 'u', email, name: 'x' } }, cookie: email };
    }
    if (!request.headers.cookie?.startsWith('session=')) return { status: 401, body: { detail: 'No session.' } };
    if (route === 'GET /api/properties') return { status: 200, body: { properties: this.properties } };
    if (route === 'POST /api/properties') {
      const made = { ...NewProperty.parse(await body.json()), id: `p${this.properties.length}` };
      this.properties.push(made);
      return { status: 201, body: made };
    }
    if (route === 'GET /api/properties/:id/grants')
      return {
        status: 200,
        body: { grants: this.grants.filter(({ property }) => property === url.pathname.split('/')[3]) },
      };
    if (route === 'POST /api/properties/:id/grants') {
      const given = {
        id: `g${this.grants.length}`,
        property: url.pathname.split('/')[3],
        status: 'given',
        ...((await body.json()) as { email: string; role: string }),
      };
      this.grants.push(given);
      return { status: 201, body: given };
    }
    if (route.startsWith('POST /api/grants/')) {
      const grant = this.grants.find(({ id }) => id === url.pathname.split('/')[3]);
      if (!grant || request.headers.cookie !== `session=${grant.email}`)
        return { status: 404, body: { detail: 'None.' } };
      grant.status = 'accepted';
      return { status: 200, body: {} };
    }
    if (route === 'GET /api/properties/:id/logs') {
      const logs = this.logs.filter(({ id }) => id.startsWith(`l${url.pathname.split('/')[3].slice(1)}`));
      return { status: 200, body: { logs } };
    }
    if (route === 'POST /api/properties/:id/logs') {
      const form = await body.formData();
      const file = form.get('file') as File;
      const id = `l${url.pathname.split('/')[3].slice(1)}${this.logs.length + 10}`;
      const log = {
        id,
        fileName: file.name,
        status: 'waiting',
        text: await file.text(),
        plan: JSON.parse(String(form.get('plan'))),
      };
      this.logs.push(log);
      return { status: 202, body: { log } };
    }
    if (route === 'GET /api/logs/:id') {
      const log = this.logs.find(({ id }) => id === url.pathname.split('/')[3]);
      if (log && log.status === 'waiting') log.status = this.endsAs;
      return { status: 200, body: { log: { ...log, failure: 'The disk is full.' } } };
    }
    return { status: 404, body: { detail: `no ${route}` } };
  }
}

/** A demo home whose logs begin a few days ago. */
const short = (demo: DemoHome): DemoHome => ({
  ...demo,
  firstDate: (yesterday) => civilDate(dayNumber(yesterday) - 3),
});

describe('loading the demo', () => {
  const homes = DEMO_HOMES.map(short);
  let product: StandIn;
  let baseUrl: string;
  const now = Date.parse('2026-06-10T09:00:00Z');
  beforeEach(async () => {
    product = new StandIn();
    baseUrl = await product.open();
  });
  afterEach(() => product.close());
  const load = (at = now, password = 'right password') => loadDemo({ baseUrl, password, now: at, homes });

  it('when nothing is there then it makes the properties, says that they are invented, and sends their logs up to yesterday', async () => {
    expect(await load()).toEqual({ properties: 3, logs: 5 });
    expect(product.grants.map(({ email, role, status }) => `${email} ${role} ${status}`)).toEqual([
      'installer@example.test installer accepted',
      'landlord@example.test landlord accepted',
      'installer@example.test installer accepted',
    ]);
    for (const { name } of product.properties) expect(name).toMatch(/^Invented .* \(demo\)$/);
    expect(product.logs.map(({ fileName }) => fileName).sort()[0]).toBe(
      'invented-backup-relay_2026-06-06_2026-06-09.csv',
    );
    for (const { plan } of product.logs) expect(ColumnPlan.safeParse(plan).success).toBe(true);
    const minutes = product.logs.find(
      ({ fileName }) => fileName.includes('-minutes_2026-06-06') && !fileName.includes('five'),
    );
    const rows = minutes?.text.trimEnd().split('\n') ?? [];
    expect(rows.length).toBe(1 + 4 * 1440);
    expect(rows[1]).toMatch(/^2026-06-05T23:00:00Z,/);
    expect(rows.at(-1)).toMatch(/^2026-06-09T22:59:00Z,/);
  });

  it('when everything is there then it sends nothing', async () => {
    await load();
    expect(await load()).toEqual({ properties: 0, logs: 0 });
    expect(product.logs.length).toBe(5);
    expect(product.grants.length).toBe(3);
    product.grants[0].status = 'withdrawn';
    await load();
    expect(product.grants.map(({ status }) => status)).toEqual(['withdrawn', 'accepted', 'accepted']);
  });

  it('when two days have passed then it adds those two, and they agree with what a whole loading would have sent', async () => {
    await load();
    expect(await load(now + 2 * 86_400_000)).toEqual({ properties: 0, logs: 5 });
    const later = product.logs.filter(({ fileName }) => fileName.endsWith('_2026-06-10_2026-06-11.csv'));
    expect(later.length).toBe(5);
    const [foxglove] = homes;
    const whole = demoFiles(foxglove, '2026-06-06', '2026-06-06', '2026-06-11');
    for (const [log, pieces] of whole) {
      const parts = product.logs.filter(({ fileName }) => fileName.startsWith(`invented-${log.name}_`));
      const rows = new Set(parts.flatMap(({ text }) => text.trimEnd().split('\n')));
      const expected = new Set(Buffer.concat(pieces).toString().trimEnd().split('\n'));
      expect([...expected].filter((row) => !rows.has(row))).toEqual([]);
    }
  });

  it('when a log was withdrawn by a person then it stays away; when one failed then it is sent again', async () => {
    await load();
    product.logs[0].status = 'withdrawn';
    expect(await load()).toEqual({ properties: 0, logs: 0 });
    product.logs[1].status = 'failed';
    expect(await load()).toEqual({ properties: 0, logs: 1 });
  });

  it('when the product cannot keep a log then it says which and why', async () => {
    product.endsAs = 'failed';
    await expect(load()).rejects.toThrow(/Invented .*invented-.*csv is failed. The disk is full/);
  });

  it('when the password is wrong or nobody answers then it says so', async () => {
    await expect(load(now, 'wrong')).rejects.toThrow(/occupier@example.test could not sign in: 401 .*DEMO_PASSWORD/);
    await expect(loadDemo({ baseUrl: 'http://127.0.0.1:9', password: 'x', now, homes })).rejects.toThrow(
      /Nothing answers/,
    );
  });
});

describe('the demo homes', () => {
  it('cover more than a year at minutes, three months with a dead clamp in the last two weeks, and another zone', () => {
    const yesterday = '2026-11-30';
    const [foxglove, harbour, pinar] = DEMO_HOMES;
    expect(foxglove.firstDate(yesterday)).toBe('2025-11-01');
    const first = harbour.firstDate(yesterday);
    expect(harbour.faults(first, yesterday)).toEqual([{ kind: 'clampDead', from: '2026-11-17' }]);
    expect(pinar.property.timeZone).not.toBe(foxglove.property.timeZone);
    for (const { property, home } of DEMO_HOMES) {
      expect(NewProperty.safeParse(property).success, JSON.stringify(NewProperty.safeParse(property).error)).toBe(true);
      expect(property.timeZone).toBe(home.timeZone);
    }
  });
});
