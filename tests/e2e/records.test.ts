import { axeFindsNothing, expect, newProperty, session, settled, signIn, test } from './support/test.ts';

test.beforeEach(async ({ page }) => session(page));

test('when the system record is filled in as people write then it is kept as meant', async ({ page }) => {
  const id = await newProperty(page);
  await page.goto(`/properties/${id}/record`);
  await settled(page);
  await page.getByLabel('Declared loss').fill('1,8 kWh');
  await page.getByRole('button', { name: 'Add a heater' }).click();
  await page.getByLabel('Heater rating').fill('2,8');
  await page.getByRole('button', { name: 'Add panels' }).click();
  await page.getByLabel('Panel power').fill('4.2 kWp');
  await page.getByLabel('They face').fill('south-west');
  await expect(page.getByText('read as 225° from north')).toBeVisible();
  await page.getByLabel('Efficiency').fill('82 %');
  await page.getByRole('button', { name: 'Add a backup time' }).click();
  await page.getByLabel('From', { exact: true }).fill('5.30 pm');
  await page.getByLabel('To', { exact: true }).fill('1900');
  await page.getByRole('button', { name: 'Save the system record' }).click();
  await expect(page.getByText('The system record is saved.')).toBeVisible();
  const { system } = (await (await page.request.get(`/api/properties/${id}`)).json()) as { system: object };
  expect(system).toMatchObject({
    cylinder: { volumeLitres: 210, declaredLossKwhPerDay: 1.8 },
    heaters: [{ ratedKw: 2.8, position: 'lower', viaDiverter: true }],
    panels: [{ kwp: 4.2, azimuthDegrees: 225 }],
    boiler: { fuel: 'gas', efficiency: 0.82 },
    relay: { windows: [{ start: '17:30', end: '19:00' }] },
  });
});

test('when fields are wrong then what was typed stays and the summary takes the focus', async ({ page }) => {
  const id = await newProperty(page);
  await page.goto(`/properties/${id}/record`);
  await page.getByLabel('Cylinder volume').fill('huge');
  await page.getByLabel('Calorific value').fill('900');
  await page.getByRole('button', { name: 'Save the system record' }).click();
  await expect(page.getByRole('group', { name: '2 things to mend' })).toBeFocused();
  await expect(page.getByLabel('Cylinder volume')).toHaveValue('huge');
  await axeFindsNothing(page);
  await page.getByRole('link', { name: 'Calorific value' }).click();
  await expect(page.getByLabel('Calorific value')).toBeFocused();
});

test('when a tariff is given then each price holds from its day', async ({ page }) => {
  const id = await newProperty(page);
  await page.goto(`/properties/${id}/record?part=tariffs`);
  await expect(page.getByLabel('Currency')).toHaveValue('GBP');
  await page.getByLabel('Fuel price').fill('6.2p');
  await page.getByLabel('Import price', { exact: true }).fill('0,245');
  await page.getByLabel('Export price', { exact: true }).fill('15p');
  await expect(page.getByText('read as 0.062 GBP per kWh')).toBeVisible();
  await page.getByRole('button', { name: 'Add a window' }).click();
  await page.getByLabel('From', { exact: true }).fill('11.30pm');
  await page.getByLabel('To', { exact: true }).fill('5:30');
  await page.getByLabel('Import price in it').fill('9p');
  await page.getByRole('button', { name: 'Save the tariff' }).click();
  await expect(page.getByText('The tariff is saved.')).toBeVisible();

  await page.getByRole('button', { name: 'Begin a new one from today' }).click();
  await page.getByLabel('Import price', { exact: true }).fill('0.30');
  await page.getByRole('button', { name: 'Save the tariff' }).click();
  await expect
    .poll(async () => {
      const answer = (await (await page.request.get(`/api/properties/${id}`)).json()) as {
        tariffs: { importPerKwh: number }[];
      };
      return answer.tariffs.map((tariff) => tariff.importPerKwh);
    })
    .toEqual([0.245, 0.3]);
  await expect(page.getByText('holds now')).toHaveCount(1);
});

test('when a token is made then it is shown once and works until it is revoked', async ({
  page,
  playwright,
  baseURL,
}) => {
  await page.goto('/account');
  const name = `Script ${Date.now()}`;
  await page.getByLabel('Name of a new token').fill(name);
  await page.getByRole('button', { name: 'Make a token' }).click();
  const box = page.getByRole('group', { name: 'The new token, shown this once' });
  await expect(box).toBeFocused();
  const token = (await box.locator('.figure').innerText()).trim();
  await axeFindsNothing(page);
  const script = await playwright.request.newContext({
    baseURL,
    extraHTTPHeaders: { Authorization: `Bearer ${token}` },
  });
  expect((await script.get('/api/properties')).status()).toBe(200);
  await page.getByRole('button', { name: `Revoke ${name}` }).click();
  await page
    .getByRole('group', { name: `Revoke ${name}` })
    .getByRole('button', { name: 'Revoke it' })
    .click();
  await expect(page.getByText('The token is revoked.')).toBeAttached();
  expect((await script.get('/api/properties')).status()).toBe(401);
  await script.dispose();
});

test('when a role is given and accepted then the other person sees the property until it is withdrawn', async ({
  page,
  browser,
}) => {
  const name = `Shared house ${Date.now()}`;
  const id = await newProperty(page, { name });
  await page.goto(`/properties/${id}/sharing`);
  await settled(page);
  await page.getByLabel('E-mail address').fill('installer@example.test');
  await page.getByRole('radio', { name: 'Installer' }).check();
  await page.getByRole('button', { name: 'Give the role' }).click();
  await expect(page.getByText('not yet accepted')).toBeVisible();
  await axeFindsNothing(page);

  const other = await (await browser.newContext({ baseURL: new URL(page.url()).origin })).newPage();
  await signIn(other, 'installer');
  await other.goto('/account');
  await other.getByRole('button', { name: `Accept ${name}` }).click();
  await expect(other.getByText('Accepted: the property is in your list.')).toBeAttached();
  await other.goto(`/properties/${id}/record`);
  await expect(other.getByRole('heading', { level: 1 })).toHaveText('What is fitted');

  await page.reload();
  await page.getByRole('button', { name: /^Withdraw from/ }).click();
  await page.getByRole('button', { name: 'Withdraw it' }).click();
  await expect(page.getByText('Withdrawn.', { exact: true }).first()).toBeAttached();
  await other.reload();
  await expect(other.getByRole('heading', { level: 1 })).toContainText('There is no such page here');
  await other.context().close();
});
