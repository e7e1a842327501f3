import type { Request, Response } from 'express';
import type { Readable } from 'node:stream';
import multer from 'multer';
import type { StorageEngine } from 'multer';
import { ColumnPlan } from '../../shared/api/plan.ts';
import { badFields, Problem, problem } from '../http/problems.ts';
import { checked } from '../http/validate.ts';

const FIELD_BYTES = 256 * 1024;
const NAME_LENGTH = 200;

export interface Received<Taken> {
  fileName: string;
  taken: Taken;
  plan: ColumnPlan | null;
}

/**
 * Receives a form with one `file` and, if it likes, a `plan`.
 *
 * @param take is given the file's bytes as they come, and the plan where it stood before the file
 * @throws Problem: no file, a field that is not known, a plan that is none, a file over the limit, a form cut short
 */
export async function receive<Taken>(
  req: Request,
  res: Response,
  maxBytes: number,
  take: (bytes: AsyncIterable<Buffer>, fileName: string, plan: ColumnPlan | null) => Promise<Taken>,
): Promise<Received<Taken>> {
  let received: { fileName: string; taken: Taken } | null = null;
  let failure: unknown = null;
  const storage: StorageEngine = {
    _handleFile: (_req, file, done) => {
      const fileName = shownName(file.originalname);
      const work = async () => {
        received = { fileName, taken: await take(whole(file.stream, maxBytes), fileName, planOf(req.body)) };
      };
      work().then(
        () => done(null, {}),
        (error: unknown) => {
          failure ??= error;
          // What still comes of the file is let by: cut off, the form would end with another error than this one.
          file.stream.resume();
          done(error);
        },
      );
    },
    // Nothing is in a folder; what is half kept goes with `take`.
    _removeFile: (_req, _file, done) => done(null),
  };
  const form = multer({
    storage,
    defParamCharset: 'utf8',
    limits: { fileSize: maxBytes, files: 1, fields: 4, fieldSize: FIELD_BYTES, parts: 8 },
  }).single('file');
  await new Promise<void>((resolve, reject) => {
    form(req, res, (error: unknown) => (error ? reject(refusal(error, failure, maxBytes)) : resolve()));
  });
  if (!received) throw badFields([{ path: 'file', message: 'no file was sent' }]);
  const { fileName, taken } = received as { fileName: string; taken: Taken };
  return { fileName, taken, plan: planOf(req.body) };
}

/** A file's bytes; one that was cut off at the limit fails at its end, so that nobody takes the part for the whole. */
async function* whole(stream: Readable, maxBytes: number): AsyncGenerator<Buffer> {
  for await (const piece of stream.iterator({ destroyOnReturn: false })) yield piece as Buffer;
  if ((stream as Readable & { truncated?: boolean }).truncated) throw tooLarge(maxBytes);
}

const tooLarge = (maxBytes: number) =>
  problem('too-large', `The file is larger than the ${megabytes(maxBytes)} that are taken at once.`);

function planOf(body: Record<string, unknown> | undefined): ColumnPlan | null {
  const { plan, ...others } = body ?? {};
  const unknown = Object.keys(others);
  if (unknown.length) throw badFields(unknown.map((path) => ({ path, message: `there is no field “${path}” here` })));
  if (plan === undefined || plan === '') return null;
  let value: unknown;
  try {
    value = JSON.parse(String(plan));
  } catch {
    throw badFields([{ path: 'plan', message: 'this is not JSON' }]);
  }
  return checked(ColumnPlan, value, 'plan');
}

/** The name as people see it again: one line, no control characters, no path. */
function shownName(name: string): string {
  const plain = name
    .replace(/[\p{Cc}\p{Cf}\p{Surrogate}]/gu, '')
    .replace(/^.*[\\/]/, '')
    .trim();
  return [...(plain || 'log.csv')].slice(-NAME_LENGTH).join('');
}

function refusal(error: unknown, failure: unknown, maxBytes: number): unknown {
  if (failure instanceof Problem) return failure;
  if (error instanceof multer.MulterError) {
    if (error.code === 'LIMIT_FILE_SIZE') return tooLarge(maxBytes);
    return badFields([{ path: error.field ?? 'file', message: `this form cannot be taken: ${error.message}` }]);
  }
  const message = error instanceof Error ? error.message : '';
  if (/aborted|closed|Unexpected end of form|Premature close/i.test(message))
    return problem('bad-request', 'The upload was broken off before its end; nothing was kept.', { cause: error });
  if (/multipart|boundary|part header/i.test(message))
    return problem('bad-request', 'The form could not be read.', { cause: error });
  return failure ?? error;
}

function megabytes(bytes: number): string {
  return bytes >= 2 ** 20 ? `${Math.floor(bytes / 2 ** 20)} MB` : `${bytes} bytes`;
}
