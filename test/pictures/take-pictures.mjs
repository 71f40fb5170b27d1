/**
 * Takes the pictures of the README from a running demo: `node test/pictures/take-pictures.mjs`.
 * It settles nothing and publishes one plan, so that the technician has a stop to show.
 */
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { chromium } from '@playwright/test';

const here = path.dirname(fileURLToPath(import.meta.url));
const root = path.resolve(here, '../..');
const address = process.env.THAWLINE_PUBLIC_URL ?? 'http://127.0.0.1:4310';
const people = JSON.parse(readFileSync(path.join(root, '.data/demo-sign-ins.json'), 'utf8'));

const browser = await chromium.launch({
  executablePath: process.env.THAWLINE_CHROMIUM ?? '/usr/bin/chromium',
  args: ['--no-sandbox', '--disable-gpu', '--disable-dev-shm-usage'],
});

async function enter(who, options = {}) {
  const person = people.find(({ email }) => email.startsWith(who));
  const context = await browser.newContext({
    baseURL: address,
    viewport: { width: 1440, height: 900 },
    ...options,
  });
  const page = await context.newPage();
  await page.goto('/sign-in');
  await page.getByLabel('E-mail address').fill(person.email);
  await page.getByLabel('Password', { exact: true }).fill(person.password);
  await page.keyboard.press('Enter');
  await page.getByText('Live', { exact: true }).first().waitFor();
  return page;
}
const take = (page, name) => page.screenshot({ path: path.join(here, `${name}.png`) });

const mara = await enter('mara', { viewport: { width: 1920, height: 1080 } });
await mara.locator('thaw-queue-row').nth(8).waitFor();
await mara.waitForTimeout(4000);
await take(mara, 'board');

await mara.setViewportSize({ width: 1440, height: 900 });
await mara.keyboard.press('j');
await mara.keyboard.press('j');
await mara.keyboard.press('Enter');
await mara.getByRole('heading', { name: /^Call \d+$/ }).waitFor();
await mara.keyboard.press('p');
await mara.getByRole('group', { name: 'Answers' }).waitFor();
await mara.getByRole('region', { name: 'Phone check' }).scrollIntoViewIfNeeded();
await mara.waitForTimeout(500);
await take(mara, 'phone-check');
await mara.keyboard.press('Escape');

await mara.goto('/routes');
await mara.getByRole('button', { name: /Propose routes/ }).click();
const publish = mara.getByRole('button', { name: /Publish/ });
await publish.waitFor({ timeout: 30_000 });
await mara.waitForTimeout(800);
await take(mara, 'routes');
await publish.click();
await publish.waitFor({ state: 'hidden', timeout: 30_000 });

const theo = await enter('theo', {
  viewport: { width: 390, height: 844 },
  hasTouch: true,
  isMobile: true,
});
await theo.waitForTimeout(2500);
await take(theo, 'day');

const ines = await enter('ines');
// The forecast is worked out beside the page; a busy machine takes its time.
await ines.waitForTimeout(3000);
await ines.locator('.forecast strong').first().waitFor({ timeout: 120_000 });
await ines.waitForTimeout(1000);
await take(ines, 'drain');
await browser.close();
