import { writeFileSync } from 'node:fs';
import path from 'node:path';
import { sampleBytes, SAMPLES } from './files.ts';

/** Writes the sample logs beside this folder: `npx tsx samples/make/write.ts`. The same bytes every time. */
const folder = path.dirname(import.meta.dirname);
for (const [name, sample] of Object.entries(SAMPLES)) {
  const bytes = sampleBytes(sample);
  writeFileSync(path.join(folder, name), bytes);
  process.stdout.write(`${name} ${bytes.length} bytes\n`);
}
