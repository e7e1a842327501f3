import fs from 'node:fs';
import { createRequire } from 'node:module';
import path from 'node:path';
import { expect, test as base, type Page } from '@playwright/test';

const require = createRequire(import.meta.url);
const AXE = fs.readFileSync(require.resolve('axe-core/axe.min.js'), 'utf8');
const ROOT = path.resolve(import.meta.dirname, '../../..');

export const PASSWORD = process.env.E2E_PASSWORD ?? '';
export const URL_OF = process.env.E2E_URL ?? '';
export type Person = 'occupier' | 'installer' | 'landlord' | 'administrator';

/** A sample log by its name. */
export const sample = (name: string): string => path.join(ROOT, 'samples', name);

/**
 * Every test watches its pages: no request may go to another host, no script may fail, and the browser may refuse
 * nothing by the content security policy.
 */
export const test = base.extend<{ watched: string[] }>({
  watched: [
    async ({ context, baseURL }, use) => {
      if (!baseURL || !PASSWORD) throw new Error('E2E_URL and E2E_PASSWORD say which product is tested.');
      const own = new URL(baseURL).host;
      const amiss: string[] = [];
      context.on('request', (request) => {
        const url = new URL(request.url());
        if (url.protocol.startsWith('http') && url.host !== own) amiss.push(`asked a foreign host: ${request.url()}`);
      });
      context.on('weberror', (error) => amiss.push(`a script failed: ${error.error().message}`));
      context.on('console', (message) => {
        if (/content security policy/i.test(message.text())) amiss.push(message.text());
      });
      await use(amiss);
      expect(amiss).toEqual([]);
    },
    { auto: true },
  ],
});
export { expect };

/** Signs in as the page does it. */
export async function signIn(page: Page, person: Person = 'occupier'): Promise<void> {
  await page.goto('/sign-in');
  await page.getByLabel('E-mail address').fill(`${person}@example.test`);
  await page.getByLabel('Password', { exact: true }).fill(PASSWORD);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page).not.toHaveURL(/sign-in/);
}

/** Gives the page's context a session without turning to a page. */
export async function session(page: Page, person: Person = 'occupier'): Promise<void> {
  const answer = await page.request.post('/api/session', {
    data: { email: `${person}@example.test`, password: PASSWORD },
    headers: { Origin: new URL(URL_OF).origin },
  });
  expect(answer.status()).toBe(200);
}

const headers = () => ({ Origin: new URL(URL_OF).origin });
let made = 0;

/** A property of the test's own. @returns its id */
export async function newProperty(page: Page, more: Record<string, unknown> = {}): Promise<string> {
  made += 1;
  const answer = await page.request.post('/api/properties', {
    headers: headers(),
    data: {
      name: `Invented house ${Date.now().toString(36)}-${made}`,
      timeZone: 'Europe/London',
      country: 'GB',
      system: { cylinder: { volumeLitres: 210 }, boiler: { fuel: 'gas' } },
      ...more,
    },
  });
  expect(answer.status(), await answer.text()).toBe(201);
  return ((await answer.json()) as { id: string }).id;
}

/** Sends a sample to a property and waits until it is kept. @returns the log's id */
export async function keptLog(page: Page, property: string, name: string): Promise<string> {
  const sent = await page.request.post(`/api/properties/${property}/logs`, {
    headers: headers(),
    multipart: { file: { name, mimeType: 'text/csv', buffer: fs.readFileSync(sample(name)) } },
  });
  expect(sent.status(), await sent.text()).toBe(202);
  const { log } = (await sent.json()) as { log: { id: string } };
  let status = '';
  for (let turn = 0; turn < 20 && (status === '' || status === 'waiting' || status === 'reading'); turn += 1)
    status = ((await (await page.request.get(`/api/logs/${log.id}?wait=5`)).json()) as { log: { status: string } }).log
      .status;
  expect(status).toBe('kept');
  return log.id;
}

/** Drops files on the page, as a hand does. */
export async function drop(page: Page, files: { name: string; content: Buffer | string }[]): Promise<void> {
  const data = await page.evaluateHandle(
    (list) => {
      const transfer = new DataTransfer();
      for (const { name, bytes } of list)
        transfer.items.add(new File([new Uint8Array(bytes)], name, { type: 'text/csv' }));
      return transfer;
    },
    files.map(({ name, content }) => ({ name, bytes: [...Buffer.from(content)] })),
  );
  await page.dispatchEvent('main', 'dragenter', { dataTransfer: data });
  await page.dispatchEvent('main', 'drop', { dataTransfer: data });
}

/** axe finds nothing: WCAG 2.2 A and AA, and its best practices. Evaluated, since the CSP lets no script be injected. */
export async function axeFindsNothing(page: Page): Promise<void> {
  await page.evaluate(AXE);
  const found = await page.evaluate(async () => {
    const axe = (
      window as unknown as { axe: { run: (root: Document, options: object) => Promise<{ violations: Violation[] }> } }
    ).axe;
    interface Violation {
      id: string;
      nodes: { html: string; failureSummary?: string }[];
    }
    const { violations } = await axe.run(document, {
      runOnly: ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'],
    });
    return violations.map(({ id, nodes }) => `${id}: ${nodes[0].html} ${nodes[0].failureSummary ?? ''}`);
  });
  expect(found, page.url()).toEqual([]);
}

/** Nothing is wider than the screen. */
export async function noSideways(page: Page): Promise<void> {
  const over = await page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth);
  expect(over, `${page.url()} scrolls sideways`).toBeLessThanOrEqual(0);
}

/** Waits until the page has its heading and nothing is being fetched. */
export async function settled(page: Page): Promise<void> {
  await expect(page.locator('main h1')).toBeVisible();
  await page.waitForFunction(() => document.fonts.status === 'loaded');
  await expect(page.getByText(/^(Fetching|Reading) .* …$/)).toHaveCount(0);
}
