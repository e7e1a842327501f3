import { computed, inject, provide, ref, type ComputedRef, type InjectionKey, type Ref } from 'vue';
import type { Default } from '../../../shared/api/property.ts';
import { fieldId } from './field-id.ts';
import { messageAt, type Issue } from './issues.ts';
import { toText } from './parse.ts';

/** What every field of a form needs: its id, what is wrong with it, and which default stands in for it. */
export interface FieldContext {
  id: (path: string) => string;
  error: (path: string) => string | undefined;
  /** The default taken while the field is empty, with its source, after any words of the field's own. */
  hint: (path: string, own?: string) => string | undefined;
}

const KEY: InjectionKey<FieldContext> = Symbol('field context');

export interface FormState extends FieldContext {
  issues: ComputedRef<Issue[]>;
  /** Counts the attempts that failed; the summary takes the focus when it grows. */
  attempt: Ref<number>;
  detail: Ref<string | null>;
  /** Checks before sending. @returns true where nothing is wrong */
  check: () => boolean;
  /** Takes over what the server found. */
  refused: (detail: string | null, issues: Issue[]) => void;
  /** All is well: nothing is shown any more. */
  accepted: () => void;
}

/**
 * The course of a form: nothing is called wrong before the first attempt; after it every field is told as it stands.
 * @param form a short name, unique on the page
 * @param local what is wrong by the client's own reading
 * @param defaults the property's defaults with their sources
 */
export function useForm(form: string, local: () => Issue[], defaults: () => readonly Default[] = () => []): FormState {
  const tried = ref(false);
  const server = ref<Issue[]>([]);
  const attempt = ref(0);
  const detail = ref<string | null>(null);
  const issues = computed(() => [...(tried.value ? local() : []), ...server.value]);

  const context: FieldContext = {
    id: (path) => fieldId(form, path),
    error: (path) => messageAt(issues.value, path),
    hint: (path, own) => [own, defaultWords(defaults(), path)].filter(Boolean).join(' ') || undefined,
  };
  provide(KEY, context);

  return {
    ...context,
    issues,
    attempt,
    detail,
    check() {
      tried.value = true;
      server.value = [];
      detail.value = null;
      if (issues.value.length === 0) return true;
      attempt.value += 1;
      return false;
    },
    refused(words, found) {
      server.value = found;
      detail.value = words;
      attempt.value += 1;
    },
    accepted() {
      tried.value = false;
      server.value = [];
      detail.value = null;
    },
  };
}

/** The form that the surrounding component holds. */
export function useFields(): FieldContext {
  const context = inject(KEY);
  if (!context) throw new Error('A field stands outside any form: call useForm in a component above it.');
  return context;
}

const VALUE_WORDS: Record<string, string> = {
  house: 'the whole house',
  boiler: 'the boiler',
  hotWater: 'hot water alone',
  metered: 'metered',
  estimated: 'estimated',
};

/** A default's value in words: shares in per cent, choices by the name the screen gives them. */
export function defaultValue(one: Default): string {
  if (one.value === null) return 'none';
  if (typeof one.value === 'boolean') return one.value ? 'yes' : 'no';
  if (typeof one.value === 'string') return VALUE_WORDS[one.value] ?? one.value;
  if (one.unit === 'share') return `${toText(one.value * 100)} %`;
  return `${toText(one.value)}${one.unit ? ` ${one.unit}` : ''}`;
}

/** `Empty counts as 3 kW (common practice, no source).` */
export function defaultWords(defaults: readonly Default[], path: string): string | undefined {
  const found = defaults.find((one) => one.path === path || one.path === `system.${path}`);
  return found ? `Empty counts as ${defaultValue(found)} (${found.source}).` : undefined;
}
