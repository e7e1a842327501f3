import type { PlanColumn } from '../../api/plan.ts';
import { ALLOWED, type Channel, type Kind, QUANTITY, type Unit } from '../../units/channels.ts';
import { isCounter, type Series } from './series.ts';
import { kindOfUnit, POWER_UNITS } from './words.ts';

/** One way to read a series. */
export interface Option {
  column: PlanColumn;
  reason: string;
}

/** How a series is understood. */
export interface Proposal {
  series: Series;
  /** The first is what it is taken for; none: it is left out. */
  options: Option[];
  confidence: number;
  reason: string;
  /** What is asked about it; null if nothing is. */
  question: string | null;
}

const DAY_MS = 86_400_000;

/** The channel that a heading's words name, if they name one alone. */
function channelOfWords({ words }: Series): {
  channel: Channel | null;
  tank: boolean;
  signed: boolean;
  certain: boolean;
} {
  const has = words.has;
  const result = (channel: Channel | null, certain = true, signed = false): ReturnType<typeof channelOfWords> => ({
    channel,
    tank: false,
    signed,
    certain,
  });
  if (has('gas')) return result('gas');
  if (has('charger') && !has('tank')) return result('charger');
  if (has('battery') && !has('temperature')) return result('battery', true, true);
  if (has('diversion')) return result(has('second') || words.words.includes('heater2') ? 'diversion2' : 'diversion');
  if (has('export') && has('import')) return result('grid', false, true);
  if (has('export')) return result('export');
  if (has('import')) return result('import');
  if (has('generation')) return result('generation');
  if (has('grid')) return result('grid', true, true);
  return result(null, false);
}

function temperatureChannel(series: Series): { channel: Channel; certain: boolean } | 'tank' | 'unknown' | 'none' {
  const has = series.words.has;
  if (has('outside') || has('generation') || has('battery')) return 'none';
  if (has('coldFeed') && !has('tank')) return { channel: 'coldFeed', certain: true };
  const position = has('top') ? 'tankTop' : has('middle') ? 'tankMiddle' : has('bottom') ? 'tankBottom' : null;
  if (position !== null && !has('ambient')) return { channel: position, certain: true };
  if (has('ambient')) return { channel: 'ambient', certain: true };
  if (has('tank') || has('water')) return 'tank';
  return 'unknown';
}

/** Whether rises are whole numbers of a step, within the rounding of the file. */
function quantum(rises: readonly number[], low: number, high: number, rounding: number): number | null {
  const used = rises.filter((rise) => rise > low / 2).slice(0, 400);
  if (used.length < 20) return null;
  let best: number | null = null;
  let bestMiss = Infinity;
  for (let step = low; step <= high; step += (high - low) / 200) {
    let miss = 0;
    for (const rise of used) {
      const rest = Math.abs(rise - Math.round(rise / step) * step);
      // Long rises add the error of the step itself and say little.
      if (rise < 5 * step) miss += rest;
    }
    if (miss < bestMiss) {
      bestMiss = miss;
      best = step;
    }
  }
  if (best === null) return null;
  const step = best;
  const short = used.filter((rise) => rise < 5 * step);
  const fit = short.filter((rise) => Math.abs(rise - Math.round(rise / step) * step) <= rounding * 1.1).length;
  return short.length >= 20 && rounding * 4 < step && fit >= 0.97 * short.length ? step : null;
}

/** The kind and unit that a series' numbers can have, likeliest first. */
function forms(series: Series, channel: Channel): { kind: Kind; unit: Unit; why: string; sure: number }[] {
  const { words, facts } = series;
  const allowed = ALLOWED[QUANTITY[channel]];
  const counter = isCounter(facts);
  const amountKind = (unit: Unit): { kind: Kind; unit: Unit; why: string; sure: number }[] => {
    const register = { kind: 'register' as const, unit, why: 'its values only rise: a counter', sure: 0.95 };
    const energy = {
      kind: 'energy' as const,
      unit,
      why: 'its values rise and fall: the amount of each interval',
      sure: 0.95,
    };
    if (channel === 'grid' || channel === 'battery') {
      if (counter === 'yes') return [{ ...register, sure: 0.8 }, energy];
      return words.has('total') && Math.abs(facts.first) > 50 * (facts.medianRise || Infinity)
        ? [{ ...register, why: 'its heading says that it is a counter', sure: 0.7 }, energy]
        : [energy];
    }
    if (counter === 'yes') return [register];
    if (counter === 'no') return [energy];
    if (facts.greatest === 0 && facts.least === 0 && !words.has('total'))
      return [{ ...energy, why: 'it is nothing throughout', sure: 0.7 }];
    if (words.has('total')) return [{ ...register, why: 'its heading says that it is a counter', sure: 0.8 }];
    return [
      { ...energy, why: 'it does not rise enough to tell an amount from a counter', sure: 0.45 },
      { ...register, why: 'it did not fall within the file', sure: 0.4 },
    ];
  };
  if (words.unit !== null) {
    const kind = kindOfUnit(words.unit);
    const found =
      kind === 'amount' ? amountKind(words.unit) : [{ kind, unit: words.unit, why: 'its unit says so', sure: 0.97 }];
    return found.filter((form) => allowed.kinds.includes(form.kind) && allowed.units[form.kind].includes(form.unit));
  }
  // No unit anywhere: the size of the numbers is all there is.
  const high = Math.max(Math.abs(facts.greatest), Math.abs(facts.least));
  if (counter === 'yes' || words.has('total')) {
    const days = Math.max(facts.spanMs / DAY_MS, 0.5);
    const perDay = facts.riseList.reduce((sum, rise) => sum + rise, 0) / days;
    const step = channel === 'gas' ? gasStep(series) : null;
    if (step !== null) return [{ kind: 'register', unit: 'kWh', why: gasWhy(step), sure: 0.9 }];
    const units: Unit[] = channel === 'gas' ? ['m3', 'kWh'] : perDay > 400 ? ['Wh', 'kWh'] : ['kWh', 'Wh'];
    const sure = channel !== 'gas' && (perDay > 1500 || (perDay > 0 && perDay < 100)) ? 0.8 : 0.4;
    return units.map((unit, i) => ({
      kind: 'register',
      unit,
      why: 'it has no unit; so its daily rise would make sense',
      sure: i === 0 ? sure : 0.3,
    }));
  }
  if (words.has('energy'))
    return (['kWh', 'Wh'] as const).map((unit) => ({ kind: 'energy', unit, why: 'it has no unit', sure: 0.4 }));
  if (channel === 'gas')
    return (['m3', 'kWh'] as const).map((unit) => ({ kind: 'energy', unit, why: 'it has no unit', sure: 0.4 }));
  if (words.has('power') || high > 1500)
    return high > 100
      ? [
          {
            kind: 'power',
            unit: 'W',
            why: 'it has no unit, and in kW its values would be too large for a home',
            sure: 0.85,
          },
        ]
      : facts.integers
        ? [
            { kind: 'power', unit: 'W', why: 'it has no unit', sure: 0.4 },
            { kind: 'power', unit: 'kW', why: 'it has no unit', sure: 0.4 },
          ]
        : [
            { kind: 'power', unit: 'kW', why: 'it has no unit, and in W its values would be too small', sure: 0.7 },
            { kind: 'power', unit: 'W', why: 'it has no unit', sure: 0.2 },
          ];
  return [
    { kind: 'power', unit: high > 60 ? 'W' : 'kW', why: 'it has no unit', sure: 0.4 },
    { kind: 'energy', unit: 'kWh', why: 'it has no unit', sure: 0.3 },
    { kind: 'energy', unit: 'Wh', why: 'it has no unit', sure: 0.2 },
  ];
}

/** The step in kWh if a counter rises by hundredths of a cubic metre of natural gas. */
function gasStep({ facts }: Series): number | null {
  // 0.01 m³ at a calorific value of 37 to 43 MJ/m³ (energy.md: 1.02264 × CV / 3.6).
  const perHundredth = (cv: number): number => (0.01 * 1.02264 * cv) / 3.6;
  return quantum(facts.riseList, perHundredth(36.5), perHundredth(43), 0.01);
}

const gasWhy = (step: number): string =>
  `it rises in steps of ${step.toFixed(3)} kWh, which is what a hundredth of a cubic metre of natural gas holds`;

/** The sign of a series, by the sign of its values. */
function signOf(series: Series, channel: Channel): { sign: 1 | -1; doubt: string | null } {
  const { negative, positive } = series.facts;
  if (channel === 'grid' || channel === 'battery') return { sign: 1, doubt: null };
  if (negative > 0 && positive === 0) return { sign: -1, doubt: null };
  if (negative > 0.05 * (negative + positive) && positive > 0)
    return { sign: 1, doubt: 'it is often negative, as an exchange in both directions would be' };
  return { sign: 1, doubt: null };
}

const column = (
  series: Series,
  channel: Channel,
  kind: Kind,
  unit: Unit,
  sign: 1 | -1,
  more: Partial<PlanColumn> = {},
): PlanColumn => ({
  column: series.ref,
  channel,
  kind,
  unit,
  sign,
  ...more,
});

const none = (series: Series, reason: string, confidence = 0.9): Proposal => ({
  series,
  options: [],
  confidence,
  reason,
  question: null,
});

/** The means to ask about a series that says too little of itself. */
function unknown(series: Series, channels: readonly Channel[], about: string): Proposal {
  const options = channels.flatMap((channel) => {
    const { sign } = signOf(series, channel);
    // Without a unit there is more than one thing that a channel's numbers can be.
    const ways = forms(series, channel).slice(0, series.words.unit === null ? 2 : 1);
    return ways.map(({ kind, unit }) => ({
      column: column(series, channel, kind, unit, sign),
      reason: kind === 'register' ? `${channel}, a counter in ${unit}` : `${channel} in ${unit}`,
    }));
  });
  return { series, options, confidence: 0.2, reason: about, question: options.length > 0 ? about : null };
}

function stateProposal(series: Series): Proposal | null {
  const { facts, words } = series;
  if (facts.stateful < 0.95 || facts.filled === 0) return null;
  const named = words.has('relay') || words.has('valve');
  if (facts.texts.size === 0 && !named) return null;
  const on = ['closed', 'close', 'geschlossen', 'zu', 'fermé', 'ferme'].filter((word) => facts.texts.has(word));
  const off = ['open', 'opened', 'offen', 'auf', 'ouvert'].filter((word) => facts.texts.has(word));
  const openings = on.length + off.length > 0;
  const plain = (swap: boolean): PlanColumn =>
    column(series, 'relay', 'state', 'state', 1, {
      ...(openings ? { on: swap ? off : on, off: swap ? on : off } : {}),
    });
  const contact = {
    column: plain(false),
    reason: 'relay: closed means that the boiler may heat, as a closed contact does',
  };
  const valve = { column: plain(true), reason: 'relay: open means that the boiler may heat, as an open valve does' };
  if (!openings) {
    if (!named)
      return {
        ...none(series, 'a state that is not named as the relay'),
        options: [{ column: plain(false), reason: 'relay' }],
        confidence: 0.4,
        question: 'is this the relay that lets the boiler heat?',
      };
    return {
      series,
      options: [{ column: plain(false), reason: 'relay' }],
      confidence: 0.95,
      reason: 'its heading and its words say so',
      question: null,
    };
  }
  if (named && !words.has('valve'))
    return { series, options: [contact, valve], confidence: 0.85, reason: contact.reason, question: null };
  return {
    series,
    options: [valve, contact],
    confidence: 0.4,
    reason: 'open and closed mean one thing for a valve and another for a contact',
    question: 'which word means that the boiler may heat?',
  };
}

function temperatureProposal(series: Series): Proposal {
  const { words, facts } = series;
  const warm = Math.max(facts.greatest, 0);
  const unit: Unit = words.unit === 'C' || words.unit === 'F' ? words.unit : warm > 100 ? 'F' : 'C';
  const at = (channel: Channel): Option => ({ column: column(series, channel, 'level', unit, 1), reason: channel });
  const found = temperatureChannel(series);
  if (found === 'none') return none(series, 'a temperature that no channel is for');
  if (found === 'tank')
    return {
      series,
      options: [at('tankTop'), at('tankMiddle'), at('tankBottom')],
      confidence: 0.5,
      reason: 'a temperature of the cylinder',
      question: 'at what height of the cylinder does it measure?',
    };
  if (found === 'unknown')
    return {
      series,
      options: [at('tankTop'), at('tankMiddle'), at('tankBottom'), at('ambient'), at('coldFeed')],
      confidence: 0.1,
      reason: 'a temperature that does not say of what',
      question: 'what does it measure the temperature of?',
    };
  const unsure = words.unit === null && warm > 100 && warm < 130;
  return {
    series,
    options: [
      at(found.channel),
      ...(unsure ? [{ column: column(series, found.channel, 'level', 'C', 1), reason: `${found.channel} in °C` }] : []),
    ],
    confidence: unsure ? 0.5 : words.unit ? 0.97 : 0.85,
    reason: 'its heading says so',
    question: unsure ? 'is it in °C or °F?' : null,
  };
}

/**
 * How a series is to be read, by the words of its heading and the look of its values.
 * @param stepMs the file's step
 */
export function propose(series: Series): Proposal {
  const { words, facts } = series;
  const has = words.has;
  if (facts.filled === 0) return none(series, 'it is empty');
  const state = stateProposal(series);
  if (state) return state;
  if (facts.numeric < 0.5) return none(series, 'it holds no numbers');
  if (words.foreign !== null) return none(series, `it is measured in ${words.foreign}, which no channel is for`);
  const { channel, signed, certain } = channelOfWords(series);
  if (words.unit === 'C' || words.unit === 'F' || (has('temperature') && words.unit === null))
    return temperatureProposal(series);
  if (has('tank') && words.unit === null && channel === null && (has('top') || has('middle') || has('bottom')))
    return temperatureProposal(series);
  if (has('coldFeed') || (has('ambient') && words.unit === null && channel === null))
    return temperatureProposal(series);
  if (has('other') && !(channel !== null && words.unit !== null))
    return none(series, 'its heading names a quantity that no channel is for');
  if (has('time') && words.unit === null && channel === null) return none(series, 'it is a time');
  if (channel === null) {
    if (has('load')) {
      const asImport = unknown(
        series,
        ['import'],
        'does it count what is bought from the grid, or what the house uses?',
      );
      return { ...asImport, confidence: 0.3 };
    }
    const amounts = isCounter(facts) === 'yes';
    if (words.unit === null && !has('energy') && !has('power') && !has('total') && !has('tank') && !has('water')) {
      // Nothing says what it is: numbers of a row, codes, or a quantity under a name of its own.
      if (facts.distinct <= 2) return none(series, 'it hardly changes and its heading names no channel', 0.7);
      return {
        ...unknown(series, ['import', 'export', 'generation', 'diversion', 'grid', 'gas'], 'what does it measure?'),
        confidence: 0.05,
      };
    }
    if (amounts && (words.unit === null || words.unit === 'kWh') && has('energy')) {
      const step = gasStep(series);
      if (step !== null)
        return {
          series,
          options: [{ column: column(series, 'gas', 'register', 'kWh', 1), reason: 'gas' }],
          confidence: 0.85,
          reason: gasWhy(step),
          question: null,
        };
    }
    const fuel = words.unit !== null && ['m3', 'ft3', 'ft3x100', 'litre'].includes(words.unit);
    if (fuel) {
      if (has('water')) return none(series, 'it is an amount of water, which no channel is for');
      const asGas = unknown(series, ['gas'], 'does it count the gas?');
      return { ...asGas, confidence: 0.5 };
    }
    const channels: Channel[] =
      has('tank') || has('water')
        ? ['diversion']
        : [
            'import',
            'export',
            'generation',
            'diversion',
            'grid',
            ...(words.unit && POWER_UNITS.includes(words.unit) ? [] : ['gas' as const]),
          ];
    return unknown(series, channels, 'what does it measure?');
  }
  const found = forms(series, channel);
  if (found.length === 0) return none(series, `${channel} cannot be in ${words.unit ?? 'such numbers'}`);
  const { sign, doubt } = signOf(series, channel);
  const options: Option[] = found.map(({ kind, unit }) => ({
    column: column(series, channel, kind, unit, sign),
    reason: `${channel}, ${kind === 'register' ? 'a counter' : kind === 'energy' ? 'the amount of each interval' : kind} in ${unit}`,
  }));
  let confidence = found[0].sure;
  let reason = `its heading names ${channel}; ${found[0].why}`;
  if (sign === -1) reason += '; its values are negative throughout and are turned round';
  let question: string | null = confidence < 0.6 ? 'what are its numbers?' : null;
  if (doubt !== null) {
    const [{ kind, unit }] = found;
    // Positive export is negative import.
    const way = channel === 'export' || channel === 'generation' ? -1 : 1;
    const exchange = {
      column: column(series, 'grid', kind, unit, way as 1 | -1),
      reason: `grid: ${way === 1 ? 'positive is import' : 'positive is export'}`,
    };
    if (has('grid') && (channel === 'export' || channel === 'import'))
      return {
        series,
        options: [exchange, ...options],
        confidence: 0.85,
        reason: `the exchange with the grid in both directions; ${exchange.reason}`,
        question: null,
      };
    if (channel === 'export' || channel === 'import') {
      options.unshift(exchange);
      confidence = 0.4;
      question = `${doubt}: which is it?`;
    } else reason += `; ${doubt}`;
  }
  if (signed && (channel === 'battery' || channel === 'grid'))
    return signedProposal(series, channel, options, confidence, certain);
  return { series, options, confidence, reason, question };
}

/** The channels that have both signs: which way is positive is said by the heading, or asked. */
function signedProposal(
  series: Series,
  channel: 'battery' | 'grid',
  options: Option[],
  confidence: number,
  certain: boolean,
): Proposal {
  const { words, facts } = series;
  const turned = (option: Option, sign: 1 | -1, reason: string): Option => ({
    column: { ...option.column, sign },
    reason,
  });
  const [first] = options;
  const text = series.label.toLowerCase();
  if (channel === 'battery') {
    const charging = turned(first, 1, 'battery: positive is charging');
    const giving = turned(first, -1, 'battery: positive is discharging');
    if (words.has('discharge'))
      return { series, options: [giving, charging], confidence: 0.85, reason: giving.reason, question: null };
    if (words.has('charge'))
      return { series, options: [charging, giving], confidence: 0.85, reason: charging.reason, question: null };
    return {
      series,
      options: [charging, giving],
      confidence: 0.4,
      reason: charging.reason,
      question: 'is it positive when the battery charges, or when it gives?',
    };
  }
  const importing = turned(first, 1, 'grid: positive is import');
  const exporting = turned(first, -1, 'grid: positive is export');
  const plus = /(?:\+\s*(?:=\s*)?|positi\w*\s*(?:=|is)?\s*)(\p{L}+)|(\p{L}+)\s*(?:\+|positi|\(\+\))/iu.exec(text);
  const said = plus?.[1] ?? plus?.[2] ?? '';
  if (/^(?:import|bezug|soutir|prelie|afnam|consum)/.test(said))
    return {
      series,
      options: [importing, exporting],
      confidence: 0.95,
      reason: 'its heading says that positive is import',
      question: null,
    };
  if (/^(?:export|einspeis|inject|immis|terugl|vert)/.test(said))
    return {
      series,
      options: [exporting, importing],
      confidence: 0.95,
      reason: 'its heading says that positive is export',
      question: null,
    };
  if (facts.negative === 0 && first.column.kind !== 'register') {
    const bought = { column: { ...first.column, channel: 'import' as const }, reason: 'import: it is never negative' };
    const sold = { column: { ...first.column, channel: 'export' as const }, reason: 'export' };
    return {
      series,
      options: [bought, importing, sold],
      confidence: 0.4,
      reason: bought.reason,
      question: 'it is never negative: does it count what is bought, or the exchange both ways?',
    };
  }
  if (first.column.kind === 'register' && facts.falls === 0) {
    const bought = { column: { ...first.column, channel: 'import' as const }, reason: 'import: it never falls' };
    return {
      series,
      options: [bought, { column: { ...first.column, channel: 'export' as const }, reason: 'export' }],
      confidence: 0.4,
      reason: bought.reason,
      question: 'does it count what is bought, or what is sold?',
    };
  }
  return {
    series,
    options: [importing, exporting],
    confidence: certain ? Math.min(confidence, 0.6) : 0.5,
    reason: importing.reason,
    question: 'is it positive when power is bought, or when it is sold?',
  };
}
