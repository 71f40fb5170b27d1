import { expect, test, type Page } from '@playwright/test';
import { ask, enter, PHONE } from './people';

const AREA = process.env['STORM_AREA'] ?? '919';
const NAME = `Opal Wick${process.env['STORM_AREA'] ?? 'stead'}`;

/** Texts that the stand-in of the text service has taken. */
async function textsTaken(page: Page): Promise<{ kind: string; to?: string; body?: string }[]> {
  const url = `${process.env['THAWLINE_BROWSER_TEXTS'] ?? ''}/_control/journal`;
  const entries = (await (await page.request.get(url)).json()) as unknown;
  const list = Array.isArray(entries) ? entries : (entries as { journal: unknown[] }).journal;
  return (list as { kind: string }[]).filter(({ kind }) => kind === 'accepted');
}

/** How many calls a visit has settled, as the drain on the manager's screen says. */
async function visitsSettled(page: Page): Promise<number> {
  await expect(page.getByText('settled by visit')).toBeVisible();
  const words = await page.locator('body').innerText();
  return Number(/settled by visit\s*(\d+)/.exec(words)?.[1]);
}

test('a storm night, with four people at once', async ({ browser }) => {
  const mara = await enter(browser, ({ email }) => email.startsWith('mara'));
  const jonas = await enter(browser, ({ email }) => email.startsWith('jonas'));
  const ines = await enter(browser, ({ role }) => role === 'manager');
  const theo = await enter(
    browser,
    ({ email }) => email.startsWith(process.env['STORM_TECH'] ?? 'theo'),
    PHONE,
  );

  await test.step('the dispatcher takes a call by keyboard alone, and it is on the other board', async () => {
    await mara.keyboard.press('n');
    await expect(mara.getByLabel('Phone', { exact: true })).toBeFocused();
    await mara.keyboard.type(`${AREA}5550123`);
    await mara.keyboard.press('Tab');
    await mara.keyboard.type(NAME);
    await mara.keyboard.press('Tab');
    await mara.keyboard.type('120 linnet pike');
    await expect(mara.getByRole('listbox').getByRole('option').first()).toContainText('120 Linnet');
    await mara.keyboard.press('Enter');
    await mara.getByLabel(/Power went/).fill('3 h ago');
    await mara.getByLabel('Came back').fill('1 h ago');
    await mara.getByRole('button', { name: /Chest freezer/ }).press('Enter');
    await mara.keyboard.press('Control+Enter');
    await expect(mara.getByRole('heading', { name: /^Call \d+$/ })).toBeVisible();
    await jonas.getByPlaceholder(/Search/).fill(NAME);
    await expect(jonas.getByRole('row', { name: new RegExp(NAME) })).toContainText('Mara');
  });

  await test.step('the phone check settles it, and its five minutes are a timer', async () => {
    await mara.keyboard.press('p');
    const check = mara.getByRole('region', { name: 'Phone check' });
    const answers = check.getByRole('group', { name: 'Answers' });
    await expect(answers).toBeVisible();
    let timers = 0;
    // Nothing dangerous, nothing wrong with the outlet: it runs again after the wait.
    for (let i = 0; i < 30 && (await answers.isVisible()); i++) {
      const asked = await check.locator('.ask').innerText();
      timers += await check.getByRole('timer').count();
      await answers.getByRole('button').first().click();
      await expect(check.locator('.ask', { hasText: asked })).toHaveCount(0);
    }
    expect(timers).toBeGreaterThan(0);
    await check.getByRole('button', { name: /Write it down/ }).click();
    await mara.getByRole('button', { name: 'End the check' }).click();
    await expect(mara.getByText('Running again').first()).toBeVisible();
    await expect(jonas.getByRole('row', { name: new RegExp(NAME) })).toHaveCount(0);
  });

  await test.step('pockets have formed', async () => {
    const pockets = mara.getByRole('combobox', { name: /pocket/i }).locator('option');
    expect(await pockets.count()).toBeGreaterThan(2);
  });

  await test.step('a plan is proposed, compared and published', async () => {
    await jonas.getByRole('link', { name: 'Routes' }).click();
    await jonas.keyboard.press('r');
    const publish = jonas.getByRole('button', { name: /Publish/ });
    await expect(publish).toBeVisible({ timeout: 20_000 });
    await publish.click();
    await expect(publish).toBeHidden({ timeout: 20_000 });
  });

  const callId = await test.step('the technician gets the offer live, and accepts it', async () => {
    const accept = theo.getByRole('button', { name: 'Accept this stop' });
    await expect(accept).toBeVisible({ timeout: 15_000 });
    const day = await ask<{ stops: { stop: { callId: string; state: string } }[] }>(
      theo,
      'GET',
      '/api/day',
    );
    await accept.tap();
    await expect(theo.getByRole('button', { name: /Start travel|Set off|Start/ })).toBeVisible();
    return day.stops[0]?.stop.callId ?? '';
  });

  await test.step('the customer, who said yes to texts, is told when the technician sets off', async () => {
    const { row } = await ask<{ row: { version: number; phone: string } }>(
      mara,
      'GET',
      `/api/calls/${callId}`,
    );
    await ask(mara, 'PATCH', `/api/calls/${callId}`, {
      commandId: crypto.randomUUID(),
      version: row.version,
      mayText: true,
    });
    await theo
      .getByRole('button', { name: /Start travel|Set off|Start/ })
      .first()
      .tap();
    await theo.getByRole('button', { name: 'Start without' }).tap();
    await expect
      .poll(async () => (await textsTaken(theo)).filter(({ to }) => to === row.phone).length, {
        timeout: 20_000,
      })
      .toBe(1);
  });

  const settledBefore = await visitsSettled(ines);
  await test.step('the technician arrives and finishes', async () => {
    await theo.getByRole('button', { name: 'I have arrived' }).tap();
    await theo.getByRole('button', { name: 'Finish the visit' }).tap();
    await theo.getByText('Cooling again').tap();
    await theo.getByRole('button', { name: /Finish: cooling again/i }).tap();
    await expect(theo.getByRole('button', { name: 'Accept this stop' })).toBeVisible();
  });

  await test.step('the backlog drain falls by the visit', async () => {
    await expect.poll(() => visitsSettled(ines), { timeout: 20_000 }).toBe(settledBefore + 1);
  });
});
