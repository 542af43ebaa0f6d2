import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { startFakeMail, type FakeMail } from '../fakes/fake-mail';
import { config, readConfig } from '$lib/server/config';
import { composed } from '$lib/server/mail-words';
import { senderOf } from '$lib/server/mail';
import * as mails from '$lib/server/door-mails';
import * as outbox from '$lib/server/outbox';
import { newToken } from '$lib/server/tokens';
import { makeCast, type Cast } from './cast';

let cast: Cast;
let fake: FakeMail;
let mail: ReturnType<typeof senderOf>;

beforeEach(async () => {
  cast = await makeCast();
  fake = await startFakeMail();
  mail = senderOf(
    readConfig({
      WARPWISE_SMTP_URL: fake.smtpUrl,
      WARPWISE_SMTP_PLAIN: 'true',
      WARPWISE_MAIL_FROM: 'Linden Row <mail@linden.example>',
      ORIGIN: 'https://warpwise.example'
    })
  );
});
afterEach(async () => {
  mail.close();
  await fake.close();
  await cast.close();
});

const message = (key: string, text = 'Hello') => ({
  studioId: null,
  dedupeKey: key,
  template: 'test',
  recipient: 'lina@garden.example',
  ...composed({ subject: `Subject of ${key}`, paragraphs: [text] })
});
const rows = () => cast.db('messages').orderBy('created_at');

describe('the outbox', () => {
  it('sends over real SMTP what was queued, text and HTML, any letters', async () => {
    await outbox.queue(message('one', 'Grüße, ąęł, Ωμ, Жук = 50 % <b>'));
    expect(await outbox.sendDue(mail.send)).toEqual({ sent: 1, held: 0 });
    const [received] = fake.messages;
    expect(received).toMatchObject({ recipients: ['lina@garden.example'], subject: 'Subject of one' });
    expect(received!.from).toContain('mail@linden.example');
    expect(received!.text).toContain('Grüße, ąęł, Ωμ, Жук = 50 % <b>');
    expect(received!.html).toContain('Grüße, ąęł, Ωμ, Жук = 50 % &lt;b&gt;');
    const [row] = await rows();
    expect(row).toMatchObject({ state: 'sent', attempts: 1, error: null });
    expect(received!.messageId).toBe(`<${row.id}@warpwise.example>`);
  });

  it('makes one event one mail, however often it is queued and sent', async () => {
    await outbox.queue(message('same'));
    await outbox.queue(message('same', 'other words'));
    await outbox.sendDue(mail.send);
    await outbox.sendDue(mail.send);
    expect(fake.messages).toHaveLength(1);
  });

  it('keeps what the mail server refuses, tries later and later, and sends it in the end', async () => {
    await outbox.queue(message('away'));
    fake.refuseWith = 'mailbox busy';
    let now = Date.now();
    let before = 0;
    for (let attempt = 1; attempt <= 4; attempt += 1) {
      expect(await outbox.sendDue(mail.send, now)).toEqual({ sent: 0, held: 1 });
      const [row] = await rows();
      expect(row).toMatchObject({ state: 'waiting', attempts: attempt });
      expect(row.error).toContain('mailbox busy');
      expect(row.not_before - now).toBeGreaterThan(before);
      before = row.not_before - now;
      expect(await outbox.sendDue(mail.send, row.not_before - 1)).toEqual({ sent: 0, held: 0 });
      now = row.not_before;
    }
    fake.refuseWith = null;
    expect(await outbox.sendDue(mail.send, now)).toEqual({ sent: 1, held: 0 });
    expect(fake.messages).toHaveLength(1);
  });

  it('calls a mail failed after about two days, and lets the others pass', async () => {
    await outbox.queue(message('hopeless'));
    fake.refuseWith = 'no such person';
    const started = Date.now();
    let now = started;
    for (let i = 0; i < 14; i += 1) {
      await outbox.sendDue(mail.send, now);
      now = (await rows())[0].not_before;
    }
    expect((await rows())[0].state).toBe('failed');
    expect(now - started).toBeGreaterThan(86_400_000);
    fake.refuseWith = null;
    await outbox.queue(message('next'));
    await outbox.sendDue(mail.send);
    expect(fake.messages.map(({ subject }) => subject)).toEqual(['Subject of next']);
  });

  it('takes one-time links out of what it keeps once they are sent', async () => {
    const { token } = newToken();
    await outbox.queue(mails.resetLink('k', 'lina@garden.example', 'Lina', token));
    expect(JSON.stringify(await rows())).toContain(token);
    await outbox.sendDue(mail.send);
    expect(fake.messages[0]!.text).toContain(`/reset/${token}`);
    expect(JSON.stringify(await rows())).not.toContain(token);
  });

  it('is not written when the transaction that it tells about fails', async () => {
    await expect(
      cast.db.transaction(async (trx) => {
        await outbox.queue(message('undone'), trx);
        throw new Error('something else failed');
      })
    ).rejects.toThrow('something else failed');
    expect(await rows()).toEqual([]);
  });

  it('sends in the background as soon as something is queued', async () => {
    const stop = outbox.startSending(mail.send);
    await outbox.queue(message('soon'));
    await expect.poll(() => fake.messages.length, { timeout: 5000 }).toBe(1);
    await stop();
  });
});

describe('a mail', () => {
  it('cannot be given further headers or recipients by what a person typed', async () => {
    const nasty = 'Evil\r\nBcc: all@garden.example\r\n\r\nbody';
    await outbox.queue({
      ...message('nasty'),
      ...composed({ subject: `Hello ${nasty}`, paragraphs: ['x'] })
    });
    await outbox.sendDue(mail.send);
    expect(fake.messages[0]!.recipients).toEqual(['lina@garden.example']);
    expect(fake.messages[0]!.subject).toBe('Hello Evil Bcc: all@garden.example body');
  });

  it('links to the configured address', () => {
    const { token } = newToken();
    expect(mails.resetLink('k', 'a@b.example', 'A', token).text).toContain(`${config.origin}/reset/${token}`);
  });
});

describe('the page of what was sent', () => {
  it('shows what arrived and runs nothing of it', async () => {
    await outbox.queue(message('page', '<script>alert(1)</script> see http://localhost:1/x'));
    await outbox.sendDue(mail.send);
    const html = await (await fetch(fake.pageUrl.replace('localhost', '127.0.0.1'))).text();
    expect(html).toContain('Subject of page');
    expect(html).toContain('&lt;script&gt;');
    expect(html).not.toContain('<script>');
    expect(html).toContain('<a href="http://localhost:1/x">');
  });
});
