import { describe, expect, it } from 'vitest';
import type { ReadingsAnswer } from '../../shared/api/day.ts';
import type { ColumnPlan } from '../../shared/api/plan.ts';
import { useApp } from '../support/app.ts';
import { HALF_HOURS, halfHours } from '../support/csv.ts';
import { keep, useWorker } from '../support/worker.ts';

const t = useApp();
useWorker(t);

const HALF_HOUR = 1_800_000;
const START = Date.parse('2023-06-01T00:00:00Z');

async function home() {
  const owner = await t.person();
  const { id } = await t.property(owner, { timeZone: 'UTC' });
  const read = async (query: Record<string, string | number>) => {
    const { body } = await owner.agent.get(`/api/properties/${id}/readings`).query(query).expect(200);
    return body as ReadingsAnswer;
  };
  return { owner, agent: owner.agent, id, read };
}

const JUNE = { channel: 'export', from: '2023-06-01T00:00:00Z', to: '2023-07-01T00:00:00Z' };

describe('GET /api/properties/:id/readings', () => {
  it('when all readings fit, then each is there, and the line ends where the last interval does', async () => {
    const { agent, id, read } = await home();
    await keep(
      agent,
      id,
      halfHours('2023-06-01T00:00:00Z', 96, (i) => [i, '']),
      HALF_HOURS,
    );
    expect(await read(JUNE)).toEqual({
      channel: 'export',
      unit: 'W',
      points: [...Array.from({ length: 96 }, (_, i) => [START + i * HALF_HOUR, i]), [START + 96 * HALF_HOUR, 95]],
    });
    expect((await read({ ...JUNE, channel: 'diversion' })).points).toEqual([]);
    expect(await read({ ...JUNE, channel: 'tankTop' })).toEqual({ channel: 'tankTop', unit: 'C', points: [] });
  });

  it('when readings are missing, then the line has a gap and no zero', async () => {
    const { agent, id, read } = await home();
    await keep(
      agent,
      id,
      halfHours('2023-06-01T00:00:00Z', 40, (i) => [i >= 10 && i < 30 ? '' : 5, 1]),
      HALF_HOURS,
    );
    const { points } = await read(JUNE);
    const gap = points.findIndex(([, value]) => value === null);
    expect(points[gap][0]).toBe(START + 10 * HALF_HOUR);
    expect(points[gap + 1]).toEqual([START + 30 * HALF_HOUR, 5]);
    expect(points.filter(([, value]) => value === 0)).toEqual([]);
  });

  it('when there are more readings than points, then no more come than asked, the extremes among them', async () => {
    const { agent, id, read } = await home();
    const odd = new Map([
      [777, 9000],
      [1001, -3],
    ]);
    const csv = halfHours('2023-06-01T00:00:00Z', 48 * 30, (i) => [
      odd.get(i) ?? 100 + (i % 50),
      i % 200 < 20 ? '' : 1,
    ]);
    await keep(agent, id, csv, HALF_HOURS);
    for (const points of [2, 3, 10, 100, 1000]) {
      const line = (await read({ ...JUNE, points })).points;
      expect(line.length).toBeLessThanOrEqual(points);
      expect(line.map(([ms]) => ms)).toEqual(line.map(([ms]) => ms).sort((a, b) => a - b));
      if (points >= 3) expect(line).toContainEqual([START + 777 * HALF_HOUR, 9000]);
    }
    const other = (await read({ ...JUNE, channel: 'diversion', points: 30 })).points;
    expect(other.length).toBeLessThanOrEqual(30);
    expect(other.some(([, value]) => value === null)).toBe(true);
  });

  it('when a part is asked for, then it begins and ends there', async () => {
    const { agent, id, read } = await home();
    await keep(
      agent,
      id,
      halfHours('2023-06-01T00:00:00Z', 48, (i) => [i, 1]),
      HALF_HOURS,
    );
    const { points } = await read({ ...JUNE, from: '2023-06-01T01:15:00Z', to: '2023-06-01T02:10:00+00:00' });
    const at = (text: string) => Date.parse(`2023-06-01T${text}:00Z`);
    expect(points).toEqual([
      [at('01:15'), 2],
      [at('01:30'), 3],
      [at('02:00'), 4],
      [at('02:10'), 4],
    ]);
  });

  it('when energies, registers and temperatures come, then as mean power and °C; as read they come as written', async () => {
    const { agent, id, read } = await home();
    const plan: ColumnPlan = {
      ...HALF_HOURS,
      columns: [
        { column: 'a', channel: 'export', kind: 'energy', unit: 'Wh', sign: 1 },
        { column: 'b', channel: 'import', kind: 'register', unit: 'kWh', sign: 1 },
        { column: 'c', channel: 'tankTop', kind: 'level', unit: 'F', sign: 1 },
      ],
    };
    const rows = Array.from({ length: 4 }, (_, i) => {
      const at = new Date(START + i * HALF_HOUR).toISOString();
      return `${at},${(i + 1) * 10},${(12345.0 + i * 0.25).toFixed(2)},${122 + i * 9}.0`;
    });
    await keep(agent, id, `time,a,b,c\n${rows.join('\n')}\n`, plan);
    const values = async (query: Record<string, string>) => {
      const { unit, points } = await read({ ...JUNE, ...query });
      return [unit, ...points.map(([, value]) => value)];
    };
    // 10 Wh in half an hour are 20 W; 0.25 kWh in half an hour are 500 W; 122 °F are 50 °C.
    expect(await values({ channel: 'export' })).toEqual(['W', 20, 40, 60, 80, 80]);
    expect(await values({ channel: 'import' })).toEqual(['W', 500, 500, 500, 500]);
    const [unit, ...celsius] = await values({ channel: 'tankTop' });
    expect(unit).toBe('C');
    celsius.forEach((value, i) => expect(value).toBeCloseTo(50 + i * 5, 9));
    expect(await values({ channel: 'export', as: 'read' })).toEqual(['Wh', 10, 20, 30, 40]);
    expect(await values({ channel: 'import', as: 'read' })).toEqual(['kWh', 12345, 12345.25, 12345.5, 12345.75]);
    expect(await values({ channel: 'tankTop', as: 'read' })).toEqual(['F', 122, 131, 140, 149]);
  });

  it('when the order or the fields are wrong 422, nobody 401, a stranger 404', async () => {
    const { agent, id } = await home();
    const path = `/api/properties/${id}/readings`;
    for (const query of [
      { ...JUNE, from: JUNE.to, to: JUNE.from },
      { ...JUNE, to: JUNE.from },
      { ...JUNE, channel: 'moon' },
      { ...JUNE, points: 1 },
      { ...JUNE, points: 20_001 },
      { ...JUNE, from: '2023-06-01' },
      { channel: 'export' },
      { ...JUNE, as: 'drawn' },
    ])
      expect((await agent.get(path).query(query)).status).toBe(422);
    await t.nobody().get(path).query(JUNE).expect(401);
    await (await t.person()).agent.get(path).query(JUNE).expect(404);
  });
});
