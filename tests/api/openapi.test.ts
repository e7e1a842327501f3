import { describe, expect, it } from 'vitest';
import { useApp } from '../support/app.ts';

const t = useApp();

interface Operation {
  operationId: string;
  summary: string;
  'x-policy': unknown;
  security: unknown[];
  requestBody?: { content: Record<string, { schema: object }> };
  responses: Record<string, { description: string }>;
}

const load = async () => {
  const { body } = await t.nobody().get('/api/openapi.json').expect(200);
  return body as {
    openapi: string;
    paths: Record<string, Record<string, Operation>>;
    components: { schemas: Record<string, Record<string, unknown>> };
  };
};

describe('GET /api/openapi.json', () => {
  it('when it is read, then every route of the contract for people and properties is in it', async () => {
    const { openapi, paths } = await load();
    expect(openapi).toBe('3.1.0');
    const routes = Object.entries(paths).flatMap(([path, methods]) =>
      Object.keys(methods).map((method) => `${method.toUpperCase()} ${path}`),
    );
    expect(routes).toEqual(
      expect.arrayContaining([
        'GET /api/health',
        'POST /api/session',
        'GET /api/session',
        'DELETE /api/session',
        'POST /api/tokens',
        'DELETE /api/tokens/{id}',
        'GET /api/properties',
        'POST /api/properties',
        'GET /api/properties/{id}',
        'PUT /api/properties/{id}/system',
        'PUT /api/properties/{id}/tariffs',
        'GET /api/openapi.json',
      ]),
    );
  });

  it('when it is read, then every reference leads somewhere and every operation is named once', async () => {
    const document = await load();
    const text = JSON.stringify(document);
    const references = [...text.matchAll(/"\$ref":"([^"]+)"/g)].map(([, reference]) => reference ?? '');
    expect(references.length).toBeGreaterThan(20);
    for (const reference of references) {
      const name = /^#\/components\/schemas\/(\w+)$/.exec(reference)?.[1];
      expect(document.components.schemas).toHaveProperty(name ?? reference);
    }
    expect(text).not.toContain('$defs');
    const operations = Object.values(document.paths).flatMap((methods) => Object.values(methods));
    const ids = operations.map((operation) => operation.operationId);
    expect(new Set(ids).size).toBe(ids.length);
    for (const operation of operations) {
      expect(operation.summary).not.toBe('');
      expect(operation['x-policy']).toBeDefined();
    }
  });

  it('when a route needs a session, then it says so and names its problems; a public one does not', async () => {
    const { paths } = await load();
    const put = paths['/api/properties/{id}/system']?.['put'];
    expect(put?.security).toEqual([{ session: [] }, { token: [] }]);
    expect(Object.keys(put?.responses ?? {})).toEqual(['200', '400', '401', '403', '404', '413', '415', '422']);
    expect(put?.requestBody?.content['application/json']?.schema).toEqual({ $ref: '#/components/schemas/DatedSystem' });
    expect(paths['/api/health']?.['get']?.security).toEqual([]);
  });

  it('when a shape is described, then its limits are those that are checked', async () => {
    const { components } = await load();
    expect(components.schemas['SignIn']).toEqual({
      type: 'object',
      properties: { email: { type: 'string', maxLength: 320 }, password: { type: 'string', maxLength: 1024 } },
      required: ['email', 'password'],
      additionalProperties: false,
    });
    const system = components.schemas['DatedSystem'] as { properties: { cylinder: { properties: object } } };
    expect(system.properties.cylinder.properties).toMatchObject({ volumeLitres: { minimum: 20, maximum: 2000 } });
  });
});

describe('GET /api/docs', () => {
  it('when it is read, then it has every route, field and problem, and no script', async () => {
    const { paths } = await load();
    const { text, headers, status } = await t.nobody().get('/api/docs');
    expect(status).toBe(200);
    expect(headers['content-type']).toMatch(/^text\/html/);
    for (const [path, methods] of Object.entries(paths))
      for (const [method, operation] of Object.entries(methods)) {
        expect(text).toContain(`<h3>${method.toUpperCase()} ${path}</h3>`);
        expect(text).toContain(`id="${operation.operationId}"`);
      }
    expect(text).toContain('cylinder.volumeLitres');
    expect(text).toContain('id="problem-no-consent"');
    expect(text).toContain(`-H &#39;Authorization: Bearer &lt;token&gt;&#39;`);
    expect(text).not.toMatch(/<script|<style| style=| on\w+=/);
    const ids = [...text.matchAll(/ id="([^"]+)"/g)].map(([, id]) => id);
    expect(new Set(ids).size).toBe(ids.length);
    for (const [, target] of text.matchAll(/href="#([^"]+)"/g)) expect(ids).toContain(target);
  });

  it('when its style and type are loaded, then they come from here', async () => {
    const { text } = await t
      .nobody()
      .get('/api/docs/style.css')
      .expect(200)
      .expect('Content-Type', /^text\/css/);
    const fonts = [...text.matchAll(/url\('(fonts\/[^']+)'\)/g)].map(([, path]) => path);
    expect(fonts).toHaveLength(3);
    for (const font of fonts)
      await t.nobody().get(`/api/docs/${font}`).expect(200).expect('Content-Type', 'font/woff2');
    await t.nobody().get('/api/docs/fonts/..%2f..%2fpackage.json').expect(404);
    expect(text).not.toMatch(/https?:/);
  });
});
