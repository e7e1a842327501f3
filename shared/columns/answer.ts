import type { ColumnPlan, ColumnRef, PlanColumn } from '../api/plan.ts';

/** What the answer to a question changes in a plan. */
export interface Answer {
  /** Merged into the plan; null takes a field out. */
  plan?: PlanPatch;
  /** Columns put in, or put in place of those of the same `column`. */
  columns?: PlanColumn[];
  /** Columns taken out. */
  leave?: ColumnRef[];
}

export type PlanPatch = {
  [Field in keyof Omit<ColumnPlan, 'time' | 'columns'>]?: ColumnPlan[Field] | null;
} & { time?: Partial<ColumnPlan['time']> };

/** The `value` of a choice: the answer as JSON. */
export function choiceValue(answer: Answer): string {
  return JSON.stringify(answer);
}

function parse(value: string): Answer | null {
  try {
    const answer: unknown = JSON.parse(value);
    return typeof answer === 'object' && answer !== null && !Array.isArray(answer) ? answer : null;
  } catch {
    return null;
  }
}

/**
 * The plan with a question answered. All that the answer changes is written in its value.
 * @param plan the plan that the question was about
 * @param _questionId the question's id; the value says all, the id is for the caller's records
 * @param value the `value` of the choice taken
 * @returns a new plan; the given one if the value is none of ours
 */
export function applyAnswer(plan: ColumnPlan, _questionId: string, value: string): ColumnPlan {
  const answer = parse(value);
  if (!answer) return plan;
  const { time, ...rest } = answer.plan ?? {};
  const fields: Record<string, unknown> = { ...plan };
  for (const [field, to] of Object.entries(rest)) {
    if (to === null && field !== 'headerLine') delete fields[field];
    else fields[field] = to;
  }
  const next = fields as ColumnPlan;
  if (time) next.time = { ...plan.time, ...time };
  const same = (a: ColumnRef, b: ColumnRef): boolean => String(a) === String(b);
  const out = [...(answer.leave ?? []), ...(answer.columns ?? []).map(({ column }) => column)];
  const kept: PlanColumn[] = [];
  const put = new Set<PlanColumn>();
  for (const column of plan.columns) {
    if (!out.some((ref) => same(ref, column.column))) kept.push(column);
    const instead = answer.columns?.find((other) => same(other.column, column.column));
    if (instead && !put.has(instead)) {
      put.add(instead);
      kept.push(instead);
    }
  }
  for (const column of answer.columns ?? []) if (!put.has(column)) kept.push(column);
  next.columns = kept;
  return next;
}
