import fs from 'node:fs';
import { axeFindsNothing, drop, expect, sample, settled, signIn, test } from './support/test.ts';

/**
 * Energy of one column of wide-minutes.csv on one civil day, kWh: the plain sum of its one-minute powers, which for
 * minutes is the trapezoid's value but for the halves at the two ends. Naive on purpose, apart from the product's code.
 */
function naiveKwh(column: string, date: string): number {
  const [head, ...rows] = fs.readFileSync(sample('wide-minutes.csv'), 'utf8').trim().split(/\r?\n/);
  const at = head.split(',').indexOf(column);
  const watts = rows.filter((row) => row.startsWith(date)).map((row) => Number(row.split(',')[at]));
  return watts.reduce((sum, value) => sum + value, 0) / 60_000;
}

test('from the sign-in to the pictures of one’s own log, and back', async ({ page }) => {
  await signIn(page);

  await page.goto('/properties/new');
  await page.getByLabel('Name', { exact: true }).fill('Invented bungalow');
  await expect(page.getByLabel('Time zone')).toHaveValue('Europe/London');
  await page.getByLabel('Cylinder volume').fill('210 litres');
  await expect(page.getByLabel('Boiler kind')).toBeVisible();
  await page.getByRole('button', { name: 'Add the property' }).click();

  await expect(page.getByRole('heading', { level: 1 })).toHaveText('No logs yet');
  await expect(page.getByText('What to bring')).toBeVisible();
  await drop(page, [{ name: 'wide-minutes.csv', content: fs.readFileSync(sample('wide-minutes.csv')) }]);
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('1 log kept', { timeout: 40_000 });
  await expect(
    page.getByText(/7,200 rows of 7,200 taken, 5 May 2025 to 9 May 2025|7,20\d rows of 7,20\d taken/),
  ).toBeVisible();

  await page.getByRole('link', { name: 'wide-minutes.csv' }).click();
  await expect(page.getByRole('heading', { name: 'How it was understood' })).toBeVisible();
  await expect(page.getByRole('heading', { name: /Monday,? 5 May 2025, as read/ })).toBeVisible();
  await axeFindsNothing(page);

  await page.getByRole('link', { name: 'See the week' }).click();
  await settled(page);
  const url = new URL(page.url());
  const id = url.pathname.split('/')[2];
  const answer = await page.request.get(`/api/properties/${id}/days?from=2025-05-05&to=2025-05-09`);
  const { days } = (await answer.json()) as { days: { date: string; divertedKwh: number; exportKwh: number }[] };
  for (const day of days) {
    expect(day.divertedKwh / naiveKwh('diversion W', day.date), day.date).toBeCloseTo(1, 2);
    expect(day.exportKwh / naiveKwh('export W', day.date), day.date).toBeCloseTo(1, 2);
  }
  // The page shows the same figures as the API, in its table.
  const week = page.getByRole('table').filter({ hasText: 'Diverted' }).first();
  for (const day of days) await expect(week).toContainText(day.divertedKwh.toPrecision(3));
  await axeFindsNothing(page);

  await page.getByRole('link', { name: 'Days', exact: true }).click();
  await settled(page);
  await axeFindsNothing(page);

  await page.goto(`/properties/${id}/days/2025-05-06`);
  await settled(page);
  await expect(page.locator('canvas, svg').first()).toBeVisible();
  await expect(page.locator('main')).toContainText(days[1].divertedKwh.toPrecision(3));
  await axeFindsNothing(page);

  await page.getByRole('link', { name: 'Logs', exact: true }).click();
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('1 log kept');
});
