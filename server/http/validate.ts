import type { z } from 'zod';
import { badFields } from './problems.ts';
import type { FieldError } from './problems.ts';

/**
 * What a schema makes of a value, or a 422 that names every field. Keys that the schema does not know are
 * refused by name: leaving them out silently would lose what someone meant to say.
 */
export function checked<S extends z.ZodType>(schema: S, value: unknown, at = ''): z.output<S> {
  const unfit = unfitText(value, at);
  if (unfit.length) throw badFields(unfit);
  const result = schema.safeParse(value);
  if (result.success) return result.data;
  throw badFields(result.error.issues.flatMap((issue) => fieldErrors(issue, at)));
}

function fieldErrors(issue: z.core.$ZodIssue, at: string): FieldError[] {
  const path = pathOf([...(at ? [at] : []), ...issue.path]);
  if (issue.code === 'unrecognized_keys')
    return issue.keys.map((key) => ({
      path: path ? `${path}.${key}` : key,
      message: `there is no field “${key}” here`,
    }));
  return [{ path, message: issue.message }];
}

function pathOf(path: readonly PropertyKey[]): string {
  return path.reduce<string>(
    (text, key) => (typeof key === 'number' ? `${text}[${key}]` : text ? `${text}.${String(key)}` : String(key)),
    '',
  );
}

/** Text that no database can keep: a NUL, or half of a surrogate pair. */
function unfitText(value: unknown, path: string): FieldError[] {
  if (typeof value === 'string')
    return value.includes('\0') || /\p{Surrogate}/u.test(value)
      ? [{ path, message: 'holds a character that is no text (a NUL or half a character)' }]
      : [];
  if (Array.isArray(value)) return value.flatMap((item, index) => unfitText(item, `${path}[${index}]`));
  if (value === null || typeof value !== 'object') return [];
  return Object.entries(value).flatMap(([key, item]) => unfitText(item, path ? `${path}.${key}` : key));
}
