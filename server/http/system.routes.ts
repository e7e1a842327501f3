import { createRequire } from 'node:module';
import { z } from 'zod';
import { pendingMigrations } from '../database/migrate.ts';
import { docsPage } from './docs.ts';
import { DOCS_STYLE } from './docs-style.ts';
import { openApiOf } from './openapi.ts';
import { problem } from './problems.ts';
import { defineRoute, STREAMED } from './route.ts';
import type { Route } from './route.ts';

const tag = 'The service';
const Health = z.object({ status: z.literal('ok') }).meta({ id: 'Health' });

const FONTS: Record<string, string> = {
  'text-400.woff2': '@fontsource/atkinson-hyperlegible/files/atkinson-hyperlegible-latin-400-normal.woff2',
  'text-700.woff2': '@fontsource/atkinson-hyperlegible/files/atkinson-hyperlegible-latin-700-normal.woff2',
  'code-400.woff2': '@fontsource/roboto-mono/files/roboto-mono-latin-400-normal.woff2',
};

/** The routes about the service itself; the documentation describes `others` and these. */
export function systemRoutes(others: readonly Route[]): Route[] {
  const routes: Route[] = [
    defineRoute({
      method: 'get',
      path: '/api/health',
      policy: 'anyone',
      tag,
      summary: 'Whether the service is ready',
      description: 'Once the database is reachable and its schema is up to date.',
      answers: { 200: { description: 'Ready', schema: Health } },
      problems: ['unavailable'],
      handle: async ({ deps }) => {
        const pending = await pendingMigrations(deps.db);
        if (pending === null || pending.length)
          throw problem('unavailable', 'The database is reachable, but its schema is not up to date yet.');
        return { status: 200, body: { status: 'ok' } };
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/health/live',
      policy: 'anyone',
      tag,
      summary: 'Whether the process answers at all',
      answers: { 200: { description: 'It does', schema: Health } },
      handle: async () => ({ status: 200, body: { status: 'ok' } }),
    }),
    defineRoute({
      method: 'get',
      path: '/api/openapi.json',
      policy: 'anyone',
      tag,
      summary: 'This API as OpenAPI 3.1',
      answers: { 200: { description: 'The document', schema: z.record(z.string(), z.unknown()) } },
      handle: async ({ deps }) => ({ status: 200, body: openApiOf(all, deps.config.baseUrl) }),
    }),
    defineRoute({
      method: 'get',
      path: '/api/docs',
      policy: 'anyone',
      tag,
      summary: 'This API as a page to read',
      answers: { 200: { description: 'The page', contentType: 'text/html' } },
      handle: async ({ deps, req, res }) => {
        const address = deps.config.baseUrl ?? `${req.protocol}://${req.host}`;
        res.type('html').send(docsPage(openApiOf(all, deps.config.baseUrl), address));
        return STREAMED;
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/docs/style.css',
      policy: 'anyone',
      tag,
      summary: 'The style of that page',
      answers: { 200: { description: 'The style sheet', contentType: 'text/css' } },
      handle: async ({ res }) => {
        res.type('css').send(DOCS_STYLE);
        return STREAMED;
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/docs/fonts/:name',
      policy: 'anyone',
      tag,
      summary: 'The type of that page',
      answers: { 200: { description: 'The font', contentType: 'font/woff2' } },
      problems: ['not-found'],
      handle: async ({ res, params }) => {
        const file = Object.hasOwn(FONTS, params.name) ? FONTS[params.name] : undefined;
        if (!file) throw problem('not-found');
        res.set('Cache-Control', 'public, max-age=86400');
        await new Promise<void>((done, fail) =>
          res.sendFile(createRequire(import.meta.url).resolve(file), { cacheControl: false }, (error) =>
            error ? fail(error) : done(),
          ),
        );
        return STREAMED;
      },
    }),
  ];
  const all = [...others, ...routes];
  return routes;
}
