import fs from 'node:fs';
import type { Page } from '@playwright/test';
import { axeFindsNothing, drop, expect, keptLog, newProperty, sample, session, settled, test } from './support/test.ts';

const bytes = (name: string): Buffer => fs.readFileSync(sample(name));

test.beforeEach(async ({ page }) => session(page));

test('when several files are dropped then each has its own row and its own end', async ({ page }) => {
  const id = await newProperty(page);
  await page.goto(`/properties/${id}/logs`);
  await settled(page);
  await drop(page, [
    { name: 'long-form.csv', content: bytes('long-form.csv') },
    { name: 'grid-twelve-hours.csv', content: bytes('grid-twelve-hours.csv') },
    { name: 'letter.csv', content: 'Dear neighbour,\nthis is a letter and no log.\n' },
  ]);
  const row = (name: string) => page.getByRole('listitem').filter({ hasText: name });
  await expect(row('long-form.csv')).toContainText('Kept', { timeout: 40_000 });
  await expect(row('grid-twelve-hours.csv')).toContainText('1 question to answer');
  await expect(row('letter.csv')).toContainText(/Not sent|Not taken/);
  await axeFindsNothing(page);

  // Another page and back, and a fresh start of the tab: the server's truth is shown.
  await page.getByRole('link', { name: 'System record', exact: true }).first().click();
  await page.reload();
  await page.goto(`/properties/${id}/logs`);
  await expect(row('long-form.csv')).toContainText('Kept');
  await expect(row('grid-twelve-hours.csv')).toContainText('To be answered');

  // The same file again changes nothing, and says so.
  await drop(page, [{ name: 'long-form.csv', content: bytes('long-form.csv') }]);
  await expect(page.getByText('The same file was there already')).toBeVisible({ timeout: 20_000 });
});

test('when a log asks then an answer and “Keep” make it count', async ({ page }) => {
  const id = await newProperty(page);
  await page.goto(`/properties/${id}/logs`);
  await settled(page);
  await drop(page, [{ name: 'grid-twelve-hours.csv', content: bytes('grid-twelve-hours.csv') }]);
  await page.getByRole('link', { name: 'Answer' }).click({ timeout: 40_000 });

  await expect(page.getByRole('heading', { name: 'One question' })).toBeVisible();
  await page.getByRole('button', { name: 'Keep' }).click();
  const summary = page.getByRole('group', { name: 'One thing to mend' });
  await expect(summary).toBeFocused();
  await axeFindsNothing(page);

  await page.getByRole('radio', { name: /Europe\/London/ }).check();
  await page.getByRole('button', { name: 'Keep' }).click();
  await expect(page.getByRole('status').filter({ hasText: 'Kept' })).toBeVisible({ timeout: 40_000 });
  await expect(page.getByRole('heading', { name: 'Receipt' })).toBeVisible();
  const answer = await page.request.get(`/api/properties/${id}/days?from=2025-07-01&to=2025-07-31`);
  const { totals } = (await answer.json()) as { totals: { importKwh: number | null } };
  expect(totals.importKwh).toBeGreaterThan(0);
});

test('when a kept log is corrected then it is looked at again, read again and told', async ({ page }) => {
  const id = await newProperty(page);
  const log = await keptLog(page, id, 'long-form.csv');
  const before = await totals(page, id);
  await page.goto(`/properties/${id}/logs/${log}`);
  await page.getByRole('button', { name: 'Correct it and read again' }).click();
  const column = page.getByRole('listitem').filter({ hasText: 'export power' });
  await column.getByText('Sign, stamp, factor').click();
  const looked = page.waitForResponse((answer) => answer.url().endsWith('/logs/inspect') && answer.ok());
  await column.getByLabel('Multiply by').fill('0,5');
  await column.getByLabel('Multiply by').press('Tab');
  await looked;
  await page.getByRole('button', { name: 'Keep and read again' }).click();
  await expect(page.getByText('times 0.5')).toBeVisible({ timeout: 40_000 });
  await expect(page.getByRole('status').filter({ hasText: 'Kept' })).toBeVisible({ timeout: 40_000 });
  await expect.poll(async () => (await totals(page, id)) / before).toBeCloseTo(0.5, 4);
});

test('when a part of the plan cannot be then it is told beside the field and in the summary', async ({ page }) => {
  const id = await newProperty(page);
  const log = await keptLog(page, id, 'long-form.csv');
  await page.goto(`/properties/${id}/logs/${log}`);
  await page.getByRole('button', { name: 'Correct it and read again' }).click();
  await page.getByLabel('Its zone').fill('Middle Earth');
  await page.getByRole('button', { name: 'Keep and read again' }).click();
  await expect(page.getByRole('group', { name: /to mend/ })).toBeFocused();
  await expect(page.getByLabel('Its zone')).toHaveAttribute('aria-invalid', 'true');
  await expect(page.getByLabel('Its zone')).toHaveValue('Middle Earth');
  await axeFindsNothing(page);
});

test('when a log is withdrawn then its figures go, and the same file brings them back', async ({ page }) => {
  const id = await newProperty(page);
  const log = await keptLog(page, id, 'long-form.csv');
  const before = await totals(page, id);
  await page.goto(`/properties/${id}/logs/${log}`);
  await page.getByRole('button', { name: 'Withdraw this log' }).click();
  await expect(page.getByText('All figures become as if it had never come')).toBeVisible();
  await axeFindsNothing(page);
  await page.getByRole('button', { name: 'Withdraw it' }).click();
  await expect(page.getByText('Withdrawn: no figure uses it.')).toBeVisible({ timeout: 20_000 });
  expect(await totals(page, id)).toBeNull();

  await page.getByRole('link', { name: 'All logs' }).click();
  await drop(page, [{ name: 'long-form.csv', content: bytes('long-form.csv') }]);
  await expect(
    page.getByRole('region', { name: 'All logs' }).getByRole('listitem').filter({ hasText: 'long-form.csv' }),
  ).toContainText('Kept', { timeout: 40_000 });
  await expect.poll(async () => totals(page, id)).toBe(before);
});

test('when the server cannot list the logs then the page says so and tries again', async ({ page }) => {
  const id = await newProperty(page);
  let down = true;
  await page.route(`**/api/properties/${id}/logs`, (route) =>
    down
      ? route.fulfill({
          status: 503,
          contentType: 'application/problem+json',
          body: JSON.stringify({
            type: 'about:blank',
            title: 'Not available just now',
            status: 503,
            detail: 'Try again in a moment.',
          }),
        })
      : route.continue(),
  );
  await page.goto(`/properties/${id}/logs`);
  await expect(page.getByRole('heading', { name: 'Not available just now' })).toBeVisible();
  await axeFindsNothing(page);
  down = false;
  await page.getByRole('button', { name: 'Try again' }).click();
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('No logs yet');
});

async function totals(page: Page, id: string): Promise<number> {
  const answer = await page.request.get(`/api/properties/${id}/days?from=2025-08-01&to=2025-08-31`);
  return ((await answer.json()) as { totals: { exportKwh: number } }).totals.exportKwh;
}
