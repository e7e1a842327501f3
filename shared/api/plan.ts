import { z } from 'zod';
import { ALLOWED, CHANNELS, KINDS, QUANTITY, UNITS } from '../units/channels.ts';

/** A column's name in the header, or its 1-based number. */
const ColumnRef = z.union([z.string().min(1).max(300), z.int().min(1).max(4000)]);
export type ColumnRef = z.infer<typeof ColumnRef>;

export const PlanColumn = z
  .object({
    column: ColumnRef,
    channel: z.enum(CHANNELS),
    kind: z.enum(KINDS),
    unit: z.enum(UNITS),
    sign: z.union([z.literal(1), z.literal(-1)]),
    factor: z.number().positive().optional(),
    stamp: z.enum(['start', 'end', 'instant']).optional(),
    hold: z.literal('toNext').optional(),
    sleeps: z.literal('dark').optional(),
    on: z.array(z.string().max(60)).max(20).optional(),
    off: z.array(z.string().max(60)).max(20).optional(),
  })
  .check((ctx) => {
    const { channel, kind, unit } = ctx.value;
    const allowed = ALLOWED[QUANTITY[channel]];
    if (!allowed.kinds.includes(kind)) {
      ctx.issues.push({
        code: 'custom',
        input: kind,
        path: ['kind'],
        message: `${channel} takes ${allowed.kinds.join(', ')}, not ${kind}`,
      });
    } else if (!allowed.units[kind].includes(unit)) {
      ctx.issues.push({
        code: 'custom',
        input: unit,
        path: ['unit'],
        message: `${channel} as ${kind} takes ${allowed.units[kind].join(', ')}, not ${unit}`,
      });
    }
  })
  .meta({ id: 'PlanColumn' });
export type PlanColumn = z.infer<typeof PlanColumn>;

export const ColumnPlan = z
  .object({
    encoding: z.string().max(40).meta({ description: 'A WHATWG label, such as utf-8 or windows-1252' }),
    delimiter: z.string().min(1).max(4).meta({ description: 'The delimiter; two blanks or more mean a run of blanks' }),
    decimal: z.enum(['.', ',']),
    thousands: z.string().max(2).optional(),
    headerLine: z.int().min(1).max(10000).nullable(),
    unitRow: z.boolean().optional(),
    skipRows: z.int().min(0).max(10000).optional(),
    missing: z.array(z.string().max(40)).max(40).optional(),
    shape: z
      .object({
        kind: z.enum(['wide', 'long', 'acrossDay']),
        nameColumn: ColumnRef.optional(),
        valueColumn: ColumnRef.optional(),
        firstColumn: ColumnRef.optional(),
        perDay: z.int().min(1).max(1440).optional(),
      })
      .optional(),
    time: z.object({
      columns: z.array(ColumnRef).min(1).max(3),
      format: z
        .string()
        .min(1)
        .max(60)
        .meta({ description: 'iso, epochSeconds, epochMilliseconds, excelSerial or a date-fns pattern' }),
      zone: z.string().min(1).max(64).meta({ description: 'An IANA name, UTC, or +hh:mm' }),
      stamp: z.enum(['start', 'end', 'instant']),
    }),
    columns: z.array(PlanColumn).min(1).max(400),
  })
  .meta({ id: 'ColumnPlan' });
export type ColumnPlan = z.infer<typeof ColumnPlan>;

export const Question = z
  .object({
    id: z.string(),
    about: z.string().meta({ description: 'What is asked, in a sentence' }),
    choices: z.array(z.object({ value: z.string(), reason: z.string() })),
  })
  .meta({ id: 'Question' });
export type Question = z.infer<typeof Question>;

export const RowProblem = z
  .object({
    line: z.int().nullable(),
    column: z.string().nullable(),
    reason: z.string(),
    count: z.int(),
  })
  .meta({ id: 'RowProblem' });
export type RowProblem = z.infer<typeof RowProblem>;

/** How one column was understood, with the reason, for the person who checks it. */
export const ColumnReading = z.object({
  column: z.string(),
  number: z.int(),
  channel: z.enum(CHANNELS).nullable(),
  confidence: z.number().min(0).max(1),
  reason: z.string(),
});
export type ColumnReading = z.infer<typeof ColumnReading>;

export const Sample = z
  .object({
    header: z.array(z.string()),
    lines: z.array(z.object({ line: z.int(), cells: z.array(z.string()) })).meta({
      description: 'The first rows as they stand in the file',
    }),
    readings: z
      .array(z.object({ line: z.int(), at: z.string().nullable(), values: z.array(z.number().nullable()) }))
      .meta({ description: 'The same rows as read, values in the order of plan.columns, as written' }),
    rows: z.int().nullable().meta({ description: 'Data rows in the file, null when it is too long to count at once' }),
    from: z.string().nullable(),
    to: z.string().nullable(),
    columns: z.array(ColumnReading),
  })
  .meta({ id: 'Sample' });
export type Sample = z.infer<typeof Sample>;

export const Inspection = z
  .object({
    plan: ColumnPlan.nullable(),
    confidence: z.number().min(0).max(1),
    questions: z.array(Question),
    sample: Sample,
    problems: z.array(RowProblem),
  })
  .meta({ id: 'Inspection' });
export type Inspection = z.infer<typeof Inspection>;
