import fs from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { useApp } from '../support/app.ts';

const folder = fs.mkdtempSync(path.join(os.tmpdir(), 'client-'));
fs.mkdirSync(path.join(folder, 'assets'));
fs.writeFileSync(path.join(folder, 'index.html'), '<!doctype html><title>Invented page</title>');
fs.writeFileSync(path.join(folder, 'assets/main-abc123.js'), 'export {};');
fs.writeFileSync(path.join(folder, 'icon.svg'), '<svg xmlns="http://www.w3.org/2000/svg"/>');
afterAll(() => fs.rmSync(folder, { recursive: true }));

const t = useApp({ clientFolder: folder });

describe('the built client', () => {
  it('when a hashed asset is asked for, then it may be kept for a year', async () => {
    const answer = await t.nobody().get('/assets/main-abc123.js').expect(200);
    expect(answer.headers['cache-control']).toBe('public, max-age=31536000, immutable');
    expect(answer.headers['content-type']).toMatch(/javascript/);
  });

  it('when any address of a page is opened, then it is the page, never from a cache, with the strict policy', async () => {
    for (const address of ['/', '/properties/abc/days', '/sign-in?next=%2F']) {
      const answer = await t.nobody().get(address).set('Accept', 'text/html').expect(200);
      expect(answer.text).toContain('Invented page');
      expect(answer.headers['cache-control']).toBe('no-cache');
      expect(answer.headers['content-security-policy']).toContain(`script-src 'self'`);
    }
    const icon = await t.nobody().get('/icon.svg').expect(200);
    expect(icon.headers['cache-control']).toBe('no-cache');
  });

  it('when a file is not there, or the address leads out of the folder, then 404 as problem details', async () => {
    for (const address of [
      '/assets/gone.js',
      '/..%2f..%2fetc%2fpasswd',
      '/%2e%2e/package.json',
      '/assets/..%2f..%2fx.js',
    ]) {
      const answer = await t.nobody().get(address).set('Accept', 'text/html');
      expect([400, 403, 404]).toContain(answer.status);
      expect(answer.headers['content-type']).toMatch(/^application\/problem\+json/);
    }
    await t.nobody().get('/page').set('Accept', 'application/json').expect(404);
    await t.nobody().post('/page').expect(404);
  });
});
