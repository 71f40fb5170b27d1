import { readFileSync } from 'node:fs';
import path from 'node:path';
import {
  expect,
  type Browser,
  type BrowserContext,
  type BrowserContextOptions,
  type Page,
} from '@playwright/test';

interface SignIn {
  readonly role: string;
  readonly name: string;
  readonly email: string;
  readonly password: string;
}

/** The demo's sign-ins, as the server wrote them for whoever owns its data folder. */
export function signIns(): readonly SignIn[] {
  const folder = process.env['THAWLINE_BROWSER_DATA'] ?? '';
  return JSON.parse(
    readFileSync(path.join(folder, 'demo-sign-ins.json'), 'utf8'),
  ) as readonly SignIn[];
}

/** A phone held upright, with a finger for a mouse. */
export const PHONE: BrowserContextOptions = {
  viewport: { width: 390, height: 844 },
  hasTouch: true,
  isMobile: true,
};

/** By e-mail address, the session of whoever has signed in: the next window opens in it. */
const sessions = new Map<string, Awaited<ReturnType<BrowserContext['cookies']>>>();

/**
 * Opens a browser of its own for one person, signed in.
 *
 * @param at the page to open; one at once, for each that is drawn on the way takes seconds
 */
export async function enter(
  browser: Browser,
  who: (one: SignIn) => boolean,
  options: BrowserContextOptions = {},
  at = '/',
): Promise<Page> {
  const person = signIns().find(who);
  if (!person) throw new Error('nobody has that sign-in');
  const context = await browser.newContext(options);
  await context.addCookies(sessions.get(person.email) ?? []);
  const page = await context.newPage();
  const live = page.getByText('Live', { exact: true }).first();
  const door = page.getByLabel('E-mail address');
  await page.goto(at);
  await live.or(door).first().waitFor();
  if (await door.isVisible()) {
    await door.fill(person.email);
    await page.getByLabel('Password', { exact: true }).fill(person.password);
    await page.keyboard.press('Enter');
    await expect(page).not.toHaveURL(/sign-in/);
    if (at !== '/' && new URL(page.url()).pathname !== at) await page.goto(at);
  }
  await expect(live).toBeVisible();
  await page.waitForURL(({ pathname }) => pathname !== '/');
  sessions.set(person.email, await context.cookies());
  return page;
}

/** Asks the server as whoever is signed in on the page, for what a story needs but does not tell. */
export async function ask<T>(
  page: Page,
  method: 'GET' | 'POST' | 'PATCH',
  path: string,
  body?: object,
): Promise<T> {
  const cookies = await page.context().cookies();
  const token = cookies.find(({ name }) => name === 'XSRF-TOKEN')?.value ?? '';
  const origin = new URL(page.url()).origin;
  const reply = await page.request.fetch(path, {
    method,
    headers: { Origin: origin, 'X-XSRF-TOKEN': token },
    ...(body ? { data: body } : {}),
  });
  if (!reply.ok()) throw new Error(`${path}: ${String(reply.status())} ${await reply.text()}`);
  return (await reply.json()) as T;
}
