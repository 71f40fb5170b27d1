import { expect, test, type Page } from '@playwright/test';
import { boardOf, emptyRoutes, giveStops } from './desk-api';
import { enter, PHONE } from './people';

/** What a look at the element that has the focus found. */
interface Focus {
  readonly on: string;
  /** Whether anything but the page itself has it. */
  readonly isHeld: boolean;
  /** Whether some of it is in sight and nothing lies over that. */
  readonly isSeen: boolean;
  /** Whether the focus shows: an outline, or a row or option that is marked as the active one. */
  readonly isShown: boolean;
}

const focusNow = (page: Page): Promise<Focus> =>
  page.evaluate(async () => {
    // A list marks the row under its cursor when it next draws itself.
    await new Promise((drawn) => requestAnimationFrame(() => requestAnimationFrame(drawn)));
    const active = document.activeElement;
    if (!(active instanceof HTMLElement) || active === document.body)
      return { on: 'nothing', isHeld: false, isSeen: false, isShown: false };
    // A list that moves a cursor inside itself shows the focus on the row under that cursor.
    const cursor = active.getAttribute('aria-activedescendant');
    const seat = (cursor !== null && document.getElementById(cursor)) || active;
    const box = seat.getBoundingClientRect();
    const [left, right] = [Math.max(box.left, 0), Math.min(box.right, innerWidth)];
    const [top, bottom] = [Math.max(box.top, 0), Math.min(box.bottom, innerHeight)];
    // Visually hidden fields, such as a radio button's, are drawn by the label around them.
    const drawn = (element: Element | null): boolean =>
      element !== null &&
      (seat.contains(element) || element.contains(seat) || seat.closest('label') === element);
    let points = 0;
    for (const x of [0.1, 0.5, 0.9])
      for (const y of [0.2, 0.5, 0.8])
        if (drawn(document.elementFromPoint(left + (right - left) * x, top + (bottom - top) * y)))
          points += 1;
    const outlined = (element: Element): boolean => {
      const { outlineStyle, outlineWidth, boxShadow } = getComputedStyle(element);
      return (outlineStyle !== 'none' && outlineWidth !== '0px') || boxShadow !== 'none';
    };
    // Material draws a frame inside its own controls.
    const framed = (element: Element): boolean => {
      const frame = element.querySelector(':scope > .mat-focus-indicator') ?? element;
      const { content, borderTopStyle, borderTopWidth } = getComputedStyle(frame, '::before');
      return content !== 'none' && borderTopStyle === 'solid' && borderTopWidth !== '0px';
    };
    const label = active.closest('label, mat-form-field, .mat-mdc-form-field');
    return {
      on: `${active.tagName.toLowerCase()} "${(active.getAttribute('aria-label') ?? active.id) || (active.textContent ?? '').trim().slice(0, 40)}"`,
      isHeld: true,
      isSeen: right > left && bottom > top && points > 0,
      isShown:
        cursor !== null ||
        outlined(active) ||
        framed(active) ||
        (label !== null && outlined(label)) ||
        (label?.matches('.mat-focused') ?? false) ||
        active.matches('main, [tabindex="-1"]'),
    };
  });

/** Fails where the focus stays lost, hidden, covered or without a mark; it may be on its way. */
async function seesFocus(page: Page, after: string): Promise<void> {
  await expect(async () => {
    const focus = await focusNow(page);
    const { isHeld, isSeen, isShown } = focus;
    expect({ isHeld, isSeen, isShown }, `focus after ${after}: on ${focus.on}`).toEqual({
      isHeld: true,
      isSeen: true,
      isShown: true,
    });
  }).toPass({ timeout: 10_000 });
}

async function press(page: Page, ...keys: readonly string[]): Promise<void> {
  for (const key of keys) await page.keyboard.press(key);
  await seesFocus(page, keys.join(' '));
}

const queueOf = (page: Page) => page.getByRole('grid', { name: 'Queue of calls by urgency' });

/** Signs in a dispatcher whom no other story uses, and takes the mouse away. */
async function atTheDesk(browser: Parameters<typeof enter>[0]): Promise<Page> {
  const window = { viewport: { width: 1440, height: 900 }, reducedMotion: 'reduce' } as const;
  const page = await enter(browser, ({ email }) => email.startsWith('jonas'), window, '/password');
  await page.addInitScript(() => {
    // A story by keyboard alone fails when something was clicked by a pointer.
    addEventListener('pointerdown', () => (document.documentElement.dataset['pointed'] = 'yes'));
  });
  return page;
}

// A board that stays open goes on drawing itself.
test.afterEach(async ({ browser }) => {
  for (const context of browser.contexts()) await context.close();
});

test('a call is taken, checked, found, planned and published by keyboard alone', async ({
  browser,
}) => {
  const page = await atTheDesk(browser);
  await page.goto('/board');
  await expect(queueOf(page).getByRole('row').nth(1)).toBeVisible();
  const name = 'Kit Overbrook';
  const suggestions = page.locator('thaw-address-field').getByRole('option');

  await test.step('the call is taken', async () => {
    await press(page, 'n');
    await expect(page.getByLabel('Phone', { exact: true })).toBeFocused();
    await page.keyboard.type('2525550181');
    await press(page, 'Tab');
    await page.keyboard.type(name);
    await press(page, 'Tab');
    await page.keyboard.type('12 mainsail');
    await expect(suggestions.first()).toBeVisible();
    await press(page, 'ArrowDown', 'Enter');
    await expect(suggestions).toHaveCount(0);
    await tabTo(page, /Power went/);
    await page.keyboard.type('3 h ago');
    await press(page, 'Tab');
    await page.keyboard.type('1 h ago');
    await tabTo(page, /Refrigerator/);
    await press(page, '1');
    await press(page, 'Control+Enter');
    await expect(page.getByRole('heading', { name: /^Call \d+$/ })).toBeVisible();
  });
  const heading = await page.getByRole('heading', { name: /^Call \d+$/ }).textContent();
  const number = Number(heading?.replace(/\D/g, ''));
  await seesFocus(page, 'the call is saved');

  await test.step('the phone check is brought to its end', async () => {
    await page.keyboard.press('p');
    await expect(page.getByRole('button', { name: /^Release/ })).toBeVisible();
    await expect(page.locator('thaw-phone-check-panel')).toBeFocused();
    // Safety: no smoke, no line, no generator, even lights, all dry, nobody on a device.
    for (const key of ['n', 'n', 'n', 'n', 'n', 'n']) await press(page, key);
    // Power on; it clicks and stops; the outlet works; the plug is good.
    for (const key of ['o', 'c', 'w', 'g']) await press(page, key);
    for (let asked = 0; asked < 12; asked++) {
      if (await page.getByRole('timer').isVisible()) break;
      await press(page, '1');
    }
    await press(page, 'Enter');
    await expect(page.getByRole('timer')).toContainText(/4:5\d/);
    await press(page, 'd');
    // After the wait it trips the breaker: a visit.
    await expect(page.getByText(/What does it do then/)).toBeVisible();
    await press(page, 't');
    await expect(page.getByRole('heading', { name: 'Needs a visit' })).toBeVisible();
    await press(page, 'Enter');
    await expect(page.getByLabel('Why, in a few words')).toBeFocused();
    await page.keyboard.press('Enter');
    await expect(page.locator('thaw-call-panel header .state')).toHaveText('Waiting for a visit');
    await seesFocus(page, 'the check has ended');
  });

  await test.step('it is found in the queue', async () => {
    await press(page, 'Escape');
    await expect(queueOf(page)).toBeFocused();
    await press(page, '/');
    await page.keyboard.type(name);
    await expect(queueOf(page)).toHaveAttribute('aria-rowcount', '2');
    await press(page, 'Enter');
    await expect(queueOf(page)).toBeFocused();
    await press(page, 'ArrowDown', 'Enter');
    await expect(page.getByRole('heading', { name: `Call ${number}`, exact: true })).toBeVisible();
  });

  await test.step('routes are proposed and published', async () => {
    await press(page, 'v');
    await expect(page).toHaveURL(/\/routes/);
    await expect(page.getByRole('grid', { name: /On no route/ })).toBeFocused();
    await seesFocus(page, 'v');
    await press(page, 'r');
    await expect(page.getByRole('heading', { name: /^Proposal/ })).toBeVisible({ timeout: 30_000 });
    await seesFocus(page, 'the proposal is there');
    await page.keyboard.press('Control+Enter');
    await expect(page.getByRole('heading', { name: /^Proposal/ })).toBeHidden({ timeout: 20_000 });
    await seesFocus(page, 'the routes are published');
    const stop = page.getByRole('button', { name: new RegExp(`call ${number}\\b`, 'i') });
    await expect(stop.first()).toBeAttached();
    const { calls, stops } = await boardOf(page);
    const call = calls.find((one) => one.number === number);
    expect(stops.map(({ callId }) => callId)).toContain(call?.id);
  });

  await test.step('a stop is chosen, locked and pulled', async () => {
    await press(page, 's');
    await press(page, 'ArrowRight');
    await press(page, 'ArrowRight');
    const chosen = await page.evaluate(() => document.activeElement?.getAttribute('aria-label'));
    expect(chosen).toMatch(/call \d+/i);
    await press(page, 'l');
    await expect(page.locator('button.block.at.locked')).toBeFocused();
    await page.keyboard.press('p');
    await expect(page.getByRole('dialog')).toBeVisible();
    await seesFocus(page, 'the question why it is pulled');
    await page.keyboard.press('Escape');
    await expect(page.getByRole('dialog')).toBeHidden();
    await seesFocus(page, 'Escape from that question');
  });

  expect(await page.evaluate(() => document.documentElement.dataset['pointed'])).toBeUndefined();
  await emptyRoutes(page);
});

/** Goes on with the Tab key until something with this name has the focus; it is seen all the way. */
async function tabTo(page: Page, name: RegExp): Promise<void> {
  for (let steps = 0; steps < 25; steps++) {
    await press(page, 'Tab');
    const here = await page.evaluate(() => {
      const active = document.activeElement;
      const label = active instanceof HTMLInputElement ? active.labels?.[0]?.textContent : '';
      return `${label ?? ''} ${active?.textContent ?? ''}`;
    });
    if (name.test(here)) return;
  }
  throw new Error(`no way to ${String(name)} by the Tab key`);
}

test('the Tab key goes through every screen of the desk, and the focus is always in sight', async ({
  browser,
}) => {
  const page = await atTheDesk(browser);
  for (const [path, ready] of [
    ['/board', 'thaw-queue [role=row] + [role=row]'],
    ['/routes', 'thaw-route-board [role=row]'],
    ['/messages', '[role=listbox]'],
    ['/night-logs', 'thaw-drop-file button'],
    ['/password', 'form button'],
  ] as const) {
    await page.goto(path);
    await expect(page.locator(ready).first()).toBeVisible();
    const seen = new Set<string>();
    for (let steps = 0; steps < 90; steps++) {
      await page.keyboard.press('Tab');
      const focus = await focusNow(page);
      // Past the last one the browser itself has it, and begins again at the top.
      if (!focus.isHeld) break;
      expect(
        { isSeen: focus.isSeen, isShown: focus.isShown },
        `${path}, step ${steps + 1}: ${focus.on}`,
      ).toEqual({ isSeen: true, isShown: true });
      seen.add(focus.on);
    }
    expect(seen.size, `${path} is no trap, and has more than its header`).toBeGreaterThan(7);
  }
});

test('the sheet of keys lists what the keys do, and each listed key does it', async ({
  browser,
}) => {
  const page = await atTheDesk(browser);
  await page.goto('/board');
  await expect(queueOf(page).getByRole('row').nth(1)).toBeVisible();
  await page.keyboard.press('?');
  const sheet = page.getByRole('dialog', { name: 'Keys on this screen' });
  await expect(sheet).toBeVisible();
  await seesFocus(page, '?');
  for (const [key, does] of [
    ['n', 'Take a new call'],
    ['c', 'Claim the call, or release it'],
    ['p', 'Start the phone check'],
    ['v', 'Plan the visit on the routes screen'],
    ['m', 'Show the map, or the call again'],
    ['j', 'Next call'],
    ['k', 'Call before'],
    ['/', 'Search the queue'],
    ['u', 'Take the new order'],
    ['w', 'The queue as a list in words, or as rows'],
    ['?', 'Show the keys'],
    ['gr', 'Routes'],
  ] as const) {
    const line = sheet.locator('dl > div').filter({ has: page.getByText(does, { exact: true }) });
    await expect(line.locator('dt').first()).toHaveText(new RegExp(`^\\s*${escaped(key)}\\s*$`));
  }
  await page.keyboard.press('Escape');
  await expect(sheet).toBeHidden();

  await page.keyboard.press('w');
  await page.keyboard.press('q');
  await expect(page.getByRole('region', { name: 'Queue as a list' })).toBeFocused();
  await page.keyboard.press('w');
  await page.keyboard.press('q');
  await expect(queueOf(page)).toBeFocused();
  const first = await queueOf(page).getAttribute('aria-activedescendant');
  await page.keyboard.press('j');
  await expect(queueOf(page)).not.toHaveAttribute('aria-activedescendant', first ?? '');
  await page.keyboard.press('k');
  await expect(queueOf(page)).toHaveAttribute('aria-activedescendant', first ?? '');
  await page.keyboard.press('/');
  await expect(page.getByLabel('Search the queue')).toBeFocused();
  await page.keyboard.press('Escape');
  await page.keyboard.press('g');
  await page.keyboard.press('r');
  await expect(page).toHaveURL(/\/routes/);
  await page.keyboard.press('?');
  await expect(page.getByRole('dialog').getByText('Propose routes', { exact: true })).toBeVisible();
  await page.keyboard.press('Escape');
});

const escaped = (text: string): string =>
  [...text].map((sign) => sign.replace(/[/?+]/, '\\$&')).join('\\s*');

test('single keys type while a field has the focus, and can be turned off', async ({ browser }) => {
  const page = await atTheDesk(browser);
  await page.goto('/board');
  await expect(queueOf(page).getByRole('row').nth(1)).toBeVisible();
  const letters = 'ncpvmjkuwq/?gr';

  await page.keyboard.press('/');
  await page.keyboard.type(letters);
  const search = page.getByLabel('Search the queue');
  await expect(search).toHaveValue(letters);
  await expect(search).toBeFocused();
  await expect(page).toHaveURL(/\/board/);
  await expect(page.getByRole('dialog')).toHaveCount(0);
  await expect(page.getByRole('heading', { name: 'New call' })).toHaveCount(0);
  // The first clears the words, the second leaves the field.
  await page.keyboard.press('Escape');
  await page.keyboard.press('Escape');
  await expect(queueOf(page)).toBeFocused();

  await page.keyboard.press('n');
  const remark = page.getByLabel('Remark', { exact: true });
  await remark.focus();
  await page.keyboard.type(letters);
  await expect(remark).toHaveValue(letters);
  await expect(page.getByRole('dialog')).toHaveCount(0);
  await page.keyboard.press('Escape');
  await expect(page.getByRole('heading', { name: 'New call' })).toHaveCount(0);

  await page.keyboard.press('?');
  const single = page.getByRole('dialog').getByRole('switch', { name: 'Single keys work' });
  await single.focus();
  await page.keyboard.press('Space');
  await page.keyboard.press('Escape');
  await expect(page.getByRole('dialog')).toHaveCount(0);
  await page.keyboard.type(letters);
  await expect(page).toHaveURL(/\/board/);
  await expect(page.getByRole('dialog')).toHaveCount(0);
  await expect(page.getByRole('heading', { name: 'New call' })).toHaveCount(0);
});

interface Target {
  readonly on: string;
  readonly width: number;
  readonly height: number;
}

/**
 * Targets below a size, after WCAG 2.2, 2.5.8: one counts with its label; a link in a sentence is
 * exempt, and so is a small one with nothing else within a circle of 24 px around its middle.
 */
const tooSmall = (page: Page, least: number, within = 'body'): Promise<readonly Target[]> =>
  page.evaluate(
    ({ least, within }) => {
      const wanted =
        'a[href], button, input, select, textarea, summary, [role=tab], [role=switch], [role=option], [role=menuitem], [role=slider]';
      const targets = Array.from(document.querySelectorAll(within))
        .flatMap((part) => Array.from(part.querySelectorAll<HTMLElement>(wanted)))
        .filter(
          (one) =>
            one.checkVisibility({ checkVisibilityCSS: true, checkOpacity: false }) &&
            !one.closest('.visually-hidden, .skip, .leaflet-pane, [aria-hidden=true]') &&
            !(one instanceof HTMLInputElement && one.type === 'hidden'),
        )
        .map((one) => {
          const own = one.getBoundingClientRect();
          const boxes = [own];
          const touched = one.closest('.mat-mdc-icon-button, .mdc-switch, .mdc-checkbox');
          if (touched) boxes.push(touched.getBoundingClientRect());
          if (one instanceof HTMLInputElement)
            for (const label of Array.from(one.labels ?? []))
              boxes.push(label.getBoundingClientRect());
          const left = Math.min(...boxes.map((box) => box.left));
          const top = Math.min(...boxes.map((box) => box.top));
          const right = Math.max(...boxes.map((box) => box.right));
          const bottom = Math.max(...boxes.map((box) => box.bottom));
          return { one, left, top, right, bottom, width: right - left, height: bottom - top };
        })
        .filter(({ width, height }) => width > 0 && height > 0);

      const inSentence = (one: HTMLElement): boolean =>
        one.tagName === 'A' &&
        getComputedStyle(one).display === 'inline' &&
        Array.from(one.parentElement?.childNodes ?? []).some(
          (node) => node.nodeType === Node.TEXT_NODE && (node.textContent ?? '').trim() !== '',
        );
      // From the middle of one target to the nearest edge of another.
      const isAlone = (target: (typeof targets)[number]): boolean => {
        const [x, y] = [(target.left + target.right) / 2, (target.top + target.bottom) / 2];
        return targets.every((other) => {
          if (other === target || target.one.contains(other.one) || other.one.contains(target.one))
            return true;
          const dx = Math.max(other.left - x, 0, x - other.right);
          const dy = Math.max(other.top - y, 0, y - other.bottom);
          return Math.hypot(dx, dy) >= 12;
        });
      };
      return targets
        .filter((target) => target.width < least - 0.5 || target.height < least - 0.5)
        .filter((target) => !inSentence(target.one) && !(least === 24 && isAlone(target)))
        .map(({ one, width, height }) => ({
          on: `${one.tagName.toLowerCase()} "${one.getAttribute('aria-label') ?? ((one.textContent ?? '').trim().slice(0, 30) || one.id)}"`,
          width: Math.round(width * 10) / 10,
          height: Math.round(height * 10) / 10,
        }));
    },
    { least, within },
  );

test('no target of the desk is smaller than 24 px', async ({ browser }) => {
  const page = await atTheDesk(browser);
  await page.goto('/board');
  await expect(queueOf(page).getByRole('row').nth(1)).toBeVisible();
  expect.soft(await tooSmall(page, 24), 'board').toEqual([]);
  await page.getByRole('button', { name: 'Lists', exact: true }).click();
  await page.keyboard.press('n');
  await page
    .getByRole('button', { name: /Refrigerator/ })
    .first()
    .click();
  await page.getByText('More: place, age, worth, room').click();
  expect.soft(await tooSmall(page, 24), 'intake and the lists of the map').toEqual([]);
  await page.getByRole('button', { name: 'Start over' }).click();
  await page.keyboard.press('Escape');
  await queueOf(page).focus();
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { name: 'Remarks' })).toBeVisible();
  expect.soft(await tooSmall(page, 24), 'call').toEqual([]);
  for (const path of ['/routes', '/messages', '/night-logs', '/password']) {
    await page.goto(path);
    await page.waitForLoadState('networkidle');
    expect.soft(await tooSmall(page, 24), path).toEqual([]);
  }
});

test('the manager’s screens have no target smaller than 24 px either', async ({ browser }) => {
  const page = await enter(browser, ({ role }) => role === 'owner');
  for (const path of [
    '/drain',
    '/office?part=storms',
    '/office?part=settings',
    '/office?part=technicians',
    '/office?part=accounts',
    '/office?part=trail',
  ]) {
    await page.goto(path);
    await page.waitForLoadState('networkidle');
    expect.soft(await tooSmall(page, 24), path).toEqual([]);
  }
});

test('what a technician does with a wet thumb is at least 48 px high', async ({ browser }) => {
  const desk = await atTheDesk(browser);
  const phone = await enter(browser, ({ email }) => email.startsWith('piet@'), PHONE);
  await giveStops(desk, 'Piet', 1);
  await expect(phone.getByRole('button', { name: 'Accept this stop' })).toBeVisible();
  expect.soft(await tooSmall(phone, 48, 'thaw-day-page'), 'a stop on offer').toEqual([]);
  await phone.getByRole('button', { name: 'Decline, with a reason' }).tap();
  expect.soft(await tooSmall(phone, 48, 'thaw-decline-form'), 'declining').toEqual([]);
  await phone.getByRole('button', { name: 'Back', exact: true }).tap();
  await emptyRoutes(desk);
});
