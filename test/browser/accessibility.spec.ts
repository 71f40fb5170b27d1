import { randomUUID } from 'node:crypto';
import { AxeBuilder } from '@axe-core/playwright';
import { expect, test, type Browser, type Page } from '@playwright/test';
import type { StopDto } from '@shared/contract/routes';
import { boardOf, give, giveStops } from './desk-api';
import { enter, PHONE } from './people';

/** Sits at a desk where nothing slides or fades, so that each state is judged at rest. */
const DESK = { viewport: { width: 1440, height: 900 }, reducedMotion: 'reduce' } as const;
/** Drives a van of the demo that no other story uses. */
const DRIVER = 'noor@';

interface Finding {
  readonly rule: string;
  readonly impact: string;
  readonly where: string;
}

/**
 * Every rule in light; in dark the page is the same one, so only what its colours decide.
 *
 * @param known rows or marks, by selector, that were judged with the same screen before
 */
async function findings(
  page: Page,
  scheme: 'light' | 'dark',
  known: readonly string[] = [],
): Promise<Finding[]> {
  await page.emulateMedia({ colorScheme: scheme, reducedMotion: 'reduce' });
  await atRest(page);
  // In one piece, since no page here has frames of others: else each look opens a page of its own.
  const axe = new AxeBuilder({ page }).options({ resultTypes: ['violations'] }).setLegacyMode(true);
  for (const part of known) axe.exclude(part);
  if (scheme === 'dark') axe.withRules(['color-contrast', 'link-in-text-block']);
  const { violations } = await axe.analyze();
  return violations.flatMap(({ id, impact, nodes }) =>
    nodes.map((node) => ({
      rule: id,
      impact: impact ?? 'unknown',
      where: `${node.target.join(' ')}: ${node.any[0]?.message ?? node.all[0]?.message ?? ''}`,
    })),
  );
}

/** Colours change over a moment even where nothing moves. */
const atRest = (page: Page): Promise<unknown> =>
  page.evaluate(async () => {
    await new Promise((drawn) => requestAnimationFrame(() => requestAnimationFrame(drawn)));
    const ending = document
      .getAnimations()
      .filter((one) => one.effect?.getComputedTiming().endTime !== Infinity);
    await Promise.allSettled(ending.map(({ finished }) => finished));
  });

/** What stays as it was while something is opened beside it, and takes longest to judge. */
const QUEUE_ROWS = ['thaw-queue-row'];
const LANES = ['thaw-route-board [role=row]'];

/** Fails the test, without ending it, for each state in which axe finds something serious. */
async function judge(page: Page, state: string, known: readonly string[] = []): Promise<void> {
  for (const scheme of ['light', 'dark'] as const) {
    const found = await findings(page, scheme, known);
    const [grave, minor]: [string[], string[]] = [[], []];
    for (const { rule, impact, where } of found) {
      const isGrave = impact === 'serious' || impact === 'critical' || impact === 'unknown';
      (isGrave ? grave : minor).push(`${impact} ${rule} at ${where}`);
    }
    for (const words of new Set(minor)) console.log(`    ${state}, ${scheme}: ${words}`);
    expect.soft(grave, `${state}, ${scheme}`).toEqual([]);
  }
  await page.emulateMedia({ colorScheme: 'light', reducedMotion: 'reduce' });
}

// None of these needs what another leaves behind, and together they take longest.
test.describe.configure({ mode: 'parallel' });

const asMara = (browser: Browser, at: string): Promise<Page> =>
  enter(browser, ({ email }) => email.startsWith('mara'), DESK, at);

// A board that stays open goes on drawing itself.
test.afterEach(async ({ browser }) => {
  for (const context of browser.contexts()) await context.close();
});

test('the judge of these screens sees a picture without words and a pale line', async ({
  page,
}) => {
  await page.goto('/sign-in');
  await page.evaluate(() => {
    const picture = document.createElement('img');
    const line = document.createElement('p');
    line.textContent = 'Hardly to be read';
    Object.assign(line.style, { color: '#777777', background: '#888888' });
    document.querySelector('main')?.append(picture, line);
  });
  for (const scheme of ['light', 'dark'] as const) {
    const rules = (await findings(page, scheme)).map(({ rule }) => rule);
    expect(rules).toContain('color-contrast');
    if (scheme === 'light') expect(rules).toContain('image-alt');
  }
});

test('signing in is accessible, refused or cut off too', async ({ browser }) => {
  const page = await (await browser.newContext(DESK)).newPage();
  await page.goto('/sign-in');
  await expect(page.getByRole('button', { name: 'Sign in' })).toBeVisible();
  await judge(page, 'sign-in');

  await page.getByLabel('E-mail address').fill('nobody@example.com');
  await page.getByLabel('Password', { exact: true }).fill('never given to anybody');
  await page.keyboard.press('Enter');
  await expect(page.getByRole('alert').filter({ hasText: /\S/ })).toBeVisible();
  await judge(page, 'sign-in refused');

  await page.route('**/api/**', (route) => route.abort());
  await page.goto('/board');
  await expect(page.getByRole('heading', { name: 'No connection to the server' })).toBeVisible();
  await judge(page, 'no connection');
});

test('the board is accessible, whatever is open on it', async ({ browser }) => {
  const page = await asMara(browser, '/board');
  const rows = page.getByRole('grid', { name: 'Queue of calls by urgency' });
  await expect(rows.getByRole('row').nth(1)).toBeVisible();
  await expect(page.getByRole('application', { name: /Map of/ })).toBeVisible();
  await judge(page, 'board, nothing selected');

  await page.keyboard.press('w');
  await expect(page.getByRole('region', { name: 'Queue as a list' })).toBeVisible();
  await judge(page, 'queue as a list');
  await page.keyboard.press('w');

  await page.getByLabel('Search the queue').fill('no call has these words');
  await expect(page.getByText('No call matches the filter.')).toBeVisible();
  await judge(page, 'queue, nothing matches', QUEUE_ROWS);
  await page.getByLabel('Search the queue').fill('');

  await page.keyboard.press('Escape');
  await page.keyboard.press('n');
  await page.keyboard.press('Control+Enter');
  await expect(page.getByLabel('Phone', { exact: true })).toHaveAttribute('aria-invalid', 'true');
  await page
    .getByRole('button', { name: /Refrigerator/ })
    .first()
    .click();
  await page.getByRole('button', { name: /Medicine fridge/ }).click();
  await page.getByText('Smoke, burning smell, water or a downed line').click();
  await judge(page, 'intake, with what is wrong in it', QUEUE_ROWS);
  await page.getByRole('button', { name: 'Start over' }).click();
  await page.keyboard.press('Escape');

  await rows.focus();
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { name: /^Call \d+$/ })).toBeVisible();
  await page.keyboard.press('p');
  await expect(page.getByRole('group', { name: 'Answers' })).toBeVisible();
  await expect(page.getByRole('button', { name: /Release/ })).toBeVisible();
  await judge(page, 'call open, in its phone check', QUEUE_ROWS);

  await page.keyboard.press('s');
  await expect(page.getByRole('heading', { name: /^Stop:/ })).toBeVisible();
  await judge(page, 'phone check stopped by danger', QUEUE_ROWS);
  await page.keyboard.press('Backspace');
  await page.keyboard.press('Escape');
});

test('the map is accessible, with each of its panels', async ({ browser }) => {
  const page = await asMara(browser, '/board');
  for (const [button, panel] of [
    ['Draw area', 'Outage area'],
    ['Close road', 'Storm road'],
    ['Lists', 'Areas and pockets'],
    ['Marks', 'What the marks mean'],
  ] as const) {
    await page.getByRole('button', { name: button, exact: true }).click();
    await expect(page.getByRole('region', { name: panel })).toBeVisible();
    if (panel === 'Areas and pockets')
      await expect(page.getByRole('button', { name: /Only these/ }).first()).toBeVisible();
    await judge(page, `map, ${panel}`, QUEUE_ROWS);
    if (panel === 'Outage area' || panel === 'Storm road')
      await page.getByRole('button', { name: 'Cancel' }).click();
  }

  await page.getByRole('button', { name: 'Lists', exact: true }).click();
  await page
    .getByRole('button', { name: /^Change/ })
    .first()
    .click();
  await expect(page.getByRole('button', { name: 'Save area' })).toBeVisible();
  await judge(page, 'map, an area being changed', QUEUE_ROWS);

  const form = page.getByRole('region', { name: 'Outage area' });
  await page.getByRole('button', { name: 'Draw area', exact: true }).click();
  await form.getByRole('button', { name: 'Feeders' }).click();
  await form.getByRole('checkbox').first().check();
  await expect(form.getByRole('button', { name: 'Save area' })).toBeVisible();
  await judge(page, 'map, an area of feeders', QUEUE_ROWS);
  await form.getByRole('button', { name: 'File…' }).click();
  await expect(page.getByRole('region', { name: 'Outage areas from a file' })).toBeVisible();
  await judge(page, 'map, areas from a file', QUEUE_ROWS);
});

test('routes are accessible, with a proposal and without', async ({ browser }) => {
  const page = await asMara(browser, '/routes');
  await expect(page.getByRole('grid', { name: 'Routes of all technicians' })).toBeVisible();
  await expect(page.getByRole('heading', { name: /On no route/ })).toBeVisible();
  await judge(page, 'routes, no proposal');

  await page.keyboard.press('r');
  await expect(page.getByRole('heading', { name: /^Proposal/ })).toBeVisible({ timeout: 30_000 });
  await judge(page, 'routes, a proposal beside them');
  await page.keyboard.press('x');
  await expect(page.getByRole('heading', { name: /^Proposal/ })).toBeHidden();

  await page.getByRole('grid', { name: /On no route/ }).focus();
  await page.keyboard.press('a');
  await expect(page.getByRole('dialog')).toBeVisible();
  await judge(page, 'routes, a call being placed by hand', LANES);
});

test('messages and night logs are accessible, in trouble too', async ({ browser }) => {
  const page = await asMara(browser, '/messages');
  await expect(page.getByRole('listbox')).toBeVisible();
  await judge(page, 'messages');
  await page.getByRole('option').first().click();
  await expect(page.getByRole('textbox').last()).toBeVisible();
  await judge(page, 'messages, a thread open');

  await page.route('**/api/storms/*/messages*', (route) => route.abort());
  await page.reload();
  await expect(page.getByText('The texts could not be fetched.')).toBeVisible();
  await judge(page, 'messages that cannot be fetched');

  await page.goto('/night-logs');
  await expect(page.getByRole('button', { name: /Choose a night log/ })).toBeVisible();
  await judge(page, 'night logs');
  await page.getByLabel('Night log', { exact: true }).setInputFiles({
    name: `desk night ${randomUUID().slice(0, 8)}.csv`,
    mimeType: 'text/csv',
    buffer: Buffer.from(NIGHT_LOG),
  });
  await expect(page.getByRole('heading', { name: /^desk night/ })).toBeVisible();
  await expect(page.getByRole('button', { name: /^Import/ })).toBeEnabled();
  await judge(page, 'night log, its columns mapped');
});

test('what lies over a screen is accessible', async ({ browser }) => {
  const page = await asMara(browser, '/board');
  await expect(page.getByRole('grid', { name: /Queue/ })).toBeVisible();
  await page.keyboard.press('?');
  await expect(page.getByRole('dialog')).toBeVisible();
  await judge(page, 'the sheet of keys', QUEUE_ROWS);
  await page.keyboard.press('Escape');
  await expect(page.getByRole('dialog')).toBeHidden();

  await page.getByRole('button', { name: /^Account of/ }).click();
  await expect(page.getByRole('menu')).toBeVisible();
  await judge(page, 'account menu', QUEUE_ROWS);
  await page.getByRole('menuitem', { name: 'Change password' }).click();
  await expect(page.getByRole('heading', { name: 'Change password' })).toBeVisible();
  await page.getByRole('button', { name: 'Change password' }).click();
  await judge(page, 'password, nothing filled in');
});

test('the drain and the office are accessible', async ({ browser }) => {
  const page = await enter(browser, ({ role }) => role === 'owner', DESK, '/drain');
  await page.getByRole('button', { name: 'Show the figures as a table' }).click();
  await judge(page, 'drain, with its table');

  for (const part of ['storms', 'settings', 'technicians', 'accounts', 'region', 'trail']) {
    await page.goto(`/office?part=${part}`);
    await expect(page.getByRole('tabpanel')).toBeVisible();
    // Each part fetches what it shows; the page is at rest when nothing is under way.
    await page.waitForLoadState('networkidle');
    await judge(page, `office, ${part}`);
  }

  await page.route('**/api/storms/*/drain*', (route) => route.abort());
  await page.goto('/drain');
  await expect(page.locator('thaw-drain-page .stale')).toBeVisible();
  await judge(page, 'drain that cannot be fetched');
});

test('the day on the phone is accessible at each step of a stop', async ({ browser }) => {
  const desk = await asMara(browser, '/password');
  const phone = await enter(browser, ({ email }) => email.startsWith(DRIVER), {
    ...PHONE,
    reducedMotion: 'reduce',
  });
  await expect(phone.getByRole('heading', { name: 'Today' })).toBeVisible();
  await judge(phone, 'day, no stop');

  const noor = await giveStops(desk, 'Noor', 2);
  await expect(phone.getByRole('button', { name: 'Accept this stop' })).toBeVisible();
  await judge(phone, 'day, a stop on offer');
  await phone.getByRole('button', { name: 'Decline, with a reason' }).click();
  await phone.getByRole('button', { name: 'Give it back' }).click();
  await expect(phone.getByRole('alert')).toBeVisible();
  await judge(phone, 'day, declining without a reason');
  await phone.getByRole('button', { name: 'Back', exact: true }).click();

  await phone.route('**/acceptance', (route) => route.abort());
  await phone.getByRole('button', { name: 'Accept this stop' }).click();
  await expect(phone.getByText(/^Not sent yet/)).toBeVisible();
  await judge(phone, 'day, an answer that waits for the signal');
  await phone.unroute('**/acceptance');
  const again = phone.getByRole('button', { name: 'Send it now' });
  const travel = phone.getByRole('button', { name: 'Start travel' });
  // It may also go out by itself, just as the button is to be pressed.
  await expect(async () => {
    if (await again.isVisible()) await again.click({ timeout: 1_000 });
    await expect(travel).toBeVisible({ timeout: 1_000 });
  }).toPass();

  await travel.click();
  await expect(phone.getByRole('button', { name: 'Start without' })).toBeVisible();
  await judge(phone, 'day, asked whether to share the position');
  await phone.getByRole('button', { name: 'Start without' }).click();
  await expect(phone.getByRole('button', { name: 'I have arrived' })).toBeVisible();
  await judge(phone, 'day, travelling');
  await phone.getByRole('button', { name: 'I have arrived' }).click();
  await phone.getByRole('button', { name: 'Finish the visit' }).click();
  await phone
    .getByRole('button', { name: /Finish|Write/ })
    .last()
    .click();
  await expect(phone.getByRole('alert')).toBeVisible();
  await judge(phone, 'day, finishing without an outcome');
  await phone.getByRole('button', { name: 'Back', exact: true }).click();
  await expect(phone.getByRole('button', { name: 'Finish the visit' })).toBeVisible();
  await judge(phone, 'day, on site');

  // Leaves the routes as they were found.
  const mine = (await boardOf(desk)).stops.filter((stop) => stop.technicianId === noor);
  await end(desk, phone, mine);
});

async function end(desk: Page, phone: Page, stops: readonly StopDto[]): Promise<void> {
  for (const stop of stops.filter(({ state }) => state !== 'on-site'))
    await give(desk, `/api/stops/${stop.id}/pull`, { version: stop.version, reason: 'cleared' });
  for (const { id } of stops.filter(({ state }) => state === 'on-site')) {
    const now = (await boardOf(desk)).stops.find((stop) => stop.id === id);
    await give(phone, `/api/stops/${id}/finish`, {
      version: now?.version,
      outcome: 'restored',
      note: '',
      partsUsed: [],
    });
  }
}

/** As a service might write it: its own names and order, a quoted comma, one row to put aside. */
const NIGHT_LOG = `Time,Caller,Call back,Street,City,Message
2:15a,"Fenn, Ada",252-555-0171,100 Heron Street,Ternhaven,"freezer warm, power back since midnight"
02:40,Rune Lowmoor,(252) 555-0172,,,no cooling in the fridge
3:05 AM,Dov Marchbank,2525550173,12 Mainsail Ter,Rowanscar,"fridge and freezer dead, insulin in it"
`;
