import { z } from 'zod';
import { ColumnPlan, Question, RowProblem, Sample } from './plan.ts';

export const LOG_STATUSES = ['waiting', 'reading', 'asking', 'refused', 'kept', 'failed', 'withdrawn'] as const;
export type LogStatus = (typeof LOG_STATUSES)[number];

export const Log = z
  .object({
    id: z.string(),
    propertyId: z.string(),
    fileName: z.string(),
    bytes: z.int(),
    uploadedAt: z.string(),
    uploadedBy: z.string().nullable(),
    status: z.enum(LOG_STATUSES),
    progress: z.number().min(0).max(1),
    rows: z.object({ read: z.int(), accepted: z.int(), rejected: z.int(), unchanged: z.int() }),
    from: z.string().nullable().meta({ description: 'First instant read' }),
    to: z.string().nullable().meta({ description: 'Last instant read' }),
    plan: ColumnPlan.nullable(),
    questions: z.array(Question),
    problems: z.array(RowProblem),
    sample: Sample.nullable(),
    failure: z.string().nullable().meta({ description: 'Why it was refused or failed, in a sentence' }),
  })
  .meta({ id: 'Log' });
export type Log = z.infer<typeof Log>;

export const LogAnswer = z.object({ log: Log, same: z.boolean().optional() }).meta({ id: 'LogAnswer' });
export type LogAnswer = z.infer<typeof LogAnswer>;
export const LogList = z.object({ logs: z.array(Log.omit({ sample: true, plan: true })) }).meta({ id: 'LogList' });
export type LogList = z.infer<typeof LogList>;
export const PlanBody = z.object({ plan: ColumnPlan }).meta({ id: 'PlanBody' });
export const WaitQuery = z.object({ wait: z.coerce.number().min(0).max(60).optional() });
