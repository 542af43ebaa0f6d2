import { readFileSync } from 'node:fs';
import { expect, test, type Page } from '@playwright/test';
import { boundingBox } from '$lib/geometry/polygon';
import { placeOutline } from '$lib/geometry/placement';
import type { LayDocument } from '$lib/lay/document';
import { panelKey, type PanelBook } from '$lib/lay/panel-book';
import { startFakeMail, type FakeMail } from '../fakes/fake-mail';
import { readGuide } from '../reference/read-guide';
import { startOwnServer, type OwnServer } from './own-server';

/*
 * The main job, once through, as a new studio walks it: sign up, cloth, a style from a file, an order, the Lay table, a
 * deliberate overlap found with its measure, mended, saved, released, the guide downloaded and measured.
 */

let mail: FakeMail;
let server: OwnServer;
test.beforeAll(async () => {
  mail = await startFakeMail();
  server = await startOwnServer(process.env.WARPWISE_BUILD ?? 'build', {
    WARPWISE_DEMO: 'false',
    WARPWISE_SMTP_URL: mail.smtpUrl,
    WARPWISE_SMTP_PLAIN: 'true'
  });
});
test.afterAll(async () => {
  server.stop();
  await mail.close();
});

/** The first link in the newest mail to `address`. */
async function linkInMail(address: string): Promise<string> {
  await expect.poll(() => mail.messages.some(({ recipients }) => recipients.includes(address))).toBe(true);
  const message = mail.messages.filter(({ recipients }) => recipients.includes(address)).at(-1)!;
  const link = /http:\/\/localhost\S+/.exec(message.text)?.[0];
  expect(link, message.text).toBeTruthy();
  return link!;
}

async function signUp(page: Page): Promise<void> {
  await page.goto(`${server.origin}/sign-up`);
  await page.getByLabel('Name of the studio').fill('Quay Street Workroom');
  await page.getByLabel('Your name').fill('Maren Holt');
  await page.getByLabel('E-mail address').fill('maren@quay-street.example');
  await page.locator('main form').getByRole('button').click();
  await expect(page.getByText(/look in your mail/i).first()).toBeVisible();
  await page.goto(await linkInMail('maren@quay-street.example'));
  await page.locator('input[type=password]').first().fill('bobbin under the stairs');
  await page.getByRole('button', { name: 'Open the studio' }).click();
  await page.waitForURL(/\/orders/);
}

async function addCloth(page: Page): Promise<void> {
  await page.goto(`${server.origin}/cloths/new`);
  await page.getByLabel('Name', { exact: true }).fill('Slate wool');
  await page.getByLabel('Full width').fill('59 in');
  await page.getByLabel('Usable width').fill('57 1/2"');
  await page.getByLabel('Price', { exact: true }).fill('24.50');
  await page
    .locator('main form')
    .getByRole('button', { name: /cloth|save|add/i })
    .first()
    .click();
  await page.waitForURL(/\/cloths\/[0-9a-f-]{36}/);
}

async function addStyle(page: Page): Promise<void> {
  await page.goto(`${server.origin}/styles/new`);
  await page.setInputFiles('input[type=file]', 'static/sample.svg');
  await page.getByRole('button', { name: 'Read these files' }).click();
  await page.waitForURL(/\/styles\/imports\//);
  // Nothing is chosen for the person: saving now is refused, with the place.
  await page.getByRole('button', { name: /Save 4 panels/ }).click();
  await expect(page.getByText(/sew line or/i).first()).toBeVisible();
  for (const radio of await page.getByRole('radio', { name: /^The sew line/ }).all()) await radio.check();
  await page.getByRole('button', { name: /Save 4 panels/ }).click();
  await page.waitForURL(/\/styles\/[0-9a-f-]{36}/);
}

async function openOrder(page: Page): Promise<void> {
  await page.goto(`${server.origin}/orders/new`);
  await page.getByLabel('Client').fill('Ödön Łucja');
  await page.getByLabel('Style', { exact: true }).selectOption({ label: 'Fitted bodice' });
  await page.getByLabel('Size or wearer').fill('38');
  await page.getByRole('button', { name: 'Open this order' }).click();
  await page.waitForURL(/\/orders\/[0-9a-f-]{36}/);
}

/** Gives the line its cloth and makes the lay; ends on the Lay table. */
async function makeLay(page: Page): Promise<string> {
  await page.locator('select[name="cloth.main"]').selectOption({ label: 'Slate wool' });
  await page.getByRole('button', { name: 'Save this line' }).click();
  await page.getByRole('button', { name: 'Make the lay' }).click();
  await page.waitForURL(/\/lays\/[0-9a-f-]{36}$/);
  await expect(page.getByTestId('cloth').locator('canvas').first()).toBeAttached();
  return page.url().split('/').at(-1)!;
}

/** Drags the first hanger of the Rail onto the cloth. */
async function dragOntoCloth(page: Page): Promise<void> {
  const placed = Number((await page.getByTestId('pieces-placed').innerText()).split(' ')[0]);
  const hanger = (await page.locator('[data-hanger]').first().boundingBox())!;
  const cloth = (await page.getByTestId('cloth').boundingBox())!;
  await page.mouse.move(hanger.x + hanger.width / 2, hanger.y + hanger.height / 2);
  await page.mouse.down();
  await page.mouse.move(cloth.x + cloth.width * 0.5, cloth.y + cloth.height * 0.5, { steps: 6 });
  await page.mouse.up();
  await expect(page.getByTestId('pieces-placed')).toHaveText(new RegExp(`^${placed + 1} of`));
}

/** Types the exact place of the piece that is picked. */
async function putAt(page: Page, fromZero: string, fromSelvedge: string): Promise<void> {
  const card = page.getByTestId('piece-card');
  await card.getByLabel('From zero end').fill(fromZero);
  await page.keyboard.press('Enter');
  await card.getByLabel('From near selvedge').fill(fromSelvedge);
  await page.keyboard.press('Enter');
}

const places: [string, string][] = [
  ['0', '0'],
  ['0', '40 cm'],
  ['0', '80 cm'],
  ['45 cm', '0'],
  ['45 cm', '40 cm'],
  ['45 cm', '80 cm']
];

/** The guide's cut lines beside the outlines of the revision: each outline is there, in size, within 0.1 mm. */
async function measureGuide(page: Page, layId: string, file: string): Promise<void> {
  const answer = await page.request.get(`${server.origin}/api/lays/${layId}/revisions/1`);
  const { document, panels } = (await answer.json()) as { document: LayDocument; panels: PanelBook };
  const drawn = (await readGuide(new Uint8Array(readFileSync(file))))
    .flatMap(({ paths }) => paths)
    .filter(
      ({ painted, width, dashed, points }) =>
        painted === 'stroked' && !dashed && width > 0.49 && points.length > 20
    )
    .map(({ points }) => boundingBox(points));
  expect(document.placements).toHaveLength(6);
  for (const placement of document.placements) {
    const garment = document.garments.find(({ id }) => id === placement.garment)!;
    const { shape } = panels[panelKey(garment.styleVersion, placement.panel)]!;
    const box = boundingBox(placeOutline(shape.cut, placement));
    const found = drawn.some(
      (one) =>
        Math.abs(one.maxX - one.minX - (box.maxX - box.minX)) < 0.1 &&
        Math.abs(one.maxY - one.minY - (box.maxY - box.minY)) < 0.1
    );
    expect(found, `${shape.name} at true size in the guide`).toBe(true);
  }
}

test('the main job, from sign-up to a measured guide', async ({ page }, info) => {
  await signUp(page);
  await addCloth(page);
  await addStyle(page);
  await openOrder(page);
  const layId = await makeLay(page);

  for (const [fromZero, fromSelvedge] of places) {
    await dragOntoCloth(page);
    await putAt(page, fromZero, fromSelvedge);
  }
  await expect(page.getByTestId('rail')).toContainText('Every piece is on the cloth');

  // A deliberate overlap: found with its measure, and in the way of a release.
  await putAt(page, '45 cm', '45 cm');
  const overlap = page
    .getByTestId('slip')
    .getByText(/overlap by [\d.]+ mm/)
    .first();
  await expect(overlap).toBeVisible();
  await expect(page.getByTestId('server-verdict')).toContainText('Checked by the studio’s server at');
  await expect(page.getByRole('button', { name: 'Release for cutting' })).toBeDisabled();

  await putAt(page, '45 cm', '80 cm');
  await expect(overlap).toBeHidden();
  await expect(page.getByTestId('save-state')).toHaveAttribute('data-state', 'saved');
  await expect(page.getByTestId('server-verdict')).toContainText('Checked by the studio’s server at');
  await page.getByRole('button', { name: 'Release for cutting' }).click();
  await page.getByRole('button', { name: 'Release', exact: true }).click();
  await page.getByRole('link', { name: 'Cutting guides' }).click();

  await page.getByRole('radio', { name: /^The whole cloth/ }).check();
  await page.getByRole('button', { name: /Make/ }).click();
  const download = page.waitForEvent('download');
  await page
    .getByRole('link', { name: /download/i })
    .first()
    .click();
  const file = info.outputPath('guide.pdf');
  await (await download).saveAs(file);
  await measureGuide(page, layId, file);
});
