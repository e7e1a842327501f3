import type { ColumnPlan } from '../../shared/api/plan.ts';

/** Half-hourly means of exported and diverted power, stamped by the start of their interval, in UTC. */
export const HALF_HOURS: ColumnPlan = {
  encoding: 'utf-8',
  delimiter: ',',
  decimal: '.',
  headerLine: 1,
  time: { columns: ['time'], format: 'iso', zone: 'UTC', stamp: 'start' },
  columns: [
    { column: 'export_w', channel: 'export', kind: 'power', unit: 'W', sign: 1 },
    { column: 'diversion_w', channel: 'diversion', kind: 'power', unit: 'W', sign: 1 },
  ],
};

const HALF_HOUR = 1_800_000;

/**
 * A file for that plan.
 * @param from first instant, such as `2023-06-01T00:00:00Z`
 * @param rows how many half hours
 * @param watts what the two columns say in a row
 */
export function halfHours(
  from: string,
  rows: number,
  watts: (row: number, at: number) => [number | '', number | ''] = () => [200, 1000],
): string {
  const start = Date.parse(from);
  const lines = Array.from({ length: rows }, (_, i) => {
    const at = start + i * HALF_HOUR;
    return `${new Date(at).toISOString().slice(0, 19)}Z,${watts(i, at).join(',')}`;
  });
  return `time,export_w,diversion_w\n${lines.join('\n')}\n`;
}
