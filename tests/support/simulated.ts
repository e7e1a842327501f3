import { coarse, counter, isLevel, type Measured, type MeasuredName } from '../../samples/make/measure.ts';
import type { LayerColumn, LogLayer } from '../../shared/energy/layer.ts';

const MINUTE = 60_000;
const DAY = 86_400_000;

export interface LoggedAs {
  channels: readonly MeasuredName[];
  /** Minutes between rows. */
  every: number;
  /** Which log this is; a later one speaks before an earlier one. */
  log?: number;
  /** Counters instead of powers, with this last digit in kWh. */
  registerKwh?: number;
}

/** What a simulated home measured, as the layers of one log: powers as means from the stamp on, temperatures at the stamp. */
export function layersOf(measured: Measured, { channels, every, log = 0, registerKwh }: LoggedAs): LogLayer[] {
  const register = (name: MeasuredName): boolean => registerKwh !== undefined && !isLevel(name);
  const columns = channels.map((name) => {
    const minutes = measured.channels[name];
    if (!minutes) throw new RangeError(`this home measured no ${name}`);
    const values = coarse(minutes, every, isLevel(name));
    if (!register(name)) return { name, values };
    const resets = (measured.resets[name] ?? []).map((at) => Math.round(at / every));
    return { name, values: counter(values, every, 1000, registerKwh ?? 0.001, resets) };
  });
  const count = Math.max(...columns.map(({ values }) => values.length));
  const layers: LogLayer[] = [];
  for (let from = 0; from < count;) {
    const utcDay = Math.floor((measured.start + from * every * MINUTE) / DAY);
    let to = from;
    while (to < count && Math.floor((measured.start + to * every * MINUTE) / DAY) === utcDay) to++;
    const size = to - from;
    layers.push({
      log,
      utcDay,
      instants: Float64Array.from({ length: size }, (_, i) => measured.start + (from + i) * every * MINUTE),
      columns: columns.map(({ name, values }): LayerColumn => {
        const state = name === 'relay';
        const level = isLevel(name) && !state;
        const scale = state ? 0 : level ? 2 : register(name) ? 3 : 1;
        return {
          channel: name,
          kind: state ? 'state' : level ? 'level' : register(name) ? 'register' : 'power',
          unit: state ? 'state' : level ? 'C' : register(name) ? 'kWh' : 'W',
          sign: 1,
          factor: 1,
          stamp: isLevel(name) || register(name) ? 'instant' : 'start',
          hold: state ? 'toNext' : null,
          sleeps: null,
          intervalSeconds: every * 60,
          scale,
          values: Float64Array.from({ length: size }, (_, i) => Math.round((values[from + i] ?? NaN) * 10 ** scale)),
        };
      }),
    });
    from = to;
  }
  return layers;
}
