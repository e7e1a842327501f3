import type { ErrorRequestHandler, RequestHandler } from 'express';
import { asProblem, problem } from './problems.ts';

export const notFound: RequestHandler = () => {
  throw problem('not-found');
};

/** The last handler: every error becomes problem details; unknown ones are logged whole and shown vaguely. */
export const problemHandler: ErrorRequestHandler = (error, req, res, next) => {
  const answer = asProblem(error);
  if (answer.status >= 500) req.log.error({ err: answer.cause ?? answer }, answer.code);
  // Too late for an answer of our own: the connection is cut, so that nobody takes the part for the whole.
  if (res.headersSent) return next(error);
  res.status(answer.status).set(answer.headers).type('application/problem+json');
  res.send(JSON.stringify(answer.body(String(req.id))));
};
