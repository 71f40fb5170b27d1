import { expect, test, type Page } from '@playwright/test';
import { emptyRoutes, giveStops } from './desk-api';
import { enter, PHONE } from './people';

const SIZES = [
  { width: 1920, height: 1080 },
  { width: 1366, height: 768 },
  { width: 390, height: 844 },
] as const;

/**
 * What does not fit: a page wider than the window, something that ends outside of every part that
 * can be scrolled to it, words that are cut without an ellipsis and their full text in reach, a
 * control that lies under something else.
 */
const misfits = (page: Page): Promise<readonly string[]> =>
  page.evaluate(() => {
    const found: string[] = [];
    const root = document.scrollingElement ?? document.documentElement;
    // Where the part below the header scrolls, it is the page to whoever looks at it.
    for (const page of [root, document.querySelector('main') ?? root])
      if (page.scrollWidth > innerWidth)
        found.push(`the page is ${String(page.scrollWidth)} px wide`);

    const named = (element: Element): string =>
      `${element.tagName.toLowerCase()}.${element.classList[0] ?? ''} "${(element.textContent ?? '').trim().slice(0, 40)}"`;
    const parents = (element: Element): Element[] => {
      const all: Element[] = [];
      for (let one = element.parentElement; one; one = one.parentElement) all.push(one);
      return all;
    };
    const scrolls = (element: Element, axis: 'X' | 'Y'): boolean =>
      element !== document.body && /auto|scroll/.test(getComputedStyle(element)[`overflow${axis}`]);
    /** What of an element the parts that it scrolls in let through. */
    const inSight = (element: Element) => {
      let { left, top, right, bottom } = element.getBoundingClientRect();
      for (const parent of [...parents(element), document.documentElement]) {
        const isRoot = parent === document.documentElement || parent === document.body;
        if (!isRoot && getComputedStyle(parent).overflow === 'visible') continue;
        const frame = isRoot
          ? new DOMRect(0, 0, innerWidth, innerHeight)
          : parent.getBoundingClientRect();
        left = Math.max(left, frame.left);
        top = Math.max(top, frame.top);
        right = Math.min(right, frame.right);
        bottom = Math.min(bottom, frame.bottom);
      }
      return { left, top, right, bottom };
    };

    /** What is drawn over the middle of a control and is no part of it. */
    const liesUnder = (element: Element): Element | null => {
      const seen = inSight(element);
      const [x, y] = [(seen.left + seen.right) / 2, (seen.top + seen.bottom) / 2];
      const top = document.elementFromPoint(x, y);
      const drawnBy = [element, element.closest('label'), element.closest(MATERIAL)];
      return top === null || top.contains(element) || drawnBy.some((one) => one?.contains(top))
        ? null
        : top;
    };
    const MATERIAL = '.mat-mdc-form-field, .mdc-switch, .mdc-checkbox';

    for (const element of Array.from(document.querySelectorAll('body *'))) {
      if (element.closest('.visually-hidden, .skip, svg, canvas, .leaflet-pane, option')) continue;
      if (element.closest('.cdk-live-announcer-element, .cdk-visually-hidden')) continue;
      if (getComputedStyle(element).clipPath === 'inset(50%)') continue;
      if (!element.checkVisibility({ checkVisibilityCSS: true, checkOpacity: true })) continue;
      const box = element.getBoundingClientRect();
      if (box.width === 0 || box.height === 0) continue;
      const around = parents(element);

      if (box.right > innerWidth + 1 && !around.some((one) => scrolls(one, 'X')))
        found.push(`${named(element)} ends ${String(Math.round(box.right))} px to the right`);
      const isBelow = box.top + scrollY > Math.max(root.scrollHeight, innerHeight) - 1;
      if (isBelow && !around.some((one) => scrolls(one, 'Y')))
        found.push(`${named(element)} begins below all that can be scrolled`);

      const style = getComputedStyle(element);
      const speaks = Array.from(element.childNodes).some(
        (node) => node.nodeType === Node.TEXT_NODE && (node.textContent ?? '').trim() !== '',
      );
      if (speaks && style.overflowX !== 'visible' && !/auto|scroll/.test(style.overflowX)) {
        const isWide = element.scrollWidth > element.clientWidth + 1 && element.clientWidth > 0;
        // A preview of a text opens in full; other shortened words are told in a title.
        const isTold =
          style.textOverflow === 'ellipsis' &&
          element.closest('[title]:not([title=""]), [role=option], [aria-label]') !== null;
        if (isWide && !isTold) found.push(`${named(element)} is cut at its end`);
      }
      if (speaks && style.overflowY !== 'visible' && !/auto|scroll/.test(style.overflowY))
        if (element.scrollHeight > element.clientHeight + 2 && style.webkitLineClamp === 'none')
          found.push(`${named(element)} is cut at its foot`);

      if (!element.matches('button, a[href], input, select, textarea, summary')) continue;
      if (getComputedStyle(element).pointerEvents === 'none') continue;
      const seen = inSight(element);
      if (seen.right - seen.left < 8 || seen.bottom - seen.top < 8) continue;
      let above = liesUnder(element);
      // Under a bar that stays at the foot it is only on its way past.
      if (above && around.some((one) => scrolls(one, 'Y'))) {
        element.scrollIntoView({ block: 'center' });
        above = liesUnder(element);
      }
      if (above) found.push(`${named(element)} lies under ${named(above)}`);
    }
    return [...new Set(found)];
  });

/** Lists and charts measure themselves some frames after the window has its new size, and draw. */
const remeasured = (page: Page): Promise<void> =>
  page.evaluate(async () => {
    for (let drawn = 0; drawn < 8; drawn++)
      await new Promise((next) => requestAnimationFrame(next));
  });

/** Looks at what is open now in each size; nothing is loaded anew, as when a window is resized. */
async function fits(
  page: Page,
  what: string,
  sizes: readonly { width: number; height: number }[] = SIZES,
): Promise<void> {
  for (const size of sizes) {
    await page.setViewportSize(size);
    await remeasured(page);
    let found = await misfits(page);
    // On a busy machine some part may still be at it.
    for (let looks = 1; found.length > 0 && looks < 5; looks++) {
      await page.waitForTimeout(200);
      found = await misfits(page);
    }
    expect.soft(found, `${what} at ${size.width}x${size.height}`).toEqual([]);
  }
  await page.setViewportSize({ width: 1440, height: 900 });
}

const STILL = { reducedMotion: 'reduce' } as const;

// A board that stays open goes on drawing itself.
test.afterEach(async ({ browser }) => {
  for (const context of browser.contexts()) await context.close();
});

test('the measure finds what does not fit', async ({ page }) => {
  await page.goto('/sign-in');
  await expect(page.getByRole('button', { name: 'Sign in' })).toBeVisible();
  await page.setViewportSize({ width: 390, height: 844 });
  expect(await misfits(page)).toEqual([]);
  await page.evaluate(() => {
    const cut = document.createElement('p');
    cut.textContent = 'Words that nobody can read to their end';
    Object.assign(cut.style, { inlineSize: '60px', overflow: 'hidden', whiteSpace: 'nowrap' });
    const wide = document.createElement('p');
    wide.textContent = 'Far out';
    wide.style.marginInlineStart = '500px';
    const lid = document.createElement('div');
    Object.assign(lid.style, { position: 'fixed', inset: '0', zIndex: '9' });
    document.body.append(lid);
    document.querySelector('main')?.append(cut, wide);
  });
  const found = (await misfits(page)).join('\n');
  expect(found).toMatch(/px wide|to the right/);
  expect(found).toMatch(/Words that.* is cut at its end/);
  expect(found).toMatch(/"Sign in" lies under/);
});

test('signing in fits every window', async ({ page }) => {
  await page.goto('/sign-in');
  await expect(page.getByRole('button', { name: 'Sign in' })).toBeVisible();
  await fits(page, 'sign-in');
});

test('the dispatcher’s screens fit every window', async ({ browser }) => {
  const page = await enter(browser, ({ email }) => email.startsWith('jonas'), STILL, '/board');
  const rows = page.getByRole('grid', { name: 'Queue of calls by urgency' });
  await expect(rows.getByRole('row').nth(1)).toBeVisible();
  await fits(page, 'board');

  await page.keyboard.press('n');
  await page.getByRole('button', { name: /Fridge-freezer/ }).click();
  await fits(page, 'intake');
  await page.getByRole('button', { name: 'Start over' }).click();
  await page.keyboard.press('Escape');

  await rows.focus();
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { name: 'Remarks' })).toBeVisible();
  await fits(page, 'call');

  await page.keyboard.press('Escape');
  for (const panel of ['Draw area', 'Lists', 'Marks']) {
    await page.getByRole('button', { name: panel, exact: true }).click();
    await page.keyboard.press('m');
    await fits(page, `map, ${panel}`);
    await page.goto('/board');
    await expect(rows.getByRole('row').nth(1)).toBeVisible();
  }

  await page.goto('/routes');
  await expect(page.getByRole('grid', { name: 'Routes of all technicians' })).toBeVisible();
  await page.keyboard.press('r');
  await expect(page.getByRole('heading', { name: /^Proposal/ })).toBeVisible({ timeout: 30_000 });
  await fits(page, 'routes with a proposal');
  await page.keyboard.press('x');
  await expect(page.getByRole('heading', { name: /^Proposal/ })).toBeHidden();
  await fits(page, 'routes');

  await page.goto('/messages');
  await expect(page.getByRole('option').first()).toBeVisible();
  await fits(page, 'messages');
  await page.getByRole('option').first().click();
  await expect(page.getByRole('textbox').last()).toBeVisible();
  await fits(page, 'messages, a thread open');

  for (const [path, ready] of [
    ['/night-logs', /Choose a night log/],
    ['/password', 'Change password'],
  ] as const) {
    await page.goto(path);
    await expect(page.getByRole('button', { name: ready })).toBeVisible();
    await fits(page, path);
  }
});

test('the owner’s screens fit every window', async ({ browser }) => {
  const page = await enter(browser, ({ role }) => role === 'owner', STILL, '/drain');
  await page.getByRole('button', { name: 'Show the figures as a table' }).click();
  await fits(page, 'drain');
  for (const part of ['storms', 'settings', 'technicians', 'accounts', 'trail']) {
    await page.goto(`/office?part=${part}`);
    await expect(page.getByRole('tabpanel')).toBeVisible();
    await page.waitForLoadState('networkidle');
    await fits(page, `office, ${part}`);
  }
});

test('the technician’s day fits the smallest phone', async ({ browser }) => {
  const desk = await enter(browser, ({ email }) => email.startsWith('jonas'), STILL, '/password');
  const phone = await enter(browser, ({ email }) => email.startsWith('piet@'), PHONE);
  const sizes = [
    { width: 390, height: 844 },
    { width: 320, height: 640 },
    { width: 640, height: 320 },
  ];
  await fits(phone, 'day without a stop', sizes);
  await giveStops(desk, 'Piet', 3);
  await expect(phone.getByRole('button', { name: 'Accept this stop' })).toBeVisible();
  await fits(phone, 'day with a stop on offer', sizes);
  await phone.getByRole('button', { name: 'Decline, with a reason' }).click();
  await fits(phone, 'day, declining', sizes);
  await phone.getByRole('button', { name: 'Back', exact: true }).click();
  await emptyRoutes(desk);
});
