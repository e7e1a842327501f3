import type { ColumnPlan, ColumnReading, ColumnRef, PlanColumn, Sample } from '../../../shared/api/plan.ts';
import { isZone } from '../../../shared/time/zone.ts';
import { ALLOWED, QUANTITY, type Channel, type Kind, type Unit } from '../../../shared/units/channels.ts';

/** One column of the file, with what the plan makes of it. `index` is its place in `plan.columns`. */
export interface FileColumn {
  ref: ColumnRef;
  name: string;
  number: number;
  isTime: boolean;
  index: number | null;
  planned: PlanColumn | null;
  confidence: number | null;
  reason: string | null;
  /** The first values as they stand in the file. */
  examples: string[];
}

function refers(ref: ColumnRef, name: string, number: number, unique: boolean): boolean {
  return typeof ref === 'number' ? ref === number : unique && ref === name;
}

/**
 * Every column of the file beside what the plan says of it.
 * A plan's column that the file does not show (long or across-day shapes) comes at the end, so that none is lost.
 */
export function fileColumns(plan: ColumnPlan | null, sample: Sample | null): FileColumn[] {
  const told = new Map<number, ColumnReading>((sample?.columns ?? []).map((column) => [column.number, column]));
  const header = sample?.header ?? [];
  const wide = (plan?.shape?.kind ?? 'wide') === 'wide';
  const listed: { name: string; number: number }[] = wide
    ? header.map((name, at) => ({ name, number: at + 1 }))
    : (sample?.columns ?? []).map(({ column, number }) => ({ name: column, number }));
  const names = listed.map((column) => column.name);
  const used = new Set<number>();
  const rows = listed.map(({ name, number }): FileColumn => {
    const unique = name !== '' && names.indexOf(name) === names.lastIndexOf(name);
    const first = names.indexOf(name) === number - 1;
    const index = plan?.columns.findIndex((column) => refers(column.column, name, number, unique || first)) ?? -1;
    if (index >= 0) used.add(index);
    return {
      ref: unique ? name : number,
      name: name || `Column ${number}`,
      number,
      isTime: plan?.time.columns.some((ref) => refers(ref, name, number, unique || first)) ?? false,
      index: index >= 0 ? index : null,
      planned: index >= 0 && plan ? plan.columns[index] : null,
      confidence: told.get(number)?.confidence ?? null,
      reason: told.get(number)?.reason ?? null,
      examples: wide
        ? (sample?.lines ?? []).map((line) => line.cells[number - 1] ?? '').filter((cell) => cell !== '')
        : [],
    };
  });
  const rest = (plan?.columns ?? []).flatMap((column, index): FileColumn[] =>
    used.has(index)
      ? []
      : [
          {
            ref: column.column,
            name: String(column.column),
            number: typeof column.column === 'number' ? column.column : 0,
            isTime: false,
            index,
            planned: column,
            confidence: null,
            reason: null,
            examples: [],
          },
        ],
  );
  return [...rows, ...rest];
}

const UNIT_HINTS: readonly [RegExp, Kind, Unit][] = [
  [/\bkwh\b/i, 'energy', 'kWh'],
  [/\bmwh\b/i, 'energy', 'MWh'],
  [/\bwh\b/i, 'energy', 'Wh'],
  [/\bmj\b/i, 'energy', 'MJ'],
  [/m3|m³/i, 'energy', 'm3'],
  [/\bkw\b/i, 'power', 'kW'],
  [/\bw(atts?)?\b/i, 'power', 'W'],
  [/°\s*f\b|fahrenheit/i, 'level', 'F'],
];

/** A first guess for a column that a person maps by hand: the unit named in its heading, else the channel's usual one. */
export function startColumn(ref: ColumnRef, name: string, channel: Channel): PlanColumn {
  const quantity = ALLOWED[QUANTITY[channel]];
  const words = name.replace(/[_()[\]/]/g, ' ');
  const hint = UNIT_HINTS.find(([pattern, kind, unit]) => pattern.test(words) && quantity.units[kind].includes(unit));
  const kind = hint?.[1] ?? quantity.kinds[0];
  return { column: ref, channel, kind, unit: hint?.[2] ?? quantity.units[kind][0], sign: 1 };
}

/** The plan with one column mapped to a channel, or to none. A change of quantity starts that column anew. */
export function setChannel(plan: ColumnPlan, column: FileColumn, channel: Channel | null): ColumnPlan {
  const others = plan.columns.filter((_, at) => at !== column.index);
  if (channel === null) return { ...plan, columns: others };
  const same = column.planned && QUANTITY[column.planned.channel] === QUANTITY[channel];
  const next = same && column.planned ? { ...column.planned, channel } : startColumn(column.ref, column.name, channel);
  if (column.index === null) return { ...plan, columns: [...others, next] };
  return { ...plan, columns: plan.columns.map((old, at) => (at === column.index ? next : old)) };
}

/** The plan with part of one column changed; an `undefined` part is taken out. */
export function setColumn(plan: ColumnPlan, index: number, part: Partial<PlanColumn>): ColumnPlan {
  return {
    ...plan,
    columns: plan.columns.map((old, at) => (at === index ? (without({ ...old, ...part }) as PlanColumn) : old)),
  };
}

/** The plan with one column's kind changed; the unit stays where it fits, else the first that does is taken. */
export function setKind(plan: ColumnPlan, index: number, kind: Kind): ColumnPlan {
  const column = plan.columns[index];
  const units = ALLOWED[QUANTITY[column.channel]].units[kind];
  return setColumn(plan, index, { kind, unit: units.includes(column.unit) ? column.unit : units[0] });
}

/** Leaves out what is `undefined`: a plan says only what is so. */
export function without<T extends object>(value: T): T {
  return Object.fromEntries(Object.entries(value).filter(([, entry]) => entry !== undefined)) as T;
}

/** Words separated by commas or semicolons, as a list; empty ones fall out. */
export function toWords(text: string): string[] {
  return text
    .split(/[,;]/)
    .map((word) => word.trim())
    .filter((word) => word !== '');
}

/** What keeps a plan from being read at all, in words, by the paths the API uses. */
export function planIssues(plan: ColumnPlan): { path: string; label: string; message: string }[] {
  const issues: { path: string; label: string; message: string }[] = [];
  if (plan.columns.length === 0)
    issues.push({ path: 'columns', label: 'Columns', message: 'Say of at least one column what it measures.' });
  if (plan.time.columns.length === 0)
    issues.push({ path: 'time.columns', label: 'Time', message: 'Say which column holds the time.' });
  if (!isZone(plan.time.zone))
    issues.push({
      path: 'time.zone',
      label: 'Zone of the time',
      message: `“${plan.time.zone}” is no zone: write for example Europe/London, UTC or +01:00.`,
    });
  if (plan.time.format.trim() === '')
    issues.push({ path: 'time.format', label: 'Format of the time', message: 'Write how the time is written.' });
  const lines: [number | null | undefined, string, string, number][] = [
    [plan.headerLine, 'headerLine', 'Line of the headings', 1],
    [plan.skipRows, 'skipRows', 'Rows to pass over', 0],
  ];
  for (const [value, path, label, least] of lines)
    if (value != null && !(value >= least && value <= 10000))
      issues.push({ path, label, message: `Write a whole number from ${least} to 10000, or nothing.` });
  plan.columns.forEach((column, at) => {
    if (Number.isNaN(column.factor))
      issues.push({
        path: `columns.${at}.factor`,
        label: `${column.column}, multiply by`,
        message: 'Write a number greater than 0, such as 0.001.',
      });
    if (
      column.kind === 'state' &&
      !(column.on?.length && column.off?.length) &&
      (column.on?.length || column.off?.length)
    )
      issues.push({
        path: `columns.${at}.${column.on?.length ? 'off' : 'on'}`,
        label: `${column.column}, words`,
        message: 'Give the words for on and for off.',
      });
  });
  return issues;
}

/** Where nothing was understood: a plan to begin from, that takes the first column for the time and keeps none. */
export function startPlan(sample: Sample | null, timeZone: string): ColumnPlan {
  const first = sample?.lines[0]?.line ?? 2;
  return {
    encoding: 'utf-8',
    delimiter: ',',
    decimal: '.',
    headerLine: first > 1 ? first - 1 : null,
    time: { columns: [sample?.header[0] || 1], format: 'iso', zone: timeZone, stamp: 'instant' },
    columns: [],
  };
}

const PART_WORDS: Record<string, string> = {
  encoding: 'Encoding',
  delimiter: 'Delimiter',
  decimal: 'Decimal mark',
  thousands: 'Grouping of thousands',
  headerLine: 'Line of the headings',
  skipRows: 'Rows to pass over',
  missing: 'Words for a missing value',
  columns: 'Columns',
  'time.columns': 'Column of the time',
  'time.format': 'Format of the time',
  'time.zone': 'Zone of the time',
  'time.stamp': 'What the time stands for',
};

/** The screen's name for a path of a plan, for messages that the server sends. */
export function planLabel(path: string, plan: ColumnPlan): string {
  const at = /^columns\.(\d+)(?:\.(\w+))?/.exec(path);
  if (at) {
    const column = plan.columns[Number(at[1])]?.column ?? `Column ${Number(at[1]) + 1}`;
    return at[2] ? `${column}, ${at[2]}` : String(column);
  }
  return PART_WORDS[path] ?? PART_WORDS[path.replace(/\.\d+$/, '')] ?? path;
}
