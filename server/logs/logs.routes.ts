import type { Request, Response } from 'express';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { z } from 'zod';
import { LogAnswer, LogList, PlanBody, WaitQuery } from '../../shared/api/log.ts';
import { ColumnPlan, Inspection } from '../../shared/api/plan.ts';
import type { Deps } from '../deps.ts';
import { limited } from '../http/limits.ts';
import { defineRoute, STREAMED } from '../http/route.ts';
import type { Route } from '../http/route.ts';
import { badFields } from '../http/problems.ts';
import {
  acceptLog,
  awaitLog,
  contextOf,
  inspect,
  inspectionAnswer,
  listLogs,
  logOf,
  putPlan,
  shown,
  withdrawLog,
  writeOriginal,
} from './logs.service.ts';
import { originalBytes } from './originals.service.ts';
import { rejectedRows } from './rejected.ts';
import { receive } from './upload.ts';

const tag = 'Logs';
const form = {
  contentType: 'multipart/form-data',
  fields: z.object({
    file: z.string().meta({ format: 'binary', description: 'The CSV file, as it is, or packed by gzip or zip' }),
    plan: ColumnPlan.optional().meta({ description: 'A column plan as JSON' }),
  }),
};
const log = { description: 'The log as it stands', schema: LogAnswer };

/** Uploads and looks at files are counted together for each team. */
const perTeam = ({ db, config }: Deps) => [
  limited(db, {
    name: 'uploads',
    limit: config.uploadsPerMinute,
    windowSeconds: 60,
    key: (_req, res) => teamOf(res),
  }),
];

function teamOf(res: Response): string {
  const teams = res.locals.admission?.access?.teamIds ?? [];
  return [...teams].sort()[0] ?? '';
}

/** The caller's own name for an upload; a repeat under the same name is the same upload. */
function keyOf(req: Request): string | null {
  const key = req.get('idempotency-key');
  if (key === undefined) return null;
  if (!/^[\x21-\x7e]{1,200}$/.test(key))
    throw badFields([{ path: 'Idempotency-Key', message: '1 to 200 characters of plain ASCII, without blanks' }]);
  return key;
}

/** Offers a stream as a download under a name of its own; what it holds is inert. */
async function download(res: Response, fileName: string, type: string, body: Readable): Promise<typeof STREAMED> {
  res.attachment(fileName);
  res.set({ 'Content-Type': type, 'X-Content-Type-Options': 'nosniff', 'Content-Security-Policy': 'sandbox' });
  try {
    await pipeline(body, res);
  } catch (error) {
    // Who went away needs no answer.
    if (!res.destroyed) throw error;
  }
  return STREAMED;
}

/** Ends with the request, so that nobody waits for a caller who has gone. */
function untilClosed(res: Response): AbortSignal {
  const gone = new AbortController();
  res.once('close', () => gone.abort());
  return gone.signal;
}

export const logRoutes: Route[] = [
  defineRoute({
    method: 'post',
    path: '/api/properties/:id/logs/inspect',
    policy: { property: 'upload' },
    tag,
    summary: 'How a file would be read',
    description:
      'Looks at the file by the plan given, else by a saved plan for files of its shape, else by what is found. Keeps nothing.',
    body: form,
    answers: { 200: { description: 'The plan, what is doubtful, and the first rows as read', schema: Inspection } },
    problems: ['bad-fields', 'too-large', 'too-many', 'bad-request'],
    before: perTeam,
    handle: async ({ deps: { db, config }, req, res, params }) => {
      let given: ColumnPlan | null = null;
      const { taken, plan } = await receive(req, res, config.uploadMaxBytes, (bytes, fileName, planBefore) => {
        given = planBefore;
        return inspect(db, params.id, bytes, fileName, planBefore);
      });
      return { status: 200, body: await inspectionAnswer(db, params.id, taken, given, plan) };
    },
  }),
  defineRoute({
    method: 'post',
    path: '/api/properties/:id/logs',
    policy: { property: 'upload' },
    tag,
    summary: 'Send a log',
    description:
      'The original is durable when this answers. Without a plan a saved one for files of its shape is taken, or the one ' +
      'that is found; if that leaves a question the status becomes `asking`. The same bytes read the same way answer 200 ' +
      'with the log that is there and `same: true`; a withdrawn one comes back. With an `Idempotency-Key` a repeat of ' +
      'the same upload within a day changes nothing.',
    body: form,
    answers: {
      200: { ...log, description: 'The log that was there' },
      202: { ...log, description: 'Queued to be read' },
    },
    problems: ['bad-fields', 'too-large', 'too-many', 'bad-request', 'no-space'],
    before: perTeam,
    handle: async ({ deps, req, res, params, person, access }) => {
      const key = keyOf(req);
      const { fileName, taken, plan } = await receive(req, res, deps.config.uploadMaxBytes, (bytes) =>
        writeOriginal(deps, params.id, bytes),
      );
      const accepted = await acceptLog(deps, person, params.id, { fileName, arrived: taken, plan, key });
      const body = { log: shown(accepted.log, access.may('traces')) };
      return accepted.same ? { status: 200, body: { ...body, same: true } } : { status: 202, body };
    },
  }),
  defineRoute({
    method: 'get',
    path: '/api/properties/:id/logs',
    policy: { property: 'days' },
    tag,
    summary: 'The logs of a property',
    answers: { 200: { description: 'The newest first, withdrawn ones included', schema: LogList } },
    handle: async ({ deps: { db }, params }) => ({ status: 200, body: await listLogs(db, params.id) }),
  }),
  defineRoute({
    method: 'get',
    path: '/api/logs/:id',
    policy: { log: 'days' },
    tag,
    summary: 'A log',
    description:
      'With `wait` the answer is held back until something of the log changes, at most that many seconds. `kept` means ' +
      'that every figure and finding that depends on it is up to date.',
    query: WaitQuery,
    answers: { 200: log },
    handle: async ({ deps: { db }, res, params, query, access }) => {
      const found = await awaitLog(db, access.propertyId, params.id, query.wait ?? 0, untilClosed(res));
      return { status: 200, body: { log: shown(found, access.may('traces')) } };
    },
  }),
  defineRoute({
    method: 'put',
    path: '/api/logs/:id/plan',
    policy: { log: 'upload' },
    tag,
    summary: 'Answer a log’s questions, or correct how it is read',
    description: 'Its original is read again by this plan. What the log said before is replaced.',
    body: PlanBody,
    answers: { 202: { ...log, description: 'Queued to be read again' } },
    problems: ['conflict'],
    handle: async ({ deps, params, person, access, body }) => {
      const changed = await putPlan(deps, person, access.propertyId, params.id, body.plan);
      return { status: 202, body: { log: shown(changed, access.may('traces')) } };
    },
  }),
  defineRoute({
    method: 'get',
    path: '/api/logs/:id/rejected.csv',
    policy: { log: 'traces' },
    tag,
    summary: 'The rows not taken, with line and reason',
    answers: { 200: { description: 'line, column, reason, text', contentType: 'text/csv' } },
    handle: async ({ deps: { db }, res, params, access: { propertyId } }) => {
      const { original, plan, fileName } = await logOf(db, propertyId, params.id);
      const { timeZone } = await contextOf(db, propertyId);
      const name = `${fileName.replace(/\.[^.]*$/, '')}-rejected.csv`;
      return download(res, name, 'text/csv; charset=utf-8', rejectedRows(db, propertyId, original, plan, timeZone));
    },
  }),
  defineRoute({
    method: 'get',
    path: '/api/logs/:id/original',
    policy: { log: 'traces' },
    tag,
    summary: 'The file as it was sent',
    answers: { 200: { description: 'Byte for byte', contentType: 'application/octet-stream' } },
    handle: async ({ deps: { db }, res, params, access: { propertyId } }) => {
      const { original, fileName, bytes } = await logOf(db, propertyId, params.id);
      res.set('Content-Length', String(bytes));
      const body = Readable.from(originalBytes(db, propertyId, original), { objectMode: false });
      return download(res, fileName, 'application/octet-stream', body);
    },
  }),
  defineRoute({
    method: 'delete',
    path: '/api/logs/:id',
    policy: { log: 'upload' },
    tag,
    summary: 'Withdraw a log',
    description: 'All figures become as if it had never come. Withdrawn already: nothing happens.',
    answers: { 204: { description: 'It is withdrawn' } },
    handle: async ({ deps, params, person, access }) => {
      await withdrawLog(deps, person, access.propertyId, params.id);
      return { status: 204 };
    },
  }),
];
