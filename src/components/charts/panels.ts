import type { Channel } from '../../../shared/units/channels.ts';
import { CHANNEL_LABELS } from '../../composables/figure-channels.ts';
import type { Points } from '../../composables/hours.ts';
import type { Meaning } from '../../styles/tokens.ts';

/** How a trace is drawn: the line’s kind is the second cue beside its colour. */
export interface Trace {
  channel: Channel;
  name: string;
  meaning: Meaning | 'ink' | 'pencil';
  line: 'solid' | 'dashed' | 'dotted';
  fill: boolean;
  /** A state or a step: it holds until the next point. */
  hold: boolean;
  points: Points;
}

/** Panels one above the other, on one axis of time. */
export interface Panel {
  title: string;
  unit: string;
  /** Small panels are for states. */
  small?: boolean;
  traces: Trace[];
}

type Style = Omit<Trace, 'channel' | 'name' | 'points'>;
const style = (meaning: Trace['meaning'], line: Trace['line'], fill = false, hold = false): Style => ({
  meaning,
  line,
  fill,
  hold,
});

interface Plan {
  title: string;
  unit: string;
  small?: boolean;
  channels: Partial<Record<Channel, Style>>;
}

const PLANS: readonly Plan[] = [
  {
    title: 'Surplus',
    unit: 'W',
    channels: {
      diversion: style('sun', 'solid', true),
      diversion2: style('sun', 'dashed', true),
      export: style('exported', 'dashed', true),
    },
  },
  {
    title: 'Made and bought',
    unit: 'W',
    channels: {
      generation: style('pencil', 'dashed'),
      import: style('ink', 'solid'),
      battery: style('pencil', 'dotted'),
      charger: style('ink', 'dotted'),
    },
  },
  {
    title: 'Temperatures',
    unit: '°C',
    channels: {
      tankTop: style('tank', 'solid'),
      tankMiddle: style('tank', 'dashed'),
      tankBottom: style('tank', 'dotted'),
      coldFeed: style('water', 'dashed'),
      ambient: style('pencil', 'dotted'),
    },
  },
  { title: 'Fuel', unit: 'W', channels: { gas: style('fuel', 'solid', true) } },
  { title: 'Relay on', unit: '', small: true, channels: { relay: style('fuel', 'solid', true, true) } },
];

/** What was read of a day: for each channel its points, in the unit that they came in. */
export type Read = Partial<Record<Channel, { points: Points; unit: string }>>;

/** A unit as it is shown; a fuel meter may count volume or energy. */
export function unitShown(unit: string): string {
  return { C: '°C', 'm3/h': 'm³/h', state: '' }[unit] ?? unit;
}

const unitOf = (plan: Plan, read: Read, channel: Channel): string =>
  plan.small ? plan.unit : unitShown(read[channel]?.unit ?? plan.unit);

/** The channels that a day’s panels can show. */
export const DRAWN: readonly Channel[] = PLANS.flatMap((plan) => Object.keys(plan.channels) as Channel[]);

/** Panels for what was read; a panel without any trace is left out. */
export function panelsOf(read: Read): Panel[] {
  return PLANS.flatMap((plan) => {
    const traces = (Object.entries(plan.channels) as [Channel, Style][]).flatMap(([channel, drawn]) => {
      const points = read[channel]?.points;
      return points?.length ? [{ channel, name: CHANNEL_LABELS[channel], points, ...drawn }] : [];
    });
    return traces.length > 0
      ? [{ title: plan.title, unit: unitOf(plan, read, traces[0].channel), small: plan.small, traces }]
      : [];
  });
}
