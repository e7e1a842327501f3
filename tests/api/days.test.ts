import { describe, expect, it } from 'vitest';
import { FIGURES } from '../../shared/api/day.ts';
import type { ColumnPlan } from '../../shared/api/plan.ts';
import { SMALL_HOME, useApp } from '../support/app.ts';
import { HALF_HOURS, halfHours } from '../support/csv.ts';
import { daysOf, keep, useWorker } from '../support/worker.ts';

const t = useApp();
useWorker(t);

const WEEK = halfHours('2023-06-01T00:00:00Z', 7 * 48);

async function home(timeZone = 'UTC') {
  const owner = await t.person();
  const { id } = await t.property(owner, { timeZone });
  return { owner, agent: owner.agent, id };
}

describe('GET /api/properties/:id/days', () => {
  it('when nothing is known of a date, then its day is there with nulls and reasons', async () => {
    const { agent, id } = await home('Europe/London');
    const answer = await daysOf(agent, id, '2023-03-25', '2023-03-27');
    expect(answer).toMatchObject({ timeZone: 'Europe/London', currency: null });
    expect(answer.days.map(({ date, hours }) => [date, hours])).toEqual([
      ['2023-03-25', 24],
      ['2023-03-26', 23],
      ['2023-03-27', 24],
    ]);
    for (const day of answer.days) {
      expect(day).toMatchObject({ complete: false, coverage: {}, spreadKwh: {}, rests: {} });
      for (const figure of FIGURES) expect(day[figure]).toBeNull();
      expect(Object.keys(day.reasons).length).toBeGreaterThan(0);
    }
    expect(answer.totals).toMatchObject({ days: 3, completeDays: 0, exportKwh: null, coverage: {} });
  });

  it('when only a part is covered, then days before and after are empty and the totals say how many are complete', async () => {
    const { agent, id } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    const { days, totals } = await daysOf(agent, id, '2023-05-31', '2023-06-08');
    expect(days.map(({ coverage }) => coverage.export ?? null)).toEqual([null, 1, 1, 1, 1, 1, 1, 1, null]);
    expect(totals).toMatchObject({ date: '2023-05-31', to: '2023-06-08', days: 9, completeDays: 7 });
    // 336 half hours of 200 W and 1,000 W.
    expect(totals.exportKwh).toBeCloseTo(33.6, 9);
    expect(totals.heaterKwh).toBeCloseTo(168, 9);
  });

  it.each([
    ['2023-06-02', '2023-06-01', 'to'],
    ['2010-01-01', '2020-12-14', 'to'],
    ['2023-02-29', '2023-03-01', 'from'],
    ['2023-02-01', 'soon', 'to'],
  ])('when days from %s to %s are asked for, then 422 names %s', async (from, to, path) => {
    const { agent, id } = await home();
    const answer = await agent.get(`/api/properties/${id}/days`).query({ from, to });
    expect(answer.status).toBe(422);
    expect(answer.body.errors.map((error: { path: string }) => error.path)).toContain(path);
  });

  it('when 4,000 days are asked for, then they come', async () => {
    const { agent, id } = await home();
    const { days } = await daysOf(agent, id, '2010-01-01', '2020-12-13');
    expect(days).toHaveLength(4000);
  });

  it('when from or to is missing 422, nobody 401, a stranger 404', async () => {
    const { agent, id } = await home();
    const path = `/api/properties/${id}/days`;
    const query = { from: '2023-06-01', to: '2023-06-02' };
    await agent.get(path).expect(422);
    await t.nobody().get(path).query(query).expect(401);
    await (await t.person()).agent.get(path).query(query).expect(404);
  });
});

describe('figures after a change of records', () => {
  it('when a tariff is recorded, then the next answer has its money', async () => {
    const { agent, id } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    expect((await daysOf(agent, id, '2023-06-02', '2023-06-02')).days[0].netSaving).toBeNull();
    await agent
      .put(`/api/properties/${id}/tariffs`)
      .send({ currency: 'GBP', fuelPerKwh: 0.1, importPerKwh: 0.3, exportPerKwh: 0.05 })
      .expect(200);
    const { days, currency } = await daysOf(agent, id, '2023-06-02', '2023-06-02');
    expect(currency).toBe('GBP');
    const [{ gasDisplacedKwh, divertedKwh, netSaving, savingTerms }] = days;
    // fuel × price − export given up × its price, without bought heat: energy.md, net saving.
    expect(savingTerms.fuel).toBeCloseTo((gasDisplacedKwh ?? NaN) * 0.1, 6);
    expect(netSaving).toBeCloseTo((gasDisplacedKwh ?? NaN) * 0.1 - (divertedKwh ?? NaN) * 0.05, 5);
  });

  it('when the system changes from a day on, then days before stay and days after follow', async () => {
    const { agent, id } = await home();
    await keep(agent, id, WEEK, HALF_HOURS);
    const before = await daysOf(agent, id, '2023-06-01', '2023-06-07');
    const boiler = { ...SMALL_HOME.system.boiler, efficiency: 0.5, efficiencyIs: 'hotWater' };
    await agent
      .put(`/api/properties/${id}/system`)
      .send({ ...SMALL_HOME.system, boiler, from: '2023-06-04' })
      .expect(200);
    const after = await daysOf(agent, id, '2023-06-01', '2023-06-07');
    expect(after.days.slice(0, 3)).toEqual(before.days.slice(0, 3));
    for (const day of after.days.slice(3)) expect(day.gasDisplacedKwh).toBeCloseTo((day.usefulHeatKwh ?? NaN) / 0.5, 5);
  });

  it('when the zone changes, then days are cut anew and stamps are not read again', async () => {
    const { agent, id } = await home('UTC');
    const log = await keep(agent, id, WEEK, HALF_HOURS);
    await agent.patch(`/api/properties/${id}`).send({ timeZone: 'Asia/Tokyo' }).expect(200);
    const { days, timeZone } = await daysOf(agent, id, '2023-05-31', '2023-06-08');
    expect(timeZone).toBe('Asia/Tokyo');
    // 00:00 UTC is 09:00 in Tokyo, without summer time: 15 hours of the first day, nine of the one after the last.
    expect(days.map(({ exportKwh }) => exportKwh)).toEqual([null, 3, 4.8, 4.8, 4.8, 4.8, 4.8, 4.8, 1.8]);
    const again = await agent.get(`/api/logs/${log.id}`).expect(200);
    expect(again.body.log).toMatchObject({ from: '2023-06-01T00:00:00.000Z', to: '2023-06-07T23:30:00.000Z' });
    await agent.patch(`/api/properties/${id}`).send({ timeZone: 'UTC' }).expect(200);
    expect((await daysOf(agent, id, '2023-05-31', '2023-06-01')).days.map(({ exportKwh }) => exportKwh)).toEqual([
      null,
      4.8,
    ]);
  });
});

describe('any order of logs that agree', () => {
  /** One truth, cut into five overlapping files of one meter. */
  const truth = (_row: number, at: number): [number, number] => [(at / 1_800_000) % 977, ((at / 1_800_000) * 7) % 1301];
  const FILES = [
    halfHours('2023-05-28T00:00:00Z', 48 * 4, truth),
    halfHours('2023-05-31T06:00:00Z', 48 * 3, truth),
    halfHours('2023-05-30T00:00:00Z', 48 * 5, truth),
    halfHours('2023-06-02T11:30:00Z', 30, truth),
    halfHours('2023-06-03T00:00:00Z', 48 * 2, truth),
  ];
  const ORDERS = [
    [0, 1, 2, 3, 4],
    [4, 3, 2, 1, 0],
    [2, 0, 4, 1, 3],
    [1, 3, 0, 4, 2, 1, 0],
  ];

  it('when they come in any order, with repeats, then the days are the same to the last digit', async () => {
    const answers = [];
    for (const order of ORDERS) {
      const { agent, id } = await home('Europe/London');
      for (const n of order) await keep(agent, id, FILES[n], HALF_HOURS);
      answers.push(await daysOf(agent, id, '2023-05-27', '2023-06-06'));
    }
    const whole = await home('Europe/London');
    await keep(whole.agent, whole.id, halfHours('2023-05-28T00:00:00Z', 48 * 8, truth), HALF_HOURS);
    answers.push(await daysOf(whole.agent, whole.id, '2023-05-27', '2023-06-06'));
    for (const answer of answers.slice(1)) expect(answer).toEqual(answers[0]);
    expect(answers[0].totals.completeDays).toBeGreaterThan(5);
  }, 120_000);
});

describe('registers', () => {
  const REGISTER: ColumnPlan = {
    ...HALF_HOURS,
    time: { ...HALF_HOURS.time, stamp: 'instant' },
    columns: [{ column: 'export_kwh', channel: 'export', kind: 'register', unit: 'kWh', sign: 1 }],
  };
  const file = (rows: [string, number][]) => `time,export_kwh\n${rows.map((row) => row.join(',')).join('\n')}\n`;

  it('when a register is read over months, in one file or two, any order, then its energy is spread the same', async () => {
    const rows: [string, number][] = [
      ['2023-01-10T00:00:00Z', 100],
      ['2023-01-30T00:00:00Z', 120],
      ['2023-02-27T00:00:00Z', 148],
      ['2023-03-20T00:00:00Z', 169],
    ];
    const answers = [];
    for (const files of [[rows], [rows.slice(0, 2), rows.slice(2)], [rows.slice(2), rows.slice(0, 2)]]) {
      const { agent, id } = await home();
      for (const part of files) await keep(agent, id, file(part), REGISTER);
      answers.push(await daysOf(agent, id, '2023-01-01', '2023-03-31'));
    }
    for (const { days, totals } of answers) {
      // One kWh a day throughout, none of it measured day by day.
      expect(days.filter(({ spreadKwh }) => spreadKwh.export !== undefined)).toHaveLength(69);
      for (const day of days) {
        expect(day.exportKwh).toBeNull();
        if (day.spreadKwh.export !== undefined) expect(day.spreadKwh.export).toBeCloseTo(1, 6);
      }
      expect(totals.exportKwh).toBeCloseTo(69, 4);
    }
  }, 60_000);
});

describe('GET /api/properties/:id/cylinder', () => {
  it('when a loss is declared, then it stands as W per K; what readings do not show is null', async () => {
    const owner = await t.person();
    const { id } = await t.property(owner, {
      system: { cylinder: { volumeLitres: 210, declaredLossKwhPerDay: 1.62 }, boiler: { fuel: 'gas' } },
    });
    const { body } = await owner.agent.get(`/api/properties/${id}/cylinder`).expect(200);
    expect(body).toMatchObject({ uaWPerK: null, uaRange: null, nights: 0, f: 0.9 });
    // 1.62 kWh/24h over 45 K: 1.5 W/K.
    expect(body.declaredUaWPerK).toBeCloseTo(1.5, 9);
    await t.nobody().get(`/api/properties/${id}/cylinder`).expect(401);
    await (await t.person()).agent.get(`/api/properties/${id}/cylinder`).expect(404);
  });
});
