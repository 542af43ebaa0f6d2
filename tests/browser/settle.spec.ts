import { AxeBuilder } from '@axe-core/playwright';
import { expect, test, type Browser, type Page } from '@playwright/test';
import { startOwnServer, type OwnServer } from './own-server';

/*
 * Settle in the built product: asked for at the Lay table, watched, looked at, taken, undone, released; and left alone when
 * the lay has changed meanwhile. The sheet offers a minute at least; here the request is shortened on its way.
 */

let server: OwnServer;
test.beforeAll(async () => {
  server = await startOwnServer(process.env.WARPWISE_BUILD ?? 'build');
});
test.afterAll(() => server.stop());

const owner = { email: 'runa@hollin-lane.example', password: 'loden under lamplight' };
const cutter = { email: 'ama@hollin-lane.example', password: 'chalk before the shears' };

async function openLay(browser: Browser, name: string, budgetSeconds: number, who = owner): Promise<Page> {
  const context = await browser.newContext();
  const page = await context.newPage();
  await page.goto(`${server.origin}/sign-in`);
  await page.getByLabel(/mail/i).fill(who.email);
  await page
    .getByLabel(/password/i)
    .first()
    .fill(who.password);
  await page.keyboard.press('Enter');
  await page.waitForURL((url) => !url.pathname.startsWith('/sign-in'));
  await page.goto(`${server.origin}/lays`);
  await page.getByRole('link', { name, exact: true }).first().click();
  await expect(page.getByTestId('cloth').locator('canvas').first()).toBeAttached();
  await expect(page.getByTestId('server-verdict')).toContainText('Checked by the studio’s server');
  await page.route('**/api/lays/*/settle', (route) => {
    const request = route.request();
    return request.method() === 'POST'
      ? route.continue({ postData: { ...(request.postDataJSON() as object), budgetSeconds } })
      : route.continue();
  });
  return page;
}

const card = (page: Page) => page.getByTestId('settle-card');
const length = (page: Page) => page.getByTestId('length-used');

test('an order’s pieces are settled, watched, taken in one step, and released', async ({ browser }) => {
  const page = await openLay(browser, 'First lay', 8);
  const before = await length(page).innerText();
  const placed = await page.getByTestId('pieces-placed').innerText();
  await page.getByTestId('cloth').focus();
  await page.keyboard.press('a');
  const sheet = page.getByRole('dialog', { name: 'Settle the pieces' });
  await expect(sheet.getByLabel('A minute')).toBeChecked();
  await sheet.getByLabel('From scratch').check();
  await sheet.getByRole('button', { name: 'Settle', exact: true }).click();

  await expect(card(page)).toBeVisible();
  await expect(page.getByTestId('settle-length')).toBeVisible();
  const bar = card(page).getByRole('progressbar');
  const early = Number(await bar.getAttribute('aria-valuenow'));
  await expect.poll(async () => Number(await bar.getAttribute('aria-valuenow'))).toBeGreaterThan(early + 10);
  // The table stays free, and the lay is not touched: a reload finds both the run and the lay.
  await page.reload();
  await expect(card(page)).toHaveAttribute('data-state', 'running');
  await expect(length(page)).toHaveText(before);
  await expect(card(page)).toHaveAttribute('data-state', 'done', { timeout: 30_000 });
  await expect(page.getByTestId('said')).toContainText('Settled:');
  await expect(length(page)).toHaveText(before);
  await expect(page.getByTestId('settle-gain')).toContainText(/[\d.]+ cm( and €[\d.]+)? less than before/);
  await expect(page.getByTestId('settle-gain')).toContainText('least length');
  const settled = await page.getByTestId('settle-length').innerText();
  const found = await new AxeBuilder({ page }).include('[data-testid=settle-card]').analyze();
  expect(found.violations.map(({ id, nodes }) => [id, nodes.map(({ target }) => target)])).toEqual([]);

  await card(page).getByRole('button', { name: 'Look at it', exact: true }).click();
  const look = page.getByRole('dialog', { name: 'The settled lay' });
  await expect(look.getByRole('img', { name: /The lay before/ })).toBeVisible();
  await page.keyboard.press('Escape');
  await card(page).getByRole('button', { name: 'Take it' }).click();
  await expect(card(page)).toBeHidden();
  await expect(page.getByTestId('cloth')).toBeFocused();
  await expect(length(page)).toHaveText(settled);
  await expect(page.getByTestId('pieces-placed')).toHaveText(placed);
  await page.getByTestId('cloth').focus();
  await page.keyboard.press('Control+z');
  await expect(length(page)).toHaveText(before);
  await page.keyboard.press('Control+Shift+z');
  await expect(length(page)).toHaveText(settled);

  await expect(page.getByTestId('save-state')).toHaveAttribute('data-state', 'saved');
  await expect(page.getByTestId('server-verdict')).toContainText('Checked by the studio’s server at');
  await page.reload();
  await expect(length(page)).toHaveText(settled);
  await expect(card(page)).toBeHidden();
  await page.getByRole('button', { name: 'Release for cutting' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Release', exact: true }).click();
  await expect(page.getByText('Released as revision 1').first()).toBeVisible();
  await page.context().close();
});

test('a lay that changed meanwhile keeps the person’s work; the result becomes a lay of its own', async ({
  browser
}) => {
  const page = await openLay(browser, 'In a hurry', 3, cutter);
  await page.getByRole('button', { name: 'Settle the pieces' }).last().click();
  await page.getByRole('dialog').getByRole('button', { name: 'Settle', exact: true }).click();
  await expect(card(page)).toBeVisible();
  await page.getByTestId('cloth').focus();
  await page.keyboard.press(']');
  await page.keyboard.press('Shift+ArrowRight');
  const field = page.getByTestId('piece-card').getByLabel('From zero end');
  const place = await field.inputValue();
  await expect(card(page)).toHaveAttribute('data-state', 'done', { timeout: 30_000 });
  await expect(card(page)).toContainText('The lay has changed since this began');
  await expect(card(page)).not.toContainText(/[£€$]/);
  await expect(card(page).getByRole('button', { name: 'Take it' })).toBeHidden();
  await expect(field).toHaveValue(place);

  // Replacing is a second, knowing step, and undo brings the person's work back.
  await card(page).getByRole('button', { name: 'Replace what is on the table' }).click();
  await card(page).getByRole('button', { name: 'Not yet' }).click();
  await card(page).getByRole('button', { name: 'Keep as a lay of its own' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Keep it' }).click();
  await expect(page.getByTestId('said')).toContainText('Kept as a lay of its own');
  await expect(card(page)).toBeHidden();
  await expect(field).toHaveValue(place);
  await page.goto(`${server.origin}/lays`);
  await page.getByRole('link', { name: 'In a hurry, settled' }).click();
  await expect(page.getByTestId('pieces-placed')).toHaveText(/^(\d+) of \1$/);
  await expect(page.getByRole('button', { name: 'Release for cutting' })).toBeEnabled();
  await page.context().close();
});

test('stop keeps the best so far, and leaving it leaves the lay', async ({ browser }) => {
  const page = await openLay(browser, 'In a hurry', 60);
  const before = await length(page).innerText();
  await page.getByRole('button', { name: 'Settle the pieces' }).last().click();
  await page.getByRole('dialog').getByRole('button', { name: 'Settle', exact: true }).click();
  await expect(page.getByTestId('settle-length')).toBeVisible();
  await card(page).getByRole('button', { name: 'Stop', exact: true }).click();
  await expect(card(page)).toHaveAttribute('data-state', 'stopped');
  await card(page).getByRole('button', { name: 'Leave it' }).click();
  await expect(card(page)).toBeHidden();
  await expect(length(page)).toHaveText(before);
  await page.reload();
  await expect(page.getByTestId('cloth').locator('canvas').first()).toBeAttached();
  await expect(card(page)).toBeHidden();
  await page.context().close();
});

test('what can’t be settled is said before anything runs, with piece and measure', async ({ browser }) => {
  const page = await openLay(browser, 'In a hurry', 60);
  await page.getByTestId('cloth').focus();
  // Two pieces in one place, both locked.
  await page.keyboard.press(']');
  const x = page.getByTestId('piece-card').getByLabel('From zero end');
  const y = page.getByTestId('piece-card').getByLabel('From near selvedge');
  const [atX, atY] = [await x.inputValue(), await y.inputValue()];
  await page.keyboard.press('l');
  await page.keyboard.press(']');
  await x.fill(atX);
  await page.keyboard.press('Enter');
  await y.fill(atY);
  await page.keyboard.press('Enter');
  await page.getByTestId('cloth').focus();
  await page.keyboard.press('l');
  await page.keyboard.press('a');
  await page.getByRole('dialog').getByRole('button', { name: 'Settle', exact: true }).click();
  await expect(page.getByRole('alert')).toContainText(/locked [\d.]+ mm into each other/);
  await expect(card(page)).toBeHidden();
  await page.context().close();
});
