import { AxeBuilder } from '@axe-core/playwright';
import { expect, test, type Browser, type Page } from '@playwright/test';
import { startOwnServer, type OwnServer } from './own-server';

let server: OwnServer;
test.beforeAll(async () => {
  server = await startOwnServer(process.env.WARPWISE_BUILD ?? 'build');
});
test.afterAll(() => server.stop());

const owner = { email: 'runa@hollin-lane.example', password: 'loden under lamplight' };
const maker = { email: 'teodor@hollin-lane.example', password: 'seven darts by noon' };

async function signIn(browser: Browser, who: typeof owner): Promise<Page> {
  const page = await (await browser.newContext()).newPage();
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

async function openDesk(page: Page, style: RegExp): Promise<void> {
  await page.goto(`${server.origin}/styles`);
  await page.getByRole('link', { name: style }).first().click();
  await page.getByRole('link', { name: 'Change panels on the desk' }).click();
  await expect(page.locator('[data-point]').first()).toBeAttached();
}

const saved = (page: Page) => page.getByTestId('save-state');
const along = (page: Page, point: number) => page.getByRole('textbox', { name: `Point ${point} along, cm` });

test('a point is moved by pointer, key and number, undone, a seam trued, and a version saved', async ({
  browser
}) => {
  const page = await signIn(browser, maker);
  await openDesk(page, /waistcoat/i);
  await expect(saved(page)).toHaveText(/Unchanged/);
  const before = await along(page, 3).inputValue();

  const point = (await page.locator('[data-point="side/0"]').boundingBox())!;
  const [x, y] = [point.x + point.width / 2, point.y + point.height / 2];
  await page.mouse.move(x, y);
  await page.mouse.down();
  await page.mouse.move(x + 31, y + 23, { steps: 6 });
  await page.mouse.up();
  await expect(page.getByTestId('said')).toHaveText('Moved a corner of side.');
  await expect(along(page, 3)).not.toHaveValue(before);
  await page.keyboard.press('Control+z');
  await expect(along(page, 3)).toHaveValue(before);

  await page.getByTestId('desk-drawing').focus();
  await page.keyboard.press('Shift+ArrowRight');
  await expect(along(page, 3)).toHaveValue(String(Number(before) + 1));
  await along(page, 3).fill('200 mm');
  await along(page, 3).press('Enter');
  await expect(along(page, 3)).toHaveValue('20');
  await along(page, 3).fill('-900');
  await along(page, 3).press('Enter');
  await expect(page.getByTestId('said')).toContainText('✕');
  await expect(saved(page)).toHaveAttribute('data-state', 'saved');

  await page.getByRole('button', { name: 'Seams', exact: true }).click();
  const seams = page.getByTestId('seam-walk');
  await seams.getByLabel('This panel’s edge').selectOption('side');
  await seams.getByLabel('is sewn to panel').selectOption('back');
  await seams.getByLabel('its edge').selectOption('side');
  await seams.getByLabel('Both run the same way').check();
  await expect(page.getByTestId('seam-difference')).toContainText(/too (long|short)/);
  await seams.getByLabel(/en Back there$/).check();
  await seams.getByRole('button', { name: 'True the seam' }).click();
  await expect(page.getByTestId('seam-difference')).toHaveText('✓ They agree');
  await expect(saved(page)).toHaveAttribute('data-state', 'saved');
  const scan = await new AxeBuilder({ page }).analyze();
  expect(scan.violations.map(({ id, nodes }) => `${id}: ${nodes[0]!.html}`)).toEqual([]);

  await page.getByRole('button', { name: /^Save as version/ }).click();
  await expect(page.getByTestId('hand-edits')).toContainText('Front: moved a corner of side, 2 times');
  await page.getByRole('button', { name: 'Save the version' }).click();
  await page.waitForURL(/\/styles\/[^/]+\?version=2/);
  await expect(page.getByText(/By hand: Front: moved a corner of side/).first()).toBeVisible();
});

test('two people at one desk: the second is told, and keeps or takes; offline changes wait in the browser', async ({
  browser
}) => {
  const [one, two] = [await signIn(browser, maker), await signIn(browser, owner)];
  await openDesk(one, /skirt/i);
  await openDesk(two, /skirt/i);
  const first = await along(one, 2).inputValue();
  const plus = (more: number) => String(Math.round((Number(first) + more) * 1000) / 1000);
  const [mine, theirs] = [plus(0.5), plus(0.7)];
  const set = async (page: Page, value: string) => {
    await along(page, 2).fill(value);
    await along(page, 2).press('Enter');
  };
  await set(one, mine);
  await expect(saved(one)).toHaveText(/Saved/);
  await set(two, theirs);
  await expect(two.getByRole('dialog', { name: 'Somebody else changed these panels' })).toBeVisible();
  await two.getByRole('button', { name: 'Take theirs' }).click();
  await expect(along(two, 2)).toHaveValue(mine);
  await two.getByRole('button', { name: 'Undo' }).click();
  await expect(along(two, 2)).toHaveValue(theirs);
  await expect(saved(two)).toHaveAttribute('data-state', 'saved');

  await two.context().setOffline(true);
  await set(two, first);
  await expect(saved(two)).toHaveText(/Offline: kept in this browser/);
  await two.context().setOffline(false);
  await expect(saved(two)).toHaveAttribute('data-state', 'saved');
});
