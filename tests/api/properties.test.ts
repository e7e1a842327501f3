import { describe, expect, it } from 'vitest';
import type { Property } from '../../shared/api/property.ts';
import { SMALL_HOME, useApp } from '../support/app.ts';

/** An afternoon in London; already the next day in Auckland. */
const t = useApp({ now: () => new Date('2026-06-15T14:00:00Z') });

const BOILER = {
  fuel: 'gas',
  kind: 'condensing-regular',
  efficiency: 0.8,
  efficiencyIs: 'hotWater',
  calorificValue: 39.2,
};
const FULL_SYSTEM = {
  cylinder: {
    volumeLitres: 180,
    declaredLossKwhPerDay: 1.6,
    insulation: { kind: 'foam', mm: 50 },
    sensors: [
      { channel: 'tankTop', height: 0.8 },
      { channel: 'tankBottom', height: 0.2 },
    ],
  },
  heaters: [{ ratedKw: 2.8, ratedVolts: 230, position: 'lower', thermostatC: 65, viaDiverter: true }],
  boiler: { ...BOILER, ratedKw: 18 },
  panels: [{ kwp: 4, tiltDegrees: 35, azimuthDegrees: 180 }],
  exportLimitKw: 3.68,
  battery: false,
  phases: 1,
  gasMeterCovers: 'house',
  relay: { onMeans: 'the backup may heat', windows: [{ start: '16:00', end: '24:00' }], targetC: 55 },
  exportLoggedBy: 'ownMeter',
  diversionIs: 'metered',
  diverterSince: '2025-03-01',
  occupants: 3,
  floorAreaM2: 90,
  hygieneC: 60,
};
const TARIFF = {
  currency: 'GBP',
  fuelPerKwh: 0.06,
  importPerKwh: 0.25,
  exportPerKwh: 0.15,
  exportPayment: 'metered',
  windows: [{ days: ['mon', 'sun'], start: '00:30', end: '07:30', clock: 'standard', importPerKwh: 0.09 }],
};

const paths = (body: { errors?: { path: string }[] }) => (body.errors ?? []).map((error) => error.path);
const defaultsOf = (body: Property) => Object.fromEntries(body.defaults.map((d) => [d.path, d.value]));

describe('POST /api/properties', () => {
  it('when a volume and a fuel are all that is known, then the rest is taken by default and said so', async () => {
    const owner = await t.person();
    const answer = await owner.agent.post('/api/properties').send(SMALL_HOME);
    expect(answer.status).toBe(201);
    const body = answer.body as Property;
    const { defaults, ...rest } = body;
    expect(rest).toEqual({
      id: expect.stringMatching(/^[a-z0-9]{16}$/),
      name: 'Invented home',
      timeZone: 'Europe/London',
      country: null,
      latitude: null,
      longitude: null,
      role: 'occupier',
      firstDay: null,
      lastDay: null,
      volumeLitres: 210,
      demo: false,
      ready: { time: '18:00', temperatureC: 50 },
      system: { ...SMALL_HOME.system, from: '1970-01-01' },
      tariff: null,
      systems: [{ ...SMALL_HOME.system, from: '1970-01-01' }],
      tariffs: [],
      teamId: owner.teamId,
      mayEdit: true,
      mayUpload: true,
      maySeeTraces: true,
      mayGrant: true,
      mayConsent: true,
      tracesConsent: false,
    });
    // The defaults that the contract names.
    expect(defaultsOf(body)).toMatchObject({
      'ready.time': '18:00',
      'ready.temperatureC': 50,
      'system.heaters': 3,
      'system.boiler.kind': 'condensing-regular',
      'system.boiler.efficiency': 0.74,
      'system.boiler.calorificValue': 39.5,
      ambient: 20,
    });
    for (const taken of defaults) expect(taken.source.length).toBeGreaterThan(10);
  });

  it('when everything is given, then all of it comes back and only what cannot be recorded is a default', async () => {
    const owner = await t.person('firm');
    const given = {
      name: '  <script>alert(1)</script> “Höfli” 漢字 ',
      timeZone: 'Pacific/Auckland',
      country: 'NZ',
      latitude: -36.8,
      longitude: 174.7,
      ready: { time: '19:30', temperatureC: 55 },
      system: { ...FULL_SYSTEM, from: '2025-03-01' },
      tariff: { ...TARIFF, from: '2025-04-01' },
    };
    const { body, status } = await owner.agent.post('/api/properties').send(given);
    expect(status).toBe(201);
    expect(body).toMatchObject({ ...given, name: given.name.trim(), role: 'installer', volumeLitres: 180 });
    expect(Object.keys(defaultsOf(body)).sort()).toEqual(['ambient', 'storeFactor']);
    const again = await owner.agent.get(`/api/properties/${body.id}`);
    expect(again.body).toEqual(body);
  });

  it.each([
    ['household', 'occupier'],
    ['firm', 'installer'],
    ['landlord', 'landlord'],
  ] as const)('when a %s adds it, then it holds the first grant as %s', async (kind, role) => {
    const owner = await t.person(kind);
    const { id } = await t.property(owner);
    expect((await owner.agent.get(`/api/properties/${id}`)).body.role).toBe(role);
    const { body } = await owner.agent.get(`/api/properties/${id}/grants`);
    expect(body.grants).toEqual([
      expect.objectContaining({ role, status: 'accepted', email: null, keeps: true, until: null }),
    ]);
  });

  it('when the person has no team, then a household is made for them, once', async () => {
    const person = await t.person();
    await t.db.query('delete from teams where id = $1', [person.teamId]);
    const first = await person.agent.post('/api/properties').send(SMALL_HOME).expect(201);
    const second = await person.agent.post('/api/properties').send(SMALL_HOME).expect(201);
    expect(second.body.teamId).toBe(first.body.teamId);
    expect((await person.agent.get('/api/teams')).body).toEqual({
      teams: [{ id: first.body.teamId, kind: 'household', name: `Household of ${person.name}`, role: 'owner' }],
    });
  });

  it('when a team is named, then it is that one; another’s team is refused', async () => {
    const owner = await t.person();
    const other = await t.person();
    const own = await owner.agent.post('/api/properties').send({ ...SMALL_HOME, teamId: owner.teamId });
    expect([own.status, own.body.teamId]).toEqual([201, owner.teamId]);
    const foreign = await owner.agent.post('/api/properties').send({ ...SMALL_HOME, teamId: other.teamId });
    expect([foreign.status, paths(foreign.body)]).toEqual([422, ['teamId']]);
    expect((await other.agent.get('/api/properties')).body).toEqual({ properties: [] });
  });

  it('when the person is a reader of the team, then 403 says what is missing', async () => {
    const reader = await t.member(await t.person(), 'reader');
    const answer = await reader.agent.post('/api/properties').send(SMALL_HOME);
    expect(answer.status).toBe(403);
    expect(answer.body.detail).toContain('reader');
  });

  it.each([
    ['no system', { system: undefined }, 'system'],
    ['a zone that does not exist', { timeZone: 'Europe/Nowhere' }, 'timeZone'],
    ['an offset for a zone', { timeZone: '+01:00' }, 'timeZone'],
    ['a country in words', { country: 'Wales' }, 'country'],
    ['a latitude beyond the pole', { latitude: 91 }, 'latitude'],
    ['a time that no clock shows', { ready: { time: '25:00' } }, 'ready.time'],
    [
      'a volume of zero',
      { system: { ...SMALL_HOME.system, cylinder: { volumeLitres: 0 } } },
      'system.cylinder.volumeLitres',
    ],
    [
      'a volume in words',
      { system: { ...SMALL_HOME.system, cylinder: { volumeLitres: '210' } } },
      'system.cylinder.volumeLitres',
    ],
    [
      'an efficiency in per cent',
      { system: { ...SMALL_HOME.system, boiler: { fuel: 'gas', efficiency: 84 } } },
      'system.boiler.efficiency',
    ],
    [
      'a kind that is not listed',
      { system: { ...SMALL_HOME.system, boiler: { fuel: 'gas', kind: 'magic' } } },
      'system.boiler.kind',
    ],
    [
      'an oil boiler that burns gas',
      { system: { ...SMALL_HOME.system, boiler: { fuel: 'gas', kind: 'oil-condensing' } } },
      'system.boiler.kind',
    ],
    [
      'a gas value for LPG',
      { system: { ...SMALL_HOME.system, boiler: { fuel: 'lpg', calorificValue: 39.5 } } },
      'system.boiler.calorificValue',
    ],
    [
      'a sensor that is no tank sensor',
      { system: { ...FULL_SYSTEM, cylinder: { volumeLitres: 180, sensors: [{ channel: 'ambient' }] } } },
      'system.cylinder.sensors[0].channel',
    ],
    [
      'a misspelt field deep inside',
      { system: { ...FULL_SYSTEM, cylinder: { volumeLitres: 180, declaredLoss: 1.6 } } },
      'system.cylinder.declaredLoss',
    ],
    ['a tariff without a currency', { tariff: { ...TARIFF, currency: 'pounds' } }, 'tariff.currency'],
    ['a day that no calendar has', { tariff: { ...TARIFF, from: '2026-02-30' } }, 'tariff.from'],
    ['a year before all meters', { system: { ...SMALL_HOME.system, from: '0000-01-01' } }, 'system.from'],
    ['half a character in a note', { system: { ...SMALL_HOME.system, note: 'x\ud800' } }, 'system.note'],
  ])('when it has %s, then 422 names the field and nothing is added', async (_what, change, path) => {
    const owner = await t.person();
    const answer = await owner.agent.post('/api/properties').send({ ...SMALL_HOME, ...change });
    expect(answer.status).toBe(422);
    expect(paths(answer.body)).toEqual([path]);
    expect(answer.body.errors[0].message.length).toBeGreaterThan(5);
    expect((await owner.agent.get('/api/properties')).body).toEqual({ properties: [] });
  });
});

describe('GET /api/properties', () => {
  it('when people have properties, then each sees their own by name', async () => {
    const owner = await t.person();
    const other = await t.person();
    const b = await t.property(owner, { name: 'B home' });
    const a = await t.property(owner, { name: 'A home' });
    await t.property(other, { name: 'Another’s' });
    const { body } = await owner.agent.get('/api/properties').expect(200);
    const summary = {
      timeZone: 'Europe/London',
      country: null,
      role: 'occupier',
      firstDay: null,
      lastDay: null,
      volumeLitres: 210,
      demo: false,
    };
    expect(body).toEqual({
      properties: [
        { id: a.id, name: 'A home', ...summary },
        { id: b.id, name: 'B home', ...summary },
      ],
    });
  });

  it('when the person is an administrator, then that shows them no property', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    const administrator = await t.person();
    await t.db.query('update people set administrator = true where id = $1', [administrator.id]);
    expect((await administrator.agent.get('/api/properties')).body).toEqual({ properties: [] });
    await administrator.agent.get(`/api/properties/${id}`).expect(404);
  });
});

describe('GET /api/properties/:id', () => {
  it('when it is another’s, does not exist or is no id at all, then the same 404', async () => {
    const owner = await t.person();
    const other = await t.person();
    const { id } = await t.property(owner);
    const answers = [];
    for (const which of [id, 'a'.repeat(16), 'nonsense', '%00', `${id}-1`, encodeURIComponent(`${id}'--`)])
      answers.push(await other.agent.get(`/api/properties/${which}`));
    for (const { status, body } of answers) {
      expect(status).toBe(404);
      expect({ ...body, requestId: '' }).toEqual({ ...answers[0]?.body, requestId: '' });
    }
  });
});

describe('PATCH /api/properties/:id', () => {
  it('when some fields are named, then these change and the rest stays', async () => {
    const owner = await t.person();
    const before = await t.property(owner, { country: 'GB', latitude: 52, longitude: -1, ready: { time: '17:00' } });
    const answer = await owner.agent
      .patch(`/api/properties/${before.id}`)
      .send({ name: 'Another name', timeZone: 'Europe/Dublin', country: null, ready: { temperatureC: 48 } });
    expect(answer.status).toBe(200);
    expect(answer.body).toEqual({
      ...before,
      name: 'Another name',
      timeZone: 'Europe/Dublin',
      country: null,
      ready: { time: '17:00', temperatureC: 48 },
      defaults: before.defaults.filter((taken) => taken.path !== 'ready.temperatureC'),
    });
    const back = await owner.agent.patch(`/api/properties/${before.id}`).send({ ready: { time: null } });
    expect(back.body.ready).toEqual({ time: '18:00', temperatureC: 48 });
    expect((await owner.agent.get(`/api/properties/${before.id}`)).body).toEqual(back.body);
  });

  it('when a field is wrong or not to be changed here, then 422 and all stays', async () => {
    const owner = await t.person();
    const before = await t.property(owner);
    for (const [body, path] of [
      [{ name: '' }, 'name'],
      [{ timeZone: 'Mars/Base' }, 'timeZone'],
      [{ teamId: 'x' }, 'teamId'],
      [{ id: 'x' }, 'id'],
    ] as const) {
      const answer = await owner.agent.patch(`/api/properties/${before.id}`).send(body);
      expect([answer.status, paths(answer.body)]).toEqual([422, [path]]);
    }
    expect((await owner.agent.get(`/api/properties/${before.id}`)).body).toEqual(before);
  });

  it('when nothing is named, then nothing changes', async () => {
    const owner = await t.person();
    const before = await t.property(owner);
    const answer = await owner.agent.patch(`/api/properties/${before.id}`).send({});
    expect([answer.status, answer.body]).toEqual([200, before]);
  });
});

describe('PUT /api/properties/:id/system', () => {
  const put = (owner: Awaited<ReturnType<typeof t.person>>, id: string, body: object) =>
    owner.agent.put(`/api/properties/${id}/system`).send(body);
  const system = (volumeLitres: number, from?: string) => ({
    cylinder: { volumeLitres },
    boiler: { fuel: 'gas' },
    ...(from && { from }),
  });

  it('when records are put in any order, then each holds from its day, and the one of today is current', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    await put(owner, id, system(250, '2027-01-01')).expect(200);
    const answer = await put(owner, id, system(180, '2025-06-01'));
    expect(answer.status).toBe(200);
    expect(answer.body.system).toEqual(system(180, '2025-06-01'));
    expect(answer.body.volumeLitres).toBe(180);
    expect(answer.body.systems).toEqual([
      system(210, '1970-01-01'),
      system(180, '2025-06-01'),
      system(250, '2027-01-01'),
    ]);
  });

  it('when the same day is put again, then it is replaced', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    await put(owner, id, system(180, '2025-06-01')).expect(200);
    const answer = await put(owner, id, { ...FULL_SYSTEM, from: '2025-06-01' }).expect(200);
    expect(answer.body.systems).toEqual([system(210, '1970-01-01'), { ...FULL_SYSTEM, from: '2025-06-01' }]);
  });

  it('when it holds from today, then today is the property’s own', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner, { timeZone: 'Pacific/Auckland' });
    const answer = await put(owner, id, system(150, '2026-06-16')).expect(200);
    expect(answer.body.volumeLitres).toBe(150);
    const london = await t.property(owner);
    const tomorrow = await put(owner, london.id, system(150, '2026-06-16')).expect(200);
    expect(tomorrow.body.volumeLitres).toBe(210);
  });

  it('when the day is missing or a field is wrong, then 422 and the records stay', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    const undated = await put(owner, id, system(150));
    expect([undated.status, paths(undated.body)]).toEqual([422, ['from']]);
    const wrong = await put(owner, id, { ...system(150, '2025-01-01'), boiler: { fuel: 'coal' } });
    expect([wrong.status, paths(wrong.body)]).toEqual([422, ['boiler.fuel']]);
    expect((await owner.agent.get(`/api/properties/${id}`)).body.systems).toHaveLength(1);
  });

  it('when it is another’s property or the person a reader, then 404 or 403', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    const other = await t.person();
    const reader = await t.member(owner, 'reader');
    await put(other, id, system(150, '2025-01-01')).expect(404);
    const refused = await put(reader, id, system(150, '2025-01-01'));
    expect(refused.status).toBe(403);
    expect(refused.body.detail).toContain('change the record');
    const seen = await reader.agent.get(`/api/properties/${id}`).expect(200);
    expect(seen.body).toMatchObject({ mayEdit: false, mayUpload: false, mayGrant: false, maySeeTraces: true });
    expect(seen.body.systems).toHaveLength(1);
  });
});

describe('PUT /api/properties/:id/tariffs', () => {
  it('when tariffs are put with and without a day, then the undated one holds from the beginning', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    const put = (body: object) => owner.agent.put(`/api/properties/${id}/tariffs`).send(body);
    await put({ ...TARIFF, from: '2026-04-01' }).expect(200);
    const first = await put({ ...TARIFF, fuelPerKwh: 0.05 }).expect(200);
    expect(first.body.tariff).toEqual({ ...TARIFF, from: '2026-04-01' });
    const replaced = await put({ ...TARIFF, fuelPerKwh: 0.04 }).expect(200);
    expect(replaced.body.tariffs).toEqual([
      { ...TARIFF, fuelPerKwh: 0.04, from: '1970-01-01' },
      { ...TARIFF, from: '2026-04-01' },
    ]);
    const wrong = await put({ ...TARIFF, windows: [{ ...TARIFF.windows[0], clock: 'cuckoo' }] });
    expect([wrong.status, paths(wrong.body)]).toEqual([422, ['windows[0].clock']]);
  });
});

describe('GET /api/reference/boiler-kinds', () => {
  it('when it is read, then it has the winter and summer values of SAP Table 4b, each with its source', async () => {
    const owner = await t.person();
    const { body } = await owner.agent.get('/api/reference/boiler-kinds').expect(200);
    // SAP 2012 (9.92) Table 4b, second-hand: code → winter and summer, per cent of gross.
    const published: Record<number, [number, number]> = {
      101: [74, 64],
      102: [84, 74],
      103: [74, 65],
      104: [84, 75],
      105: [70, 60],
      106: [80, 70],
      109: [66, 56],
      110: [73, 63],
      111: [69, 59],
      115: [66, 56],
      116: [56, 46],
      124: [66, 54],
      125: [71, 59],
      126: [80, 68],
      127: [84, 72],
      130: [82, 73],
    };
    const got = Object.fromEntries(
      body.kinds.map((kind: { source: string; winter: number; summer: number }) => [
        Number(/code (\d+)/.exec(kind.source)?.[1]),
        [kind.winter * 100, kind.summer * 100].map((value) => Math.round(value * 1e6) / 1e6),
      ]),
    );
    expect(got).toEqual(published);
    expect(body.kinds[0]).toMatchObject({ id: 'condensing-regular', fuels: ['gas', 'lpg'] });
  });
});

describe('the trail of a property', () => {
  it('when people act on it, then it says who did what', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner);
    await owner.agent.patch(`/api/properties/${id}`).send({ name: 'New name' }).expect(200);
    const { body } = await owner.agent.get(`/api/properties/${id}/trail`).expect(200);
    expect(body.entries.map((entry: { who: string; act: string }) => [entry.who, entry.act])).toEqual([
      [owner.name, 'property changed'],
      [owner.name, 'property added'],
    ]);
  });
});
