import { expect, test } from '@playwright/test';
import { ask, enter } from './people';

interface Region {
  readonly centre: readonly [number, number];
}

const square = ([lon, lat]: readonly [number, number], half: number): number[][] => [
  [lon - half, lat - half],
  [lon + half, lat - half],
  [lon + half, lat + half],
  [lon - half, lat + half],
  [lon - half, lat - half],
];

test('an outage area is made of feeders by keyboard, and says what it overlaps', async ({
  browser,
}) => {
  const page = await enter(browser, ({ role }) => role === 'dispatcher', {}, '/board');
  await page.getByRole('application', { name: /Map of/ }).waitFor();
  await page.keyboard.press('z');
  await page.keyboard.press('f');
  const form = page.getByRole('region', { name: 'Outage area' });
  const find = form.getByLabel('Find a feeder');
  const boxes = form.getByRole('checkbox');
  await expect(boxes.nth(5)).toBeVisible();
  const first = (await form.locator('.feeders li').first().innerText()).split('\n')[0] ?? '';
  await find.fill(first);
  await find.press('Enter');
  await expect(form.getByLabel('Name')).toHaveValue(first);
  await find.fill('');
  await boxes.nth(1).press('Space');
  await expect(form.getByText(/^2 feeders, [\d,]+ addresses$/)).toBeVisible();
  await form.getByLabel('Power went').fill('5 h ago');
  await expect(form.getByText(/open calls? lies? inside/i)).toBeVisible();

  await form.getByLabel('Name').fill('Two of them');
  await form.getByRole('button', { name: 'Save area' }).click();
  await expect(page.getByText(/Two of them is saved/)).toBeVisible();
  await expect(form).toBeHidden();

  // Once more over the same ground: now another area is there, and it comes first by its times.
  await page.keyboard.press('z');
  await page.keyboard.press('f');
  await find.fill(first);
  await find.press('Enter');
  await form.getByLabel('Power went').fill('4 h ago');
  await expect(form.getByText('Other areas cover part of it')).toBeVisible();
  await expect(form.getByRole('listitem').filter({ hasText: 'Two of them' }).last()).toContainText(
    /follows? Two of them/,
  );
  await page.keyboard.press('Escape');
});

test('outage areas come from a file, and a bad file says why not', async ({ browser }) => {
  const page = await enter(browser, ({ role }) => role === 'dispatcher', {}, '/board');
  await page.getByRole('application', { name: /Map of/ }).waitFor();
  const { centre } = await ask<Region>(page, 'GET', '/api/region');
  await page.keyboard.press('z');
  await page.keyboard.press('i');
  const panel = page.getByRole('region', { name: 'Outage areas from a file' });
  const file = panel.getByLabel(/GeoJSON of up to/);
  await file.setInputFiles({
    name: 'broken.geojson',
    mimeType: 'application/json',
    buffer: Buffer.from('{"type": "FeatureColl'),
  });
  await expect(panel.getByRole('alert').first()).toContainText('This is no JSON');

  const feature = (name: string, half: number, properties: object, hole?: number) => ({
    type: 'Feature',
    properties: { name, ...properties },
    geometry: {
      type: 'Polygon',
      coordinates: [square(centre, half), ...(hole ? [square(centre, hole)] : [])],
    },
  });
  await file.setInputFiles({
    name: 'areas.geojson',
    mimeType: 'application/geo+json',
    buffer: Buffer.from(
      JSON.stringify({
        type: 'FeatureCollection',
        features: [
          feature(
            'Ring of the file',
            0.03,
            { outAt: new Date(Date.now() - 7.2e6).toISOString() },
            0.01,
          ),
          feature('Without a time', 0.02, {}),
        ],
      }),
    ),
  });
  await expect(panel.getByText('areas.geojson: 2 areas')).toBeVisible();
  await panel.getByRole('button', { name: 'Save 2 areas' }).click();
  await expect(panel.getByText(/When did the power go/)).toBeVisible();
  await panel.getByRole('textbox', { name: 'Power went' }).fill('3 h ago');
  await panel.getByRole('button', { name: 'Save 2 areas' }).click();
  await expect(page.getByText(/2 areas are saved/)).toBeVisible();
  await page.getByRole('button', { name: 'Lists', exact: true }).click();
  const lists = page.getByRole('region', { name: 'Areas and pockets' });
  await expect(lists.getByRole('button', { name: 'Show Ring of the file' })).toBeVisible();
  await expect(lists.getByRole('button', { name: 'Show Without a time' })).toBeVisible();
});
