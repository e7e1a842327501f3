import type { Parsed } from './parse.ts';

/** What is wrong with one field: `path` as the API names it (`heaters.0.ratedKw`), `label` as the screen does. */
export interface Issue {
  path: string;
  label: string;
  message: string;
}

/** Reads the fields of a form one by one and gathers what is wrong, so that all of it can be told at once. */
export class FieldReader {
  readonly issues: Issue[] = [];

  /**
   * @param path where the value goes
   * @param label the field's name on the screen
   * @param text as typed; empty means not known
   * @param parse turns the text into the value
   * @returns `undefined` where the field is empty or wrong: absent is not zero
   */
  optional<T>(path: string, label: string, text: string, parse: (text: string) => Parsed<T>): T | undefined {
    if (text.trim() === '') return undefined;
    const parsed = parse(text);
    if (parsed.ok) return parsed.value;
    this.issues.push({ path, label, message: parsed.message });
    return undefined;
  }

  /** As `optional`, but an empty field is told. The stand-in keeps the types whole; the issue keeps it from being sent. */
  required<T>(path: string, label: string, text: string, parse: (text: string) => Parsed<T>, standIn: T): T {
    if (text.trim() === '') {
      this.issues.push({ path, label, message: 'This is needed.' });
      return standIn;
    }
    return this.optional(path, label, text, parse) ?? standIn;
  }

  say(path: string, label: string, message: string): void {
    this.issues.push({ path, label, message });
  }
}

/**
 * Bad fields as the server named them, made ready for the form.
 * @param errors from the problem details
 * @param label gives the screen's name for a path
 * @param under the part of the body that the form speaks of, cut from the front of each path
 */
export function issuesFromServer(
  errors: readonly { path: string; message: string }[],
  label: (path: string) => string,
  under = '',
): Issue[] {
  return errors.map((error) => {
    const path = error.path.replace(/^body\./, '').replace(/\[(\d+)\]/g, '.$1');
    const cut = under && path.startsWith(`${under}.`) ? path.slice(under.length + 1) : path;
    return { path: cut, label: label(cut), message: error.message };
  });
}

/** The messages for one field, joined; `undefined` where it is sound. */
export function messageAt(issues: readonly Issue[], path: string): string | undefined {
  const all = issues.filter((issue) => issue.path === path).map((issue) => issue.message);
  return all.length > 0 ? all.join(' ') : undefined;
}
