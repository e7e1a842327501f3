import type { Page } from '@playwright/test';
import { expect, PASSWORD, sample, test } from './support/test.ts';

/** Goes on by Tab until the element that has the focus is the one; within reason, or there is no way to it by keyboard. */
async function tabTo(page: Page, role: string, name: RegExp | string): Promise<void> {
  const target = page.getByRole(role as 'button', { name, exact: typeof name === 'string' });
  await expect(target.first()).toBeVisible();
  for (let step = 0; step < 120; step += 1) {
    if (await target.first().evaluate((element) => element === document.activeElement)) {
      const ring = await target.first().evaluate((element) => {
        const style = getComputedStyle(element);
        return style.outlineStyle !== 'none' && parseFloat(style.outlineWidth) >= 2;
      });
      expect(ring, `the focus on ${String(name)} can be seen`).toBe(true);
      return;
    }
    await page.keyboard.press('Tab');
  }
  throw new Error(`Tab never came to ${role} ${String(name)}`);
}

test('from the sign-in to a kept log and its day by keyboard alone', async ({ page }) => {
  await page.goto('/sign-in');
  await tabTo(page, 'textbox', 'E-mail address');
  await page.keyboard.type('occupier@example.test');
  await page.keyboard.press('Tab');
  await page.keyboard.type(PASSWORD);
  await page.keyboard.press('Enter');
  await expect(page).not.toHaveURL(/sign-in/);

  await page.goto('/properties/new');
  await tabTo(page, 'textbox', 'Name');
  await page.keyboard.type('Invented cottage, by keyboard');
  await tabTo(page, 'textbox', /^Cylinder volume/);
  await page.keyboard.type('150');
  await tabTo(page, 'combobox', /What the boiler burns/);
  await page.keyboard.press('o');
  await tabTo(page, 'button', 'Add the property');
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('No logs yet');

  await tabTo(page, 'button', 'Add logs');
  const chooser = page.waitForEvent('filechooser');
  await page.keyboard.press('Enter');
  await (await chooser).setFiles(sample('grid-twelve-hours.csv'));
  await expect(page.getByText('1 question to answer')).toBeVisible({ timeout: 40_000 });
  await tabTo(page, 'link', /^Answer/);
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { level: 1 })).toBeFocused();
  await tabTo(page, 'radio', /Europe\/London/);
  await page.keyboard.press('Space');
  await tabTo(page, 'button', 'Keep');
  await page.keyboard.press('Enter');
  await expect(page.getByRole('status').filter({ hasText: 'Kept' })).toBeVisible({ timeout: 40_000 });
  await tabTo(page, 'link', 'Open this day');
  await page.keyboard.press('Enter');
  await expect(page).toHaveURL(/\/days\/2025-07-/);
  await expect(page.getByRole('heading', { level: 1 })).toBeFocused();
});
