import path from 'node:path';

/** The checkout. */
export const ROOT = path.resolve(import.meta.dirname, '../..');

/** The built product. */
export const DIST = path.join(ROOT, 'dist');

/** Where everything of this checkout is kept. `DATA_FOLDER` names another, for tests. */
export const DATA = path.resolve(ROOT, process.env.DATA_FOLDER || '.data');
