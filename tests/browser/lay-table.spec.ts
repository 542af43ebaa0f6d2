import { AxeBuilder } from '@axe-core/playwright';
import { expect, test, type Browser, type Page } from '@playwright/test';
import { startOwnServer, type OwnServer } from './own-server';

let server: OwnServer;
test.beforeAll(async () => {
  server = await startOwnServer(process.env.WARPWISE_BUILD ?? 'build');
});
test.afterAll(() => server.stop());

const owner = { email: 'runa@hollin-lane.example', password: 'loden under lamplight' };
const cutter = { email: 'ama@hollin-lane.example', password: 'chalk before the shears' };

async function signIn(browser: Browser, who = owner): Promise<Page> {
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
  return page;
}

/** Opens the lay of this name from the list. */
async function openLay(page: Page, name: string): Promise<void> {
  await page.goto(`${server.origin}/lays`);
  await page.getByRole('link', { name, exact: true }).first().click();
  await expect(page.getByTestId('cloth').locator('canvas').first()).toBeAttached();
  await expect(page.getByTestId('server-verdict')).toContainText('Checked by the studio’s server');
}

const placed = (page: Page) => page.getByTestId('pieces-placed');
const saved = (page: Page) => page.getByTestId('save-state');

async function places(page: Page): Promise<number> {
  return Number((await placed(page).innerText()).split(' ')[0]);
}

test('pieces are pulled off the Rail onto the cloth and back, by pointer and by key, and it is saved', async ({
  browser
}) => {
  const page = await signIn(browser);
  await openLay(page, 'In a hurry');
  const before = await places(page);
  const hanger = page.locator('[data-hanger]').first();
  const from = (await hanger.boundingBox())!;
  const cloth = (await page.getByTestId('cloth').boundingBox())!;

  await page.mouse.move(from.x + from.width / 2, from.y + 60);
  await page.mouse.down();
  await page.mouse.move(cloth.x + cloth.width * 0.9, cloth.y + cloth.height * 0.5, { steps: 8 });
  await expect(page.getByRole('heading', { name: 'In hand' })).toBeVisible();
  await page.mouse.up();
  await expect(placed(page)).toHaveText(new RegExp(`^${before + 1} of`));
  await expect(page.getByTestId('said')).toContainText('placed on the cloth');

  // The same piece, picked by being placed, moves by keys and goes back to the Rail.
  const fields = page.getByTestId('piece-card').getByLabel('From zero end');
  const was = Number(await fields.inputValue());
  await page.keyboard.press('Shift+ArrowRight');
  await expect(fields).toHaveValue(String(Math.round((was + 1) * 1000) / 1000));
  await expect(page.getByTestId('said')).toContainText('10 mm towards the end');
  await page.keyboard.press('Delete');
  await expect(placed(page)).toHaveText(new RegExp(`^${before} of`));
  await page.keyboard.press('Control+z');
  await expect(placed(page)).toHaveText(new RegExp(`^${before + 1} of`));
  await expect(saved(page)).toHaveAttribute('data-state', 'saved');
  await expect(page.getByTestId('server-verdict')).toContainText('Checked by the studio’s server at');

  await page.reload();
  await expect(placed(page)).toHaveText(new RegExp(`^${before + 1} of`));
  await page.locator('[data-hanger]').first().focus();
  await page.keyboard.press('Enter');
  await expect(placed(page)).toHaveText(new RegExp(`^${before + 2} of`));
  await expect(page.getByTestId('rail')).toContainText('Every piece is on the cloth');
  await expect(saved(page)).toHaveAttribute('data-state', 'saved');
  await page.context().close();
});

test('an overlap is found with its measure, shown when chosen, and mended by typing an exact place', async ({
  browser
}) => {
  const page = await signIn(browser);
  await openLay(page, 'In a hurry');
  const finding = page
    .getByTestId('slip')
    .getByRole('button', { name: /overlap by [\d.]+ mm/ })
    .first();
  const words = await finding.innerText();
  await expect(page.getByRole('button', { name: 'Release for cutting' })).toBeDisabled();
  await finding.click();
  await expect(page.getByTestId('piece-card')).toContainText('2 pieces picked');
  await page.keyboard.press(']');
  await page.keyboard.press('[');
  await finding.click();

  // One of the two goes far beyond everything else: the overlap is gone, from the browser's mouth and the server's.
  const list = page.getByTestId('piece-list').locator('button[aria-pressed=true]').first();
  await page.keyboard.press('i');
  await list.click();
  await page.getByTestId('piece-list').getByRole('button', { name: 'Close' }).click();
  await page.getByTestId('piece-card').getByLabel('From zero end').fill('600 cm');
  await page.keyboard.press('Enter');
  await expect(page.getByTestId('said')).toContainText('6000 mm from the zero end');
  await expect(page.getByTestId('server-verdict')).toContainText('Checked by the studio’s server at');
  await expect(page.getByTestId('slip')).not.toContainText(words.replace(/^✕\s*/, '').replace('Stops: ', ''));
  await page.getByTestId('cloth').focus();
  await page.keyboard.press('Control+z');
  await expect(page.getByTestId('said')).toContainText('Undone');
  await expect(saved(page)).toHaveAttribute('data-state', 'saved');
  await page.context().close();
});

test('moves made offline are kept, even over a closed tab, and saved when the connection is back', async ({
  browser
}) => {
  const page = await signIn(browser);
  await openLay(page, 'First lay');
  await page.getByTestId('cloth').focus();
  await page.keyboard.press(']');
  const field = page.getByTestId('piece-card').getByLabel('From near selvedge');
  const was = await field.inputValue();
  // The server can't be reached for saving; the page itself can.
  await page.context().route('**/api/lays/**', (route) => route.abort());
  await page.keyboard.press('ArrowUp');
  const now = await field.inputValue();
  expect(now).not.toBe(was);
  await expect(saved(page)).toHaveAttribute('data-state', 'offline');
  await page.reload();
  await expect(page.getByTestId('said')).toContainText('Moves of your last visit');
  await page.context().unroute('**/api/lays/**');
  await page.evaluate(() => window.dispatchEvent(new Event('online')));
  await expect(saved(page)).toHaveAttribute('data-state', 'saved');
  await page.reload();
  await page.getByTestId('cloth').focus();
  await page.keyboard.press(']');
  await expect(field).toHaveValue(now);
  await page.keyboard.press('ArrowDown');
  await expect(field).toHaveValue(was);
  await expect(saved(page)).toHaveAttribute('data-state', 'saved');
  await page.context().close();
});

test('two people on one lay: the second sees both and puts them together', async ({ browser }) => {
  const [first, second] = [await signIn(browser), await signIn(browser, cutter)];
  await openLay(first, 'First lay');
  await openLay(second, 'First lay');
  await first.getByTestId('cloth').focus();
  await first.keyboard.press(']');
  await first.keyboard.press('Shift+ArrowRight');
  await expect(saved(first)).toHaveAttribute('data-state', 'waiting');
  await expect(saved(first)).toHaveAttribute('data-state', 'saved');
  await second.getByTestId('cloth').focus();
  await second.keyboard.press('[');
  await second.keyboard.press('Shift+ArrowRight');
  const dialog = second.getByRole('dialog', { name: 'This lay was changed elsewhere' });
  await expect(dialog).toBeVisible();
  await expect(dialog).toContainText('they can stand together');
  await dialog.getByRole('button', { name: 'Put both together' }).click();
  await expect(saved(second)).toHaveAttribute('data-state', 'saved');
  const far = await second.getByTestId('piece-card').getByLabel('From zero end').inputValue();
  await first.reload();
  await first.getByTestId('cloth').focus();
  await first.keyboard.press('[');
  await expect(first.getByTestId('piece-card').getByLabel('From zero end')).toHaveValue(far);
  await first.context().close();
  await second.context().close();
});

test('revisions are kept, compared and restored', async ({ browser }) => {
  const page = await signIn(browser);
  await openLay(page, 'First lay');
  const keep = async (name: string): Promise<void> => {
    await page.getByRole('button', { name: 'Keep a revision' }).click();
    await page.getByRole('dialog').getByLabel('Name').fill(name);
    await page.getByRole('button', { name: 'Keep it' }).click();
    await expect(page.getByTestId('said')).toContainText(`, ${name}.`);
  };
  await keep('before');
  await page.getByTestId('cloth').focus();
  await page.keyboard.press(']');
  const field = page.getByTestId('piece-card').getByLabel('From zero end');
  const was = await field.inputValue();
  await page.keyboard.press('Shift+ArrowRight');
  await expect(field).not.toHaveValue(was);
  await keep('after');
  await page.getByRole('button', { name: 'Revisions' }).click();
  await page.getByLabel(/Compare revision \d+, before/).check();
  await page.getByLabel(/Compare revision \d+, after/).check();
  await page.getByRole('link', { name: 'Compare' }).click();
  await expect(page.getByTestId('comparison')).toContainText('Length used');
  await expect(page.getByText('1 piece lies differently')).toBeVisible();
  await expect(page.getByRole('img', { name: /before/ })).toBeVisible();
  await page.goBack();
  await page.getByRole('button', { name: 'Revisions' }).click();
  await page
    .getByRole('listitem')
    .filter({ hasText: 'before' })
    .getByRole('button', { name: 'Restore' })
    .click();
  await expect(page.getByTestId('said')).toContainText('is on the table again');
  await page.getByTestId('cloth').focus();
  await page.keyboard.press(']');
  await expect(field).toHaveValue(was);
  await page.context().close();
});

test('the table is reached without sight and without price', async ({ browser }) => {
  const page = await signIn(browser, cutter);
  await openLay(page, 'First lay');
  await expect(page.getByTestId('slip')).toContainText('Cloth to buy');
  await expect(page.getByTestId('slip')).not.toContainText('Cost');
  const found = await new AxeBuilder({ page }).analyze();
  expect(found.violations.map(({ id, nodes }) => [id, nodes.map(({ target }) => target)])).toEqual([]);

  // The list of pieces says the same as the cloth, whether it is shown or not.
  const count = await places(page);
  await expect(page.getByTestId('piece-list').locator('button[aria-pressed]')).toHaveCount(count);
  await page.getByTestId('cloth').focus();
  await page.keyboard.press('?');
  await expect(page.getByRole('dialog', { name: 'What the Lay table can do' })).toContainText('Snug left');
  await page.keyboard.press('Escape');
  await page.setViewportSize({ width: 390, height: 844 });
  await expect(page.getByTestId('cloth')).toBeVisible();
  expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(390);
  await page.context().close();
});

test('a released lay is read only', async ({ browser }) => {
  const page = await signIn(browser);
  await openLay(page, 'As cut');
  await expect(page.getByRole('button', { name: 'Reopen to change it' })).toBeVisible();
  await page.getByTestId('cloth').focus();
  await page.keyboard.press(']');
  await expect(page.getByTestId('piece-card').getByLabel('From zero end')).toBeDisabled();
  await page.keyboard.press('ArrowRight');
  await expect(page.getByTestId('said')).toContainText('released');
  await page.context().close();
});
