import { AxeBuilder } from '@axe-core/playwright';
import { expect, test, type Page } from '@playwright/test';
import { startOwnServer, type OwnServer } from './own-server';

/*
 * The cloth at hand in the built product: a remnant with an odd outline and a flaw is measured in, the pieces of an order are tried
 * on what there is, the lay that was found is released and reserves its cloth; and two orders are cut from one joint lay.
 */

let server: OwnServer;
test.beforeAll(async () => {
  server = await startOwnServer(process.env.WARPWISE_BUILD ?? 'build');
});
test.afterAll(() => server.stop());

async function signIn(page: Page, email: string, password: string): Promise<void> {
  await page.goto(`${server.origin}/sign-in`);
  await page.getByLabel(/mail/i).fill(email);
  await page
    .getByLabel(/password/i)
    .first()
    .fill(password);
  await page.keyboard.press('Enter');
  await page.waitForURL((url) => !url.pathname.startsWith('/sign-in'));
}

async function expectAccessible(page: Page): Promise<void> {
  const found = await new AxeBuilder({ page }).include('main').analyze();
  expect(found.violations.map(({ id, nodes }) => [id, nodes.map(({ target }) => target)])).toEqual([]);
}

async function release(page: Page): Promise<void> {
  await expect(page.getByTestId('server-verdict')).toContainText('Checked by the studio’s server');
  await page.getByRole('button', { name: 'Release for cutting' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Release', exact: true }).click();
  await expect(page.getByText('Released as revision 1').first()).toBeVisible();
}

test('what is at hand comes before new cloth', async ({ page }) => {
  await signIn(page, 'ama@hollin-lane.example', 'chalk before the shears');
  await page.goto(`${server.origin}/cloths`);
  await page.getByRole('link', { name: 'Coppice canvas' }).click();
  await page.getByRole('link', { name: 'Measure a length in' }).click();
  await page.getByLabel('Remnant').check();
  await page.getByLabel('Name', { exact: true }).fill('Half moon');
  await page.getByLabel('Length', { exact: true }).fill('60');
  await page.getByLabel('Usable width').fill('80');
  // Cutters see no prices, here neither.
  await expect(page.getByLabel('Price')).toHaveCount(0);
  await page.getByLabel(/^Corners/).fill('0; 0\n60; 80\n60; 0\n0; 80');
  await page.getByRole('button', { name: 'Measure it in' }).click();
  await expect(page.getByText('The edge crosses itself')).toBeVisible();
  await page.getByLabel(/^Corners/).fill('');
  const drawing = page.getByRole('img', { name: 'The remnant, 0 corners' });
  const box = (await drawing.boundingBox())!;
  for (const [x, y] of [
    [0.01, 0.99],
    [0.99, 0.99],
    [0.6, 0.02]
  ] as const)
    await page.mouse.click(box.x + x * box.width, box.y + y * box.height);
  await expect(page.getByRole('img', { name: 'The remnant, 3 corners' })).toBeVisible();
  await page.getByRole('button', { name: 'Measure it in' }).click();

  await expect(page.getByRole('heading', { name: 'Half moon' })).toBeVisible();
  await page.getByLabel('From the start, to its middle').fill('20');
  await page.getByLabel('From the selvedge, to its middle').fill('70');
  await page.getByLabel('Which').selectOption('far');
  await page.getByLabel('Its size along the warp').fill('3');
  await page.getByLabel('Its size across').fill('1');
  await page.getByRole('button', { name: 'Note this flaw' }).click();
  await expect(page.getByText('20 cm from the start, 10 cm from the near side')).toBeVisible();
  await expect(page.getByText('1 point', { exact: true })).toBeVisible();
  await expectAccessible(page);

  await page.goto(`${server.origin}/orders`);
  await page.getByRole('link', { name: /Ysolde Marr/ }).click();
  await page
    .getByRole('region', { name: 'Coppice canvas' })
    .getByRole('link', { name: 'Which cloth, how much' })
    .click();
  await expect(page.getByText(/m² of pieces at/)).toBeVisible();
  await page.getByRole('button', { name: 'Try the cloth at hand' }).click();
  await expect(page.getByRole('progressbar')).toBeVisible();
  const table = page.getByRole('table', { name: 'Cloth at hand, the best first' });
  await expect(table.getByRole('row')).toHaveCount(3, { timeout: 25_000 });
  await expect(table.getByRole('row').nth(1)).toContainText('Canvas end');
  await expect(table.getByRole('row').nth(1)).toContainText('It fits');
  await expect(table.getByRole('row').nth(2)).toContainText('Half moon');
  await expect(table.getByRole('row').nth(2)).not.toContainText('It fits');
  await expect(page.getByText(/[£€$]\d/)).toHaveCount(0);
  await expectAccessible(page);
  await page.getByRole('button', { name: 'Make this lay on Canvas end' }).click();

  await expect(page.getByTestId('slip')).toContainText('Left of Canvas end');
  await release(page);
  await page.goto(`${server.origin}/cloths`);
  await page.getByRole('link', { name: 'Coppice canvas' }).click();
  await expect(page.getByRole('row', { name: /Canvas end/ })).toContainText('Reserved, order 3');
});

test('two orders are cut from one joint lay, and share its cost', async ({ page }) => {
  await signIn(page, 'runa@hollin-lane.example', 'loden under lamplight');
  // A second order of the lawn: a blouse of it, the collar of it too.
  await page.goto(`${server.origin}/orders/new`);
  const style = await page
    .locator('select[name=style] option', { hasText: 'Marta blouse' })
    .getAttribute('value');
  const post = (path: string, form: Record<string, string>) =>
    page.request.post(server.origin + path, {
      form,
      headers: { origin: server.origin, accept: 'text/html' }
    });
  await post('/orders/new', { clientName: 'Ottoline Reed', stage: 'enquiry' });
  await page.goto(`${server.origin}/orders`);
  await page.getByRole('link', { name: /Ottoline Reed/ }).click();
  await page.waitForURL(/\/orders\/[0-9a-f-]{36}/);
  const order = new URL(page.url()).pathname;
  await page.goto(`${server.origin}/cloths`);
  const lawn = (await page.getByRole('link', { name: 'Harebell lawn' }).getAttribute('href'))!;
  const cloth = lawn.split('/').at(-1)!;
  await post(`${order}?/addLine`, {
    what: 'new line',
    version: '1',
    style: style!,
    label: '36',
    quantity: '1',
    'cloth.main': cloth,
    'cloth.contrast': cloth
  });

  await page.goto(`${server.origin}${lawn}/joint`);
  for (const box of await page.getByRole('checkbox').all()) await box.check();
  await expect(page.getByRole('checkbox', { checked: true })).toHaveCount(2);
  await expectAccessible(page);
  await page.getByRole('button', { name: 'Make the joint lay' }).click();
  await expect(page.getByTestId('cloth').locator('canvas').first()).toBeAttached();
  await expect(page.getByText(/No\. 4 Marta blouse/).first()).toBeAttached();
  await expect(page.getByText(/No\. \d+ Marta blouse 36/).first()).toBeAttached();

  await page.route('**/api/lays/*/settle', (route) => {
    const request = route.request();
    return request.method() === 'POST'
      ? route.continue({ postData: { ...(request.postDataJSON() as object), budgetSeconds: 2 } })
      : route.continue();
  });
  await page.getByRole('button', { name: 'Settle the pieces' }).last().click();
  await page.getByRole('dialog').getByRole('button', { name: 'Settle', exact: true }).click();
  const card = page.getByTestId('settle-card');
  await expect(card).toHaveAttribute('data-state', 'done', { timeout: 30_000 });
  await card.getByRole('button', { name: 'Take it' }).click();
  await expect(page.getByTestId('save-state')).toHaveAttribute('data-state', 'saved');
  await release(page);

  await page.goto(`${server.origin}${order}`);
  await page.getByRole('link', { name: 'shares' }).click();
  const shares = page.getByRole('table', { name: 'Shares of the orders' });
  await expect(shares.getByRole('row')).toHaveCount(3);
  const texts = await shares.getByRole('row').allInnerTexts();
  const percents = texts.flatMap((text) => /([\d.]+) %/.exec(text)?.[1] ?? []).map(Number);
  expect(percents.reduce((sum, one) => sum + one, 0)).toBeCloseTo(100, 0);
  expect(texts.slice(1).every((text) => /€[\d.]+/.test(text))).toBe(true);
});
