import { AxeBuilder } from '@axe-core/playwright';
import { expect, test, type Browser, type Page } from '@playwright/test';
import { startFakeCardHost, type FakeCardHost } from '../fakes/fake-card-host';
import { startFakeMail, type FakeMail } from '../fakes/fake-mail';
import { startOwnServer, type OwnServer } from './own-server';

/*
 * From a price to a paid order: the owner prices and sends a quote, the client agrees on a telephone, pays the deposit and later the
 * balance on the card host's page, and both see the same account.
 */

let mail: FakeMail;
let cards: FakeCardHost;
let server: OwnServer;
test.beforeAll(async () => {
  mail = await startFakeMail();
  cards = await startFakeCardHost();
  server = await startOwnServer(process.env.WARPWISE_BUILD ?? 'build', {
    WARPWISE_SMTP_URL: mail.smtpUrl,
    WARPWISE_SMTP_PLAIN: 'true',
    ...cards.env
  });
  cards.webhookUrl = `${server.origin}/api/payments/webhook`;
});
test.afterAll(async () => {
  server.stop();
  await cards.close();
  await mail.close();
});

const client = 'ysolde@meadow.example';
/** Pictures for the eye, when asked for: WARPWISE_PICTURES names a folder. */
const pictures = process.env.WARPWISE_PICTURES;
async function picture(page: Page, name: string): Promise<void> {
  if (pictures) await page.screenshot({ path: `${pictures}/${name}.png`, fullPage: true });
}

async function sound(page: Page): Promise<void> {
  const { violations } = await new AxeBuilder({ page }).withTags(['wcag2a', 'wcag2aa', 'wcag22aa']).analyze();
  expect(violations.map(({ id, nodes }) => [id, nodes[0]?.html])).toEqual([]);
  const wide = await page.evaluate(() => document.documentElement.scrollWidth - innerWidth);
  expect(wide, 'nothing reaches past the edge').toBeLessThanOrEqual(0);
}

async function signIn(page: Page): Promise<void> {
  await page.goto(`${server.origin}/sign-in`);
  await page.getByLabel('E-mail address').fill('runa@hollin-lane.example');
  await page.getByLabel('Password', { exact: true }).fill('loden under lamplight');
  await page.locator('main form').getByRole('button').first().click();
  await page.waitForURL(/\/orders/);
}

/** The page behind the newest mail of `subject` to the client. */
async function mailTo(recipient: string, subject: RegExp) {
  const found = () =>
    mail.messages.filter((one) => one.recipients.includes(recipient) && subject.test(one.subject)).at(-1);
  await expect.poll(() => found()?.subject, { timeout: 20_000 }).toMatch(subject);
  return found()!;
}

async function onPhone(browser: Browser): Promise<Page> {
  const context = await browser.newContext({ viewport: { width: 390, height: 844 }, hasTouch: true });
  return context.newPage();
}

test('priced, quoted, agreed on a telephone, paid in two parts', async ({ page, browser }) => {
  await signIn(page);
  await page.goto(`${server.origin}/orders`);
  await page
    .getByRole('link', { name: /Ysolde Marr/ })
    .first()
    .click();
  await page.waitForURL(/\/orders\/[\da-f-]{36}/);
  const order = page.url().split('?')[0]!;

  // The loden has its lay; the canvas is not laid, so its cost is written by hand.
  await page.goto(`${order}/price`);
  await expect(page.getByText('Not complete')).toBeVisible();
  const canvas = page.locator('[name^="cloth."]').nth(1);
  await canvas.fill('33.50');
  await page.getByLabel('Hours').fill('26:30');
  await page.getByLabel('Rate for an hour').fill('42');
  await page.getByLabel('Trims 1').fill('Eyelets and lacing');
  await page.getByLabel('Cost 1').first().fill('18.40');
  await page.getByLabel('Overhead, on the cost').fill('15');
  await page.getByLabel('Margin, on cost and overhead').fill('10');
  await page.getByLabel('Tax', { exact: true }).selectOption('added');
  await page.getByLabel('Tax rate').fill('20');
  await page.getByRole('button', { name: 'Save and compute' }).click();
  await expect(page.getByText('by hand, computed').or(page.getByText('✎ by hand')).first()).toBeVisible();
  await expect(page.getByText('Not complete')).toBeHidden();
  await sound(page);
  await picture(page, 'price');
  const total = await page.getByTestId('price-total').innerText();

  await page.getByRole('button', { name: 'Make the quote' }).click();
  await page.waitForURL(/\/quotes\/1$/);
  await expect(page.getByTestId('quote-total')).toHaveText(total);
  await page.getByLabel('The client’s e-mail address').fill(client);
  await page.getByRole('button', { name: 'Send the quote' }).click();
  await expect(page.getByText(`On its way to ${client}`)).toBeVisible();
  await sound(page);
  await picture(page, 'quote');

  const link = /http:\/\/localhost\S+\/c\/[\w-]{43}/.exec((await mailTo(client, /your quote/)).text)![0];
  const phone = await onPhone(browser);
  await phone.goto(link);
  await expect(phone.getByTestId('quote-total')).toHaveText(total);
  await sound(phone);
  await picture(phone, 'client-quote');
  await phone.getByLabel('Your name').fill('Ysolde Marr');
  await phone.getByLabel(/I have read/).check();
  await phone.getByRole('button', { name: /^Agree to/ }).click();
  await expect(phone.getByText('Agreed. Thank you.')).toBeVisible();
  await picture(phone, 'client-agreed');

  await phone.getByRole('button', { name: /^Pay the deposit/ }).click();
  await phone.waitForURL(/\/pay\//);
  expect(await phone.evaluate(() => document.referrer)).not.toContain('/c/');
  await picture(phone, 'card-page');
  await phone.getByRole('button', { name: 'Pay', exact: true }).click();
  await phone.waitForURL(/\/c\/[\w-]{43}\?back/);
  await expect(phone.getByText('Deposit, card')).toBeVisible();
  const half = await phone.getByTestId('open').innerText();
  await sound(phone);
  await picture(phone, 'client-deposit');
  expect((await mailTo(client, /we received/)).text).toContain('the deposit of');

  await phone.getByLabel('Your question').fill('May I come to the fitting in the evening?');
  await phone.getByRole('button', { name: 'Send the question' }).click();
  await expect(phone.getByText('Sent. We will write to you.')).toBeVisible();
  expect((await mailTo('runa@hollin-lane.example', /a question from Ysolde/)).text).toContain(
    'in the evening'
  );

  // The message about the balance is lost on its way: coming back to the page finds the money all the same.
  cards.lose = true;
  await phone.getByRole('button', { name: /^Pay the balance/ }).click();
  await phone.waitForURL(/\/pay\//);
  await phone.getByRole('button', { name: 'Pay', exact: true }).click();
  await phone.waitForURL(/\/c\/[\w-]{43}\?back/);
  await expect(phone.getByText('Everything is paid')).toBeVisible();
  await expect(phone.getByTestId('open')).toHaveText('€0.00');
  cards.lose = false;
  for (const event of cards.events) expect(await cards.deliver(event)).toBe(200);
  await phone.reload();
  await expect(phone.getByText(/, card/)).toHaveCount(2);

  await page.goto(`${order}/payments`);
  await expect(page.getByText('The deposit is paid')).toBeVisible();
  await expect(page.getByText('in the evening')).toBeVisible();
  await expect(page.getByRole('row', { name: /Deposit, card/ })).toContainText('Settled');
  await expect(page.getByRole('row', { name: /Balance, card/ })).toContainText(half);
  await sound(page);
  await picture(page, 'payments');

  // Part of it goes back; the link is ended.
  await page.getByLabel('Of which payment').selectOption({ index: 0 });
  const give = page.locator('form[action="?/refund"]');
  await give.getByLabel('Amount').fill('25');
  await give.getByLabel('How it goes back').selectOption('card');
  await give.getByRole('button', { name: 'Give it back' }).click();
  await expect(page.getByRole('row', { name: /Given back/ })).toContainText('€25.00');
  await page.getByRole('button', { name: 'End this link' }).first().click();
  await expect(page.getByText('✕ ended')).toBeVisible();
  expect((await phone.goto(link))!.status()).toBe(410);
  await picture(phone, 'client-ended');
  await page.goto(order);
  await picture(page, 'order');
  await phone.context().close();
});
