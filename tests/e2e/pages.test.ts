import { axeFindsNothing, expect, keptLog, newProperty, noSideways, session, settled, test } from './support/test.ts';

/** Every page of a property with data, and the pages beside it: the address under /properties/:id, or from the root. */
const PAGES = [
  '',
  '/days',
  '/days/2025-05-06',
  '/months',
  '/year',
  '/logs',
  '/record',
  '/record?part=tariffs',
  '/record?part=place',
  '/record?part=assumed',
  '/sharing',
];
const BESIDE = ['/properties', '/properties/new', '/account', '/no-such-page'];

for (const colorScheme of ['light', 'dark'] as const)
  test.describe(`on ${colorScheme} paper`, () => {
    test.use({ colorScheme });

    // The narrowest screen and a laptop's; what fits 320 px and reflows by the same rules is looked at once more at 360.
    for (const width of colorScheme === 'light' ? [320, 1280] : [360, 1280])
      test(`axe finds nothing and nothing scrolls sideways on any page at ${width} px`, async ({ page }) => {
        test.setTimeout(180_000);
        await session(page);
        const id = await newProperty(page, {
          tariff: { currency: 'GBP', fuelPerKwh: 0.062, importPerKwh: 0.245, exportPerKwh: 0.15 },
        });
        const log = await keptLog(page, id, 'wide-minutes.csv');
        await page.setViewportSize({ width, height: 800 });
        for (const path of [
          ...PAGES.map((one) => `/properties/${id}${one}`),
          `/properties/${id}/logs/${log}`,
          ...BESIDE,
        ]) {
          await page.goto(path);
          await settled(page);
          await axeFindsNothing(page);
          await noSideways(page);
          await expect(page).toHaveTitle(/Coppernoon/);
        }
        await page.goto(`/properties/${id}/logs/${log}`);
        await page.getByRole('button', { name: 'Correct it and read again' }).click();
        await axeFindsNothing(page);
        await noSideways(page);
      });

    test('axe finds nothing on the pages of a property without logs, and on the sign-in', async ({ page }) => {
      await session(page);
      const id = await newProperty(page);
      for (const path of ['', '/days', '/months', '/year', '/logs']) {
        await page.goto(`/properties/${id}${path}`);
        await settled(page);
        await axeFindsNothing(page);
      }
      await page.context().clearCookies();
      await page.goto('/sign-in');
      await settled(page);
      await axeFindsNothing(page);
    });
  });
