import { useDebounceFn } from '@vueuse/core';
import { computed, ref, shallowRef, type ComputedRef, type Ref, type ShallowRef } from 'vue';
import type { ColumnPlan, Inspection, Question, RowProblem, Sample } from '../../../shared/api/plan.ts';
import type { Log } from '../../../shared/api/log.ts';
import { applyAnswer } from '../../../shared/columns/answer.ts';
import type { Issue } from '../records/issues.ts';
import { planIssues, startPlan } from './plan-edit.ts';

export interface Draft {
  plan: Ref<ColumnPlan>;
  answers: Ref<Record<string, string>>;
  /** Every question asked so far, so that an answer can be changed. */
  questions: ComputedRef<Question[]>;
  sample: ComputedRef<Sample | null>;
  problems: ComputedRef<RowProblem[]>;
  /** Whether the preview shows the draft as it stands. */
  checking: Ref<boolean>;
  checkError: Ref<string | null>;
  changed: Ref<boolean>;
  issues: () => Issue[];
  answer: (id: string, value: string) => void;
  edit: (plan: ColumnPlan) => void;
}

/**
 * A column plan under correction: answers and edits go into one draft, and each change is looked at again.
 * @param log the log as the server has it
 * @param inspect how the file would be read by a plan
 * @param say turns what was thrown into a sentence
 */
export function useDraft(
  log: Log,
  timeZone: string,
  inspect: (plan: ColumnPlan) => Promise<Inspection>,
  say: (error: unknown) => string,
): Draft {
  const plan = shallowRef(log.plan ?? startPlan(log.sample, timeZone));
  const answers = ref<Record<string, string>>({});
  const looked: ShallowRef<Inspection | null> = shallowRef(null);
  const checking = ref(false);
  const checkError = ref<string | null>(null);
  const changed = ref(false);
  let turn = 0;

  const look = useDebounceFn(async (draft: ColumnPlan) => {
    const mine = ++turn;
    try {
      const inspection = await inspect(draft);
      if (mine !== turn) return;
      looked.value = inspection;
      checkError.value = null;
    } catch (error) {
      if (mine !== turn) return;
      checkError.value = say(error);
    }
    checking.value = false;
  }, 400);

  function change(next: ColumnPlan): void {
    plan.value = next;
    changed.value = true;
    turn += 1;
    if (planIssues(next).length > 0) {
      checking.value = false;
      return;
    }
    checking.value = true;
    void look(next);
  }

  const questions = computed(() => {
    const asked = new Map(log.questions.map((question) => [question.id, question]));
    for (const question of looked.value?.questions ?? []) asked.set(question.id, question);
    return [...asked.values()];
  });

  return {
    plan,
    answers,
    questions,
    sample: computed(() => looked.value?.sample ?? log.sample),
    problems: computed(() => looked.value?.problems ?? log.problems),
    checking,
    checkError,
    changed,
    issues() {
      const open = new Set((looked.value?.questions ?? log.questions).map((question) => question.id));
      const unanswered = questions.value
        .filter((question) => open.has(question.id) && answers.value[question.id] === undefined)
        .map((question) => ({
          path: `questions.${question.id}`,
          label: question.about,
          message: 'Choose one of the answers.',
        }));
      return [...unanswered, ...planIssues(plan.value)];
    },
    answer(id, value) {
      answers.value = { ...answers.value, [id]: value };
      change(applyAnswer(plan.value, id, value));
    },
    edit: change,
  };
}
