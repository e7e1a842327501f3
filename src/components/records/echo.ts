import type { Parsed } from './parse.ts';

/**
 * What a field was read as, where that is not plainly what stands in it.
 * @returns null where the field is empty, wrong, or says just that already
 */
export function echo<T>(text: string, parse: (text: string) => Parsed<T>, show: (value: T) => string): string | null {
  if (text.trim() === '') return null;
  const parsed = parse(text);
  if (!parsed.ok) return null;
  const words = show(parsed.value);
  return words.replace(/\s/g, '') === text.replace(/\s/g, '') ? null : words;
}
