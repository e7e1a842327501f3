import { z } from 'zod';
import { Problem } from '../../shared/api/common.ts';
import { PROBLEMS } from './problems.ts';
import type { ProblemCode } from './problems.ts';
import { isRaw } from './route.ts';
import type { Route } from './route.ts';

type Json = Record<string, unknown>;

const ABOUT =
  'JSON in UTF-8, camelCase. Instants are RFC 3339 in UTC, civil dates YYYY-MM-DD in the property’s zone; a unit ' +
  'stands in a field’s name (Kwh, M3, C); shares are 0 to 1; a figure that is not known is null, never 0. Errors are ' +
  'problem details after RFC 9457. Fields that are not described are refused by name. People sign in and use a ' +
  'cookie; scripts send “Authorization: Bearer …” with a token. With a cookie, a call that changes something must ' +
  'come from the site’s own pages (Origin or Sec-Fetch-Site).';

/** The problems a route may answer with: those that policy, query and body imply, and its own. */
export function problemsOf(route: Route): ProblemCode[] {
  const list: ProblemCode[] = [];
  if (route.body) list.push('bad-request', 'too-large', 'wrong-content-type', 'bad-fields');
  if (route.body && !isRaw(route.body)) list.push('bad-json');
  if (route.query) list.push('bad-fields');
  if (route.policy !== 'anyone') list.push('no-session');
  if (route.method !== 'get') list.push('foreign-origin');
  if (typeof route.policy === 'object') {
    const action = Object.values(route.policy)[0];
    list.push('not-found');
    if (action === 'traces') list.push('no-consent');
    else if (action !== 'see' && action !== 'days') list.push('forbidden');
  }
  list.push(...(route.problems ?? []));
  return [...new Set(list)].sort((a, b) => PROBLEMS[a].status - PROBLEMS[b].status);
}

/** The OpenAPI 3.1 document of these routes, from the same schemas that check them. */
export function openApiOf(routes: readonly Route[], baseUrl: string | null): Json {
  const schemas = new Components();
  schemas.of(Problem, 'output');
  const paths: Record<string, Json> = {};
  for (const route of routes) {
    const path = route.path.replace(/:(\w+)/g, '{$1}');
    (paths[path] ??= {})[route.method] = operation(route, schemas);
  }
  return {
    openapi: '3.1.0',
    info: { title: 'Coppernoon', version: '1', description: ABOUT },
    ...(baseUrl && { servers: [{ url: baseUrl }] }),
    tags: [...new Set(routes.map((route) => route.tag))].map((name) => ({ name })),
    paths,
    components: {
      schemas: schemas.all,
      securitySchemes: {
        session: {
          type: 'apiKey',
          in: 'cookie',
          name: `${baseUrl?.startsWith('https') ? '__Host-' : ''}coppernoon-session`,
        },
        token: { type: 'http', scheme: 'bearer' },
      },
    },
  };
}

function operation(route: Route, schemas: Components): Json {
  const { method, path, policy, tag, summary, description, query, body, answers } = route;
  const byStatus = new Map<number, ProblemCode[]>();
  for (const code of problemsOf(route)) {
    const { status } = PROBLEMS[code];
    byStatus.set(status, [...(byStatus.get(status) ?? []), code]);
  }
  return {
    operationId: `${method}${path.replace(/^\/api/, '').replace(/[/:.-]+(\w)/g, (_, c: string) => c.toUpperCase())}`,
    tags: [tag],
    summary,
    ...(description && { description }),
    'x-policy': policy,
    security: policy === 'anyone' ? [] : [{ session: [] }, { token: [] }],
    parameters: [...pathParameters(path), ...(query ? queryParameters(schemas.of(query, 'input')) : [])],
    ...(body && {
      requestBody: isRaw(body)
        ? { required: true, content: { [body.contentType]: { schema: schemas.of(body.fields, 'input') } } }
        : { required: true, content: { 'application/json': { schema: schemas.of(body, 'input') } } },
    }),
    responses: {
      ...Object.fromEntries(
        Object.entries(answers).map(([status, answer]) => [
          status,
          {
            description: answer.description,
            ...(answer.schema
              ? { content: { 'application/json': { schema: schemas.of(answer.schema, 'output') } } }
              : answer.contentType && { content: { [answer.contentType]: {} } }),
          },
        ]),
      ),
      ...Object.fromEntries(
        [...byStatus].map(([status, codes]) => [
          status,
          {
            description: codes.map((code) => `${code}: ${PROBLEMS[code].why}`).join(' '),
            content: { 'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } } },
          },
        ]),
      ),
    },
  };
}

function pathParameters(path: string): Json[] {
  return [...path.matchAll(/:(\w+)/g)].map(([, name]) => ({
    name,
    in: 'path',
    required: true,
    schema: { type: 'string' },
  }));
}

function queryParameters(schema: Json): Json[] {
  const required = (schema['required'] ?? []) as string[];
  return Object.entries((schema['properties'] ?? {}) as Record<string, Json>).map(([name, field]) => ({
    name,
    in: 'query',
    required: required.includes(name),
    ...(typeof field['description'] === 'string' && { description: field['description'] }),
    schema: field,
  }));
}

/** Gathers the named schemas. One that reads differently as a body than as an answer gets a second name. */
class Components {
  readonly all: Record<string, Json> = {};

  of(schema: z.ZodType, io: 'input' | 'output'): Json {
    const {
      $schema: _,
      $defs = {},
      ...root
    } = z.toJSONSchema(schema, { io, unrepresentable: 'any' }) as Json & {
      $defs?: Record<string, Json>;
    };
    const names = new Map<string, string>();
    for (const [id, definition] of Object.entries($defs)) {
      const known = this.all[id];
      names.set(id, known === undefined || same(known, moved(definition, new Map())) ? id : `${id}Body`);
    }
    for (const [id, definition] of Object.entries($defs)) this.all[names.get(id) ?? id] = moved(definition, names);
    return moved(root, names);
  }
}

const same = (a: Json, b: Json) => JSON.stringify(a) === JSON.stringify(b);

function moved(schema: Json, names: ReadonlyMap<string, string>): Json {
  const text = JSON.stringify(schema).replace(
    /"#\/\$defs\/([^"]+)"/g,
    (_, id: string) => `"#/components/schemas/${names.get(id) ?? id}"`,
  );
  return JSON.parse(text) as Json;
}
