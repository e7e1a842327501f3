import express from 'express';
import type { RequestHandler, Router } from 'express';
import { z } from 'zod';
import type { Deps } from '../deps.ts';
import { admit } from './access.ts';
import type { Admission } from './access.ts';
import { problem } from './problems.ts';
import { isRaw, STREAMED } from './route.ts';
import type { Route } from './route.ts';
import { checked } from './validate.ts';

declare module 'express-serve-static-core' {
  interface Locals {
    admission?: Admission;
    /** What the schemas made of query and body. */
    fields?: { query: unknown; body: unknown };
  }
}

const BODY_LIMIT = '256kb';
const json = express.json({ limit: BODY_LIMIT, type: ['json', '+json'] });

/**
 * The routes as a router. Each request passes: access by the route's policy, body, schemas, the route's own
 * limits, its handler; the answer is one of those declared.
 */
export function routerOf(deps: Deps, routes: readonly Route[]): Router {
  const router = express.Router({ caseSensitive: true });
  for (const [path, some] of byPath(routes)) {
    const at = router.route(path);
    for (const route of some) at[route.method](...stepsOf(deps, route));
    const methods = some.map((route) => route.method.toUpperCase());
    const allow = [...(methods.includes('GET') ? ['HEAD'] : []), ...methods].join(', ');
    at.all(() => {
      throw problem('method-not-allowed', `This address takes ${allow}.`, { headers: { Allow: allow } });
    });
  }
  return router;
}

function byPath(routes: readonly Route[]): Map<string, Route[]> {
  const paths = new Map<string, Route[]>();
  for (const route of routes) paths.set(route.path, [...(paths.get(route.path) ?? []), route]);
  return paths;
}

function stepsOf(deps: Deps, route: Route): RequestHandler[] {
  const { body } = route;
  return [
    async (req, res, next) => {
      res.locals.admission = await admit(deps, route.policy, req, res);
      next();
    },
    ...(body ? [expectType(isRaw(body) ? body.contentType : 'application/json')] : []),
    ...(body && !isRaw(body) ? [json] : []),
    validate(route),
    ...(route.before?.(deps) ?? []),
    handlerOf(deps, route),
  ];
}

function expectType(contentType: string): RequestHandler {
  return (req, _res, next) => {
    // Without any body the schema says what is missing; a body of another type is refused by its type.
    const is = req.is([contentType, contentType === 'application/json' ? '+json' : contentType]);
    if (is === false && req.get('content-length') !== '0')
      throw problem('wrong-content-type', `The body must be ${contentType}.`);
    next();
  };
}

function validate(route: Route): RequestHandler {
  const query = route.query?.strict();
  const body = route.body === undefined || isRaw(route.body) ? undefined : strict(route.body);
  return (req, res, next) => {
    res.locals.fields = { query: query && checked(query, req.query), body: body && checked(body, req.body ?? {}) };
    next();
  };
}

function handlerOf(deps: Deps, route: Route): RequestHandler {
  return async (req, res) => {
    const { params } = req;
    const call = { deps, req, res, params, ...res.locals.fields, ...res.locals.admission };
    const answer = (await route.handle(call as unknown as Parameters<Route['handle']>[0])) as
      typeof STREAMED | { status: number; body?: unknown; headers?: Record<string, string> };
    if (answer === STREAMED) return;
    const declared = route.answers[answer.status];
    if (!declared)
      throw new Error(`${route.method} ${route.path} answered ${answer.status}, which it does not declare.`);
    res.status(answer.status).set(answer.headers ?? {});
    if (!declared.schema) {
      if (answer.body === undefined) res.end();
      else res.type(declared.contentType ?? 'text/plain').send(answer.body);
      return;
    }
    if (deps.config.checkAnswers) assertAnswer(route, declared.schema, answer.body);
    res.json(answer.body);
  };
}

const strict = (schema: z.ZodType) => (schema instanceof z.ZodObject ? schema.strict() : schema);

function assertAnswer(route: Route, schema: z.ZodType, body: unknown): void {
  const result = strict(schema).safeParse(body);
  if (!result.success)
    throw new Error(`${route.method} ${route.path} broke its own schema: ${z.prettifyError(result.error)}`);
}
