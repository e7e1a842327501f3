import type {
  ColumnPlan,
  ColumnReading,
  ColumnRef,
  Inspection,
  PlanColumn,
  Question,
  RowProblem,
} from '../../api/plan.ts';
import { DAY_MS } from '../../time/civil.ts';
import { isZone, zoneOf } from '../../time/zone.ts';
import { type Answer, choiceValue } from '../answer.ts';
import { NumberReader } from '../number.ts';
import { stampReader } from '../stamp.ts';
import { type Proposal, propose } from './channels.ts';
import { clockOf, type ClockVerdict, followedAcross } from './clock-evidence.ts';
import { previewOf } from './preview.ts';
import { isBlank, recordsOf, type SampleRow, type TextSample } from './sample.ts';
import { isCounter, type Series, seriesOf } from './series.ts';
import { sectionsOf, type Shape, shapeOf } from './shape.ts';
import { columnRefs, findDecimals, findDelimiter, findHeading, type Heading } from './table.ts';
import type { Pace } from './times.ts';
import { chooseTime, inGroups, timeColumns, type TimeChoice } from './time-columns.ts';
import { headingWords, isUnit } from './words.ts';

/** What of the property helps to understand a file. */
export interface InspectContext {
  timeZone: string;
  latitude: number | null;
  longitude: number | null;
  country: string | null;
}

/** So many rows are looked at for times and values; the head gives most of them. */
const MAX_ROWS = 4000;
/** More questions than this nobody answers: the rest of the doubtful columns are left out and told. */
const MAX_COLUMN_QUESTIONS = 8;

/** An inspection that found no log, with the reason. */
export function noLog(reason: string, line: number | null = null): Inspection {
  return {
    plan: null,
    confidence: 0,
    questions: [],
    sample: { header: [], lines: [], readings: [], rows: null, from: null, to: null, columns: [] },
    problems: [{ line, column: null, reason, count: 1 }],
  };
}

/** What is found of a file before its columns are understood. */
interface Found {
  delimiter: string;
  decimal: '.' | ',';
  thousands: string | undefined;
  decimalDoubtful: boolean;
  heading: Heading;
  width: number;
  rows: SampleRow[];
  lengths: number[];
  time: TimeChoice;
  shape: Shape;
}

function findTable(sample: TextSample): Found | Inspection {
  if (sample.head.every((line) => line.trim() === '')) return noLog('The file is empty.');
  const delimiter = findDelimiter(sample);
  if (delimiter === null) return noLog('This is no table of readings: its lines cannot be cut into columns.', 1);
  const headRows = recordsOf(sample.head, delimiter, 1);
  if (!sample.whole) headRows.pop();
  const groups = sample.further.map((lines) => recordsOf(lines, delimiter, null));
  const counts = new Map<number, number>();
  for (const row of headRows) if (!isBlank(row)) counts.set(row.cells.length, (counts.get(row.cells.length) ?? 0) + 1);
  const [width] = [...counts].sort((a, b) => b[1] - a[1] || b[0] - a[0])[0];
  const decimals = findDecimals(headRows.slice(0, 1000), delimiter);

  const usual = (row: SampleRow): boolean => !isBlank(row) && row.cells.length <= width + 1 && row.cells.length >= 2;
  const used = [headRows.filter(usual).slice(0, MAX_ROWS), ...groups.map((rows) => rows.filter(usual))];
  const all = used.flat();
  const tried = timeColumns(all, width, decimals.decimal);
  const strong = tried.map((readings) =>
    readings.find(({ share, part, likeNumbers }) => share >= 0.8 && part !== 'time' && !likeNumbers),
  );
  const asNumbers = tried.map((readings) => readings.find(({ share, part }) => share >= 0.8 && part !== 'time'));
  const first = (strong.some(Boolean) ? strong : asNumbers).flatMap((reading) => {
    const at = reading ? reading.times.findIndex((time) => time === time) : -1;
    return at < 0 ? [] : [at];
  });
  if (first.length === 0) return noLog('No column of the file holds times that can be read.', 1);
  const start = all[Math.min(...first)];
  const heading = findHeading(headRows, headRows.indexOf(start), width);
  const words = (heading.header ?? []).map((name, i) => headingWords(name, heading.units[i]));
  const lengths = used.map((rows) => rows.length);
  const choices = chooseTime(tried, words, lengths);
  if (choices.length === 0) return noLog('No column of the file holds times that can be read.', 1);
  const [time] = choices;
  // Rows above the first are none of data.
  const from = all.indexOf(start);
  const keep = (times: Float64Array): Float64Array => times.slice(from);
  const rows = all.slice(from);
  lengths[0] -= from;
  const numbers = new NumberReader(decimals.decimal, decimals.thousands);
  const cut = { ...time, times: keep(time.times) };
  let shape = shapeOf(rows, width, cut, heading.header, numbers);
  if (shape.kind === 'acrossDay' && shape.name === null && heading.header === null) {
    const sections = sectionsOf(
      headRows.filter((row) => !isBlank(row)),
      rows.filter((_, i) => cut.times[i] === cut.times[i]),
      shape.first,
    );
    if (sections) {
      // Title rows are read, so none may be skipped.
      shape = { ...shape, name: sections.name, sections };
      heading.skipRows = 0;
    }
  }
  return {
    delimiter,
    decimal: decimals.decimal,
    thousands: decimals.thousands,
    decimalDoubtful: decimals.doubtful,
    heading,
    width: Math.max(width, heading.header?.length ?? 0),
    rows,
    lengths,
    time: cut,
    shape,
  };
}

/** The series of a file: its columns, its names, or its days. */
function seriesIn(found: Found, refs: ColumnRef[]): Series[] {
  const { rows, lengths, time, shape, heading, decimal, thousands } = found;
  const reader = new NumberReader(decimal, thousands);
  const times = inGroups(time.times, lengths);
  const groupsOf = (pick: (row: SampleRow) => string): string[][] => {
    const groups: string[][] = [];
    let at = 0;
    for (const length of lengths) {
      groups.push(rows.slice(at, at + length).map(pick));
      at += length;
    }
    return groups;
  };
  const label = (c: number): string => heading.header?.[c]?.trim() || `column ${c + 1}`;
  if (shape.kind === 'wide') {
    return refs.flatMap((ref, c) =>
      time.columns.includes(c)
        ? []
        : [
            seriesOf(
              ref,
              label(c),
              c + 1,
              heading.units[c] ?? '',
              times,
              groupsOf(({ cells }) => cells[c] ?? ''),
              reader,
            ),
          ],
    );
  }
  const nameAt = shape.name;
  const sections = shape.kind === 'acrossDay' ? shape.sections : undefined;
  const nameOf = (row: SampleRow): string => {
    if (nameAt === null) return '';
    return sections ? (sections.of.get(row) ?? '') : (row.cells[nameAt] ?? '').trim();
  };
  const names = [...new Set(rows.map(nameOf))].filter((name) => nameAt === null || name !== '').slice(0, 60);
  return names.map((name) => {
    const own = (row: SampleRow): boolean => nameOf(row) === name;
    const number = shape.kind === 'long' ? shape.value + 1 : shape.first + 1;
    const ref = nameAt === null ? refs[number - 1] : name;
    if (shape.kind === 'long') {
      const unit = shape.unit === null ? '' : (rows.find(own)?.cells[shape.unit] ?? '');
      const cells = groupsOf((row) => (own(row) ? (row.cells[shape.value] ?? '') : ''));
      return seriesOf(ref, name, number, unit, times, cells, reader);
    }
    const step = DAY_MS / shape.perDay;
    const dayTimes: Float64Array[] = [];
    const dayCells: string[][] = [];
    rows.forEach((row, i) => {
      if (!own(row) || time.times[i] !== time.times[i]) return;
      const cells = row.cells.slice(shape.first, shape.first + shape.perDay);
      dayTimes.push(Float64Array.from(cells, (_, k) => time.times[i] + k * step));
      dayCells.push(cells);
    });
    const title = nameAt === null ? '' : name;
    const unit = sections?.units.get(name) ?? '';
    return seriesOf(ref, title || 'values across the day', number, unit, dayTimes, dayCells, reader);
  });
}

/** What rows of whole days say of the zone's clock changes. */
function changesAcross(
  { rows, time, shape, decimal, thousands }: Found,
  timeZone: string,
): ReturnType<typeof followedAcross> {
  if (shape.kind !== 'acrossDay') return { yes: 0, no: 0, once: 0 };
  const { first, perDay } = shape;
  const reader = new NumberReader(decimal, thousands);
  const used = rows
    .map((row, i) => ({ day: time.times[i], cells: row.cells.slice(first) }))
    .filter(({ day }) => day === day);
  const filled = used.map(({ cells }) => cells.findLastIndex((cell) => reader.read(cell) === 'number') + 1);
  const zone = zoneOf(timeZone);
  const gaps = used.map(({ day, cells }) => {
    const out = Array.from({ length: perDay }, (_, k) => k).filter(
      (k) => zone.localToUtc(day + (k * DAY_MS) / perDay).length === 0,
    );
    return out.length > 0 && out.every((k) => reader.isMissing(cells[k]));
  });
  return followedAcross(
    timeZone,
    used.map(({ day }) => day),
    filled,
    gaps,
    perDay,
  );
}

/** Whether rows come only when something changes: steps of all lengths, and no value twice in a row. */
function onChange(series: Series, { regular, spread }: Pace): boolean {
  const { rises, falls, restarts, levelSteps } = series.facts;
  const moves = rises + falls + restarts;
  return regular < 0.3 && spread >= 4 && moves + levelSteps >= 3 && levelSteps <= moves * 0.1;
}

/** Whether a series has no rows at night, night after night, with next to nothing before and after. */
function sleepsInDark(series: Series, stepMs: number, shownAt: (time: number) => number): boolean {
  let nights = 0;
  const high = series.facts.greatest;
  series.times.forEach((times, g) => {
    for (let i = 1; i < times.length; i++) {
      const gap = times[i] - times[i - 1];
      if (!(gap >= Math.max(4 * 3_600_000, 6 * stepMs) && gap <= 20 * 3_600_000)) continue;
      const middle = shownAt((times[i] + times[i - 1]) / 2) % DAY_MS;
      if (Math.abs(middle - DAY_MS / 2) < 5 * 3_600_000) continue;
      if (Math.max(series.values[g][i], series.values[g][i - 1]) <= high * 0.2) nights++;
    }
  });
  return nights >= 3;
}

const REASON_LEFT = 'left out';

/** Two series of one channel: parts that add up, or the same thing twice. */
function settleDoubles(proposals: Proposal[]): Question[] {
  const questions: Question[] = [];
  const taken = new Map<string, Proposal[]>();
  for (const proposal of proposals) {
    const [option] = proposal.options;
    if (!option || proposal.question !== null || option.column.channel === 'relay') continue;
    taken.set(option.column.channel, [...(taken.get(option.column.channel) ?? []), proposal]);
  }
  const leave = (proposal: Proposal, reason: string): void => {
    proposal.options = [];
    proposal.reason = reason;
  };
  for (const [channel, all] of taken) {
    if (all.length < 2) continue;
    // Not of one kind: the same thing as power and as energy. What is counted is kept.
    const rank = ({ options }: Proposal): number =>
      ['register', 'energy', 'level', 'power'].indexOf(options[0].column.kind);
    const best = Math.min(...all.map(rank));
    const same = all.filter((proposal) => rank(proposal) === best);
    for (const proposal of all) {
      if (!same.includes(proposal))
        leave(proposal, `${channel} is there as ${same[0].options[0].column.kind} too, which is kept`);
    }
    const daily = same.filter(({ series }) => series.words.has('daily'));
    if (daily.length > 0 && daily.length < same.length)
      for (const proposal of daily) leave(proposal, `${channel} is there as a lasting counter too, which is kept`);
    const left = same.filter(({ options }) => options.length > 0);
    if (left.length < 2) continue;
    const part =
      /\b(?:l|phase|p|t|rate|tariff|ht|nt|r)\s?_?\d\b|\b(?:l[123]|t[1-4]|ht|nt|peak|off.?peak|day|night|high|low|phase [abc]|hp|hc|normal|nacht|dal|tag)\b/i;
    const parts = left.filter(({ series }) => part.test(series.label.replace(/[_-]/g, ' ')));
    if (parts.length === left.length) continue;
    if (parts.length >= 2) {
      for (const proposal of left)
        if (!parts.includes(proposal)) leave(proposal, `${channel} is there in parts too, which are added`);
      continue;
    }
    const names = left.map(({ series }) => `"${series.label}"`).join(' and ');
    const only = (one: Proposal): Answer => ({
      leave: left.filter((other) => other !== one).map(({ series }) => series.ref),
    });
    questions.push({
      id: `double:${channel}`,
      about: `${names} all hold ${channel}: are they parts that add up, or the same thing more than once?`,
      choices: [
        ...left.map((one) => ({ value: choiceValue(only(one)), reason: `Only "${one.series.label}".` })),
        { value: choiceValue({}), reason: 'They are parts: add them.' },
      ],
    });
  }
  return questions;
}

/** The grid's sign, by its values in the night, when homes buy. */
function signByNight(proposal: Proposal, zone: string, zoned: boolean, ctx: InspectContext): void {
  const [first, second] = proposal.options;
  if (
    !second ||
    first.column.channel !== 'grid' ||
    second.column.channel !== 'grid' ||
    first.column.kind === 'register'
  )
    return;
  const clock = zoneOf(zoned ? ctx.timeZone : zone);
  let up = 0;
  let down = 0;
  proposal.series.times.forEach((times, g) =>
    times.forEach((time, i) => {
      const local = zoned && time === time ? time + clock.offsetAt(time) : time;
      const hour = Math.floor((((local % DAY_MS) + DAY_MS) % DAY_MS) / 3_600_000);
      if (hour >= 4) return;
      const value = time === time ? proposal.series.values[g][i] : NaN;
      if (value > 0) up++;
      else if (value < 0) down++;
    }),
  );
  if (up + down < 8 || Math.max(up, down) < 0.9 * (up + down)) return;
  const buying = up > down ? 1 : -1;
  const right = proposal.options.find(({ column }) => column.sign === buying);
  if (!right) return;
  proposal.options = [right, ...proposal.options.filter((option) => option !== right)];
  proposal.question = null;
  proposal.confidence = 0.85;
  proposal.reason = `${right.reason}: at night, when homes buy, its values are ${buying > 0 ? 'positive' : 'negative'}`;
}

/** Whether rows of whole days stand at the beginnings or the ends of their intervals. */
function stampByMidnight(times: readonly Float64Array[], stepMs: number): 'start' | 'end' | null {
  const filled = times.map((group) => group.filter((time) => time === time)).filter((group) => group.length > 0);
  if (filled.length === 0 || !(stepMs > 0) || stepMs >= DAY_MS) return null;
  let low = Infinity;
  let high = -Infinity;
  for (const group of filled) {
    for (const time of group) {
      if (time < low) low = time;
      if (time > high) high = time;
    }
  }
  const first = low % DAY_MS;
  const last = high % DAY_MS;
  if (first === 0 && last === DAY_MS - stepMs) return 'start';
  if (first === stepMs && last === 0) return 'end';
  return null;
}

/** The stamps' place in their intervals. */
function stampOf(
  heading: Heading,
  time: TimeChoice,
  wholeDays: 'start' | 'end' | null,
  columns: readonly PlanColumn[],
): { stamp: 'start' | 'end' | 'instant'; said: boolean; reason: string } {
  const words = time.columns.map((c) => headingWords(heading.header?.[c] ?? ''));
  const says = (concept: 'start' | 'end'): boolean => words.some((word) => word.has(concept));
  if (says('start') && !says('end'))
    return { stamp: 'start', said: true, reason: 'the heading of the time says start' };
  if (says('end') && !says('start')) return { stamp: 'end', said: true, reason: 'the heading of the time says end' };
  if (!columns.some(({ kind }) => kind === 'energy'))
    return { stamp: 'instant', said: false, reason: 'values of an instant' };
  if (wholeDays === 'end')
    return { stamp: 'end', said: false, reason: 'whole days run from the first interval’s end to midnight' };
  return { stamp: 'start', said: false, reason: 'amounts stand at the beginning of their interval' };
}

/**
 * Understands a file, or says what must be asked about it.
 * @param sample lines of the file
 * @param ctx the property
 * @param given a plan to look at the file with; without one it is found
 */
export function inspectSample(sample: TextSample, ctx: InspectContext, given?: ColumnPlan): Inspection {
  if (given) return previewOf(sample, given, [], 1, null);
  const found = findTable(sample);
  if ('plan' in found) return found;
  const { heading, time, shape } = found;
  const refs = columnRefs(heading.header, found.width);
  const notes: RowProblem[] = [];
  const questions: Question[] = [];

  const proposals = seriesIn(found, refs).map(propose);
  const own = zoneOf(ctx.timeZone);
  const shownAt = (at: number): number => (time.zoned || time.epoch ? at + own.offsetAt(at) : at);
  const known = proposals.some(({ confidence, options }) => options.length > 0 && confidence >= 0.6);
  for (const proposal of proposals) {
    // Columns that say nothing of themselves are asked about only where nothing else is known.
    if (known && proposal.confidence <= 0.1 && proposal.options.length > 0) {
      proposal.options = [];
      proposal.question = null;
    }
    const [option] = proposal.options;
    if (!option) continue;
    if (onChange(proposal.series, time.pace)) {
      for (const { column } of proposal.options) column.hold = 'toNext';
      proposal.reason += '; it is logged when it changes, so a value holds until the next row';
    }
    if (option.column.channel === 'generation' && sleepsInDark(proposal.series, time.pace.step, shownAt)) {
      for (const { column } of proposal.options) column.sleeps = 'dark';
      proposal.reason += '; it has no rows at night, when there is nothing to log';
    }
  }
  questions.push(...settleDoubles(proposals));

  // The clock.
  const groups = inGroups(time.times, found.lengths);
  let clock: ClockVerdict;
  const timeWords = time.columns.map((c) => headingWords(heading.header?.[c] ?? '', heading.units[c]));
  if (time.epoch) clock = { zone: 'UTC', confidence: 1, reason: 'epochs are in UTC', choices: [] };
  else if (time.zoned)
    clock = { zone: ctx.timeZone, confidence: 1, reason: 'every time in the file names its offset', choices: [] };
  else if (timeWords.some((words) => words.has('utc')))
    clock = { zone: 'UTC', confidence: 0.95, reason: 'the heading says UTC', choices: [] };
  else {
    const lit = ['generation', 'export'].flatMap((channel) =>
      proposals.filter(({ options }) => options[0]?.column.channel === channel && options[0].column.sign === 1),
    )[0];
    const across = shape.kind === 'acrossDay';
    const series = lit?.series;
    const counted = series ? isCounter(series.facts) === 'yes' : false;
    clock = clockOf(
      {
        groups: series ? series.times : groups,
        light: series ? series.values.map((values) => (counted ? risesOf(values) : values)) : null,
        generation: lit?.options[0].column.channel === 'generation',
        step: across ? DAY_MS / shape.perDay : time.pace.step,
        ...(across ? { told: changesAcross(found, ctx.timeZone) } : {}),
      },
      ctx,
    );
    if (across && clock.choices.length === 0 && !isZone(clock.zone)) clock = { ...clock, zone: ctx.timeZone };
  }
  for (const proposal of proposals) signByNight(proposal, clock.zone, time.zoned || time.epoch, ctx);

  // The columns: what is sure goes into the plan, what is doubtful is asked.
  const columns: PlanColumn[] = [];
  const readings: ColumnReading[] = [];
  const asked: { proposal: Proposal; question: Question }[] = [];
  for (const proposal of proposals) {
    const { series, options, reason, confidence } = proposal;
    const [option] = options;
    readings.push({
      column: series.label,
      number: series.number,
      channel: option && proposal.question === null ? option.column.channel : null,
      confidence,
      reason: option ? reason : `${REASON_LEFT}: ${reason}`,
    });
    if (!option) continue;
    if (proposal.question === null) {
      columns.push(option.column);
      continue;
    }
    asked.push({
      proposal,
      question: {
        id: `column:${series.number}:${series.label}`.slice(0, 120),
        about: `"${series.label}": ${proposal.question}`,
        choices: [
          ...options.map((choice) => ({
            value: choiceValue({ columns: [choice.column] }),
            reason: `${choice.reason[0].toUpperCase()}${choice.reason.slice(1)}.`,
          })),
          { value: choiceValue({ leave: [series.ref] }), reason: 'None of these: leave it out.' },
        ],
      },
    });
  }
  for (const { proposal, question } of asked.slice(MAX_COLUMN_QUESTIONS)) {
    notes.push({
      line: heading.headerLine,
      column: proposal.series.label,
      reason: `${question.about} It is left out unless you say.`,
      count: 1,
    });
  }
  questions.push(...asked.slice(0, MAX_COLUMN_QUESTIONS).map(({ question }) => question));
  if (columns.length === 0) {
    // A plan has a column: the likeliest of those that are asked about stands in until the answer.
    const [likeliest] = asked.map(({ proposal }) => proposal).sort((a, b) => b.confidence - a.confidence);
    if (!likeliest)
      return withReadings(
        noLog('No column of the file holds readings that could be told or asked about.', heading.headerLine),
        readings,
      );
    columns.push(likeliest.options[0].column);
  }

  if (found.decimalDoubtful) {
    const other = found.decimal === ',' ? '.' : ',';
    questions.push({
      id: 'decimal',
      about: `Numbers such as "1${found.decimal}234" have three digits behind the mark: is it the decimal mark, or does it part thousands?`,
      choices: [
        {
          value: choiceValue({ plan: { decimal: found.decimal, thousands: null } }),
          reason: `"${found.decimal}" is the decimal mark.`,
        },
        {
          value: choiceValue({ plan: { decimal: other, thousands: found.decimal } }),
          reason: `"${found.decimal}" parts thousands.`,
        },
      ],
    });
  }
  if (time.rivals.length > 0) {
    const american = ctx.country !== null && /^(?:us|usa|united states)/i.test(ctx.country);
    const formats = [time.format, ...time.rivals.map(({ format }) => format)];
    if (american) formats.sort((a, b) => Number(b.startsWith('M')) - Number(a.startsWith('M')));
    questions.push({
      id: 'time:format',
      about: `Dates such as "${firstTime(found)}" can be read in more than one order, and the file does not show which.`,
      choices: formats.map((format) => ({
        value: choiceValue({ plan: { time: { format } } }),
        reason: `${format.replace(/'/g, '')}: the file would begin on ${dayShown(found, format)}.`,
      })),
    });
    time.format = formats[0];
  }
  if (clock.choices.length > 1) {
    questions.push({
      id: 'time:zone',
      about: 'The times in the file name no zone, and nothing in it shows which clock wrote them.',
      choices: clock.choices.map((guess) => ({
        value: choiceValue({ plan: { time: { zone: guess.zone } } }),
        reason: guess.reason,
      })),
    });
  }

  const wholeDays =
    shape.kind === 'acrossDay' ? null : stampByMidnight(time.zoned ? localTimes(groups, ctx) : groups, time.pace.step);
  const stamp = stampOf(heading, time, wholeDays, columns);
  for (const column of columns) {
    const mean = proposals.find(({ series }) => series.ref === column.column)?.series.words.has('mean');
    if (column.kind === 'power' && mean && stamp.stamp === 'instant') column.stamp = 'start';
    else if (column.kind === 'power' && stamp.stamp !== 'instant' && !stamp.said && !mean) column.stamp = 'instant';
  }

  const plan: ColumnPlan = {
    encoding: sample.encoding,
    delimiter: found.delimiter,
    decimal: found.decimal,
    ...(found.thousands !== undefined && !found.decimalDoubtful ? { thousands: found.thousands } : {}),
    headerLine: heading.headerLine,
    ...(heading.unitRow ? { unitRow: true } : {}),
    ...(heading.skipRows > 0 ? { skipRows: heading.skipRows } : {}),
    ...(shape.kind === 'long'
      ? { shape: { kind: 'long' as const, nameColumn: refs[shape.name], valueColumn: refs[shape.value] } }
      : shape.kind === 'acrossDay'
        ? {
            shape: {
              kind: 'acrossDay' as const,
              firstColumn: refs[shape.first],
              perDay: shape.perDay,
              ...(shape.name !== null ? { nameColumn: refs[shape.name] } : {}),
            },
          }
        : {}),
    time: {
      columns: time.columns.map((c) => refs[c]),
      format: time.format,
      zone: clock.zone,
      stamp: stamp.stamp,
    },
    columns,
  };
  const sure = proposals.flatMap(({ options, question, confidence }) =>
    options.length > 0 && question === null ? [confidence] : [],
  );
  const confidence = Math.min(1, clock.confidence, ...sure, ...(questions.length > 0 ? [0.5] : []));
  const timeReadings: ColumnReading[] = time.columns.map((c) => ({
    column: heading.header?.[c]?.trim() || `column ${c + 1}`,
    number: c + 1,
    channel: null,
    confidence: time.rivals.length > 0 ? 0.5 : 0.95,
    reason: `time, read as ${time.format}: ${time.reason}; zone ${clock.zone}: ${clock.reason}; ${stamp.reason}`,
  }));
  const inspection = previewOf(sample, plan, questions, confidence, [...timeReadings, ...readings]);
  // A plan of our own that the file cannot be read by is none.
  if (inspection.confidence === 0) {
    const [{ reason, line }] = inspection.problems;
    return withReadings(noLog(reason, line), readings);
  }
  inspection.problems.push(...notes);
  return inspection;
}

function withReadings(inspection: Inspection, columns: ColumnReading[]): Inspection {
  return { ...inspection, sample: { ...inspection.sample, columns } };
}

function risesOf(values: Float64Array): Float64Array {
  return values.map((value, i) => (i === 0 ? NaN : Math.max(0, value - values[i - 1])));
}

function localTimes(groups: readonly Float64Array[], ctx: InspectContext): Float64Array[] {
  const zone = zoneOf(ctx.timeZone);
  return groups.map((times) => times.map((time) => (time === time ? time + zone.offsetAt(time) : time)));
}

function firstTime({ rows, time }: Found): string {
  return time.columns.map((c) => rows[0].cells[c]?.trim()).join(' ');
}

function dayShown(found: Found, format: string): string {
  const reader = stampReader(format, found.decimal);
  if (!reader.read(firstTime(found))) return 'another day';
  return new Date(reader.ms).toLocaleDateString('en-GB', {
    day: 'numeric',
    month: 'long',
    year: 'numeric',
    timeZone: 'UTC',
  });
}

/**
 * A key that files of one shape share, for saved column plans.
 * @returns null where the file was not understood as a table
 */
export function shapeOfFile(sample: TextSample): string | null {
  const found = findTable(sample);
  if ('plan' in found) return null;
  const { delimiter, heading, width, time, shape } = found;
  const names = heading.header?.map((name) => name.replace(/\s+/g, ' ').trim().toLowerCase());
  const units = heading.units.filter((unit) => isUnit(unit)).map((unit) => unit.trim());
  return JSON.stringify([delimiter, names ?? width, units, shape.kind, time.columns, names ? null : time.format]);
}
