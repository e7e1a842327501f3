/** Words for the two states that mean the same everywhere. Open and closed do not: they are asked about. */
export const ON_WORDS: readonly string[] = [
  '1',
  'on',
  'true',
  'yes',
  'y',
  'active',
  'enabled',
  'running',
  'ein',
  'an',
  'ja',
  'aktiv',
  'marche',
  'oui',
  'vrai',
  'encendido',
  'sí',
  'si',
  'acceso',
  'sì',
  'aan',
  'waar',
  'wahr',
];
export const OFF_WORDS: readonly string[] = [
  '0',
  'off',
  'false',
  'no',
  'n',
  'inactive',
  'disabled',
  'stopped',
  'aus',
  'nein',
  'inaktiv',
  'arrêt',
  'arret',
  'non',
  'faux',
  'apagado',
  'spento',
  'uit',
  'nee',
  'onwaar',
  'falsch',
];

/**
 * The words of a state column.
 * @param on words of the plan for "on"; they come before the usual ones
 * @param off words of the plan for "off"
 * @returns a map from a word in the lower case to 1 or 0
 */
export function stateWords(on: readonly string[] = [], off: readonly string[] = []): Map<string, 0 | 1> {
  const words = new Map<string, 0 | 1>();
  for (const word of OFF_WORDS) words.set(word, 0);
  for (const word of ON_WORDS) words.set(word, 1);
  for (const word of off) words.set(word.trim().toLowerCase(), 0);
  for (const word of on) words.set(word.trim().toLowerCase(), 1);
  return words;
}
