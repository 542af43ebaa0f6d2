import { mkdirSync, writeFileSync } from 'node:fs';
import fc from 'fast-check';
import { simpleParser } from 'mailparser';
import { getDocument } from 'pdfjs-dist/legacy/build/pdf.mjs';
import Stripe from 'stripe';
import { createTransport } from 'nodemailer';
import { describe, expect, it } from 'vitest';
import type { QuoteDocument } from '$lib/guide/quote-paper';
import { quoteLines } from '$lib/guide/quote-paper';
import * as mails from '$lib/server/client-mails';
import { quotePdf } from '$lib/server/quote-document';
import { partOf, taxed, workCost } from '$lib/units/share';
import { startFakeCardHost } from '../fakes/fake-card-host';
import { runs } from '../runs';

/*
 * Money against the outside: rounding against the language's own decimal formatter and a published tax rule, the signature of
 * messages against the SDK, mails against an independent parser, the paper of a quote read back.
 */

/** Source: ECMA-402 (15th edition, 2024), Intl.NumberFormat with roundingMode 'halfExpand', on exact decimal text. */
const halfExpand = new Intl.NumberFormat('en', {
  maximumFractionDigits: 0,
  useGrouping: false,
  roundingMode: 'halfExpand'
} as Intl.NumberFormatOptions);
const asText = (numerator: bigint, decimals: number): Intl.StringNumericLiteral => {
  const digits = numerator.toString().padStart(decimals + 1, '0');
  return `${digits.slice(0, -decimals)}.${digits.slice(-decimals)}` as Intl.StringNumericLiteral;
};

describe('rounding beside the language’s own decimal rounding', () => {
  it('agrees for shares of amounts', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 99_999_999 }),
        fc.integer({ min: 0, max: 20_000 }),
        (amount, share) => {
          const exact = asText(BigInt(amount) * BigInt(share), 4);
          expect(partOf(amount, share)).toBe(Number(halfExpand.format(exact)));
        }
      ),
      { numRuns: runs(500), seed: 616 }
    );
  });

  it('agrees for work by the minute, where the hour divides into decimals', () => {
    // Multiples of three minutes are twentieths of an hour.
    for (let minutes = 3; minutes <= 600; minutes += 3)
      for (const hourly of [1, 33, 4250, 9999]) {
        const exact = asText((BigInt(minutes) / 3n) * BigInt(hourly) * 5n, 2);
        expect(workCost(minutes, hourly)).toBe(Number(halfExpand.format(exact)));
      }
  });
});

/*
 * A published rule for tax on a document: Australia, A New Tax System (Goods and Services Tax) Act 1999, section 9-90, with the tax
 * office's 'total invoice rule': the tax of the lines is added up unrounded and rounded once to the nearest cent, half a cent upwards.
 * From memory: the text could not be looked up here. Figures are our own, worked by hand from the rule.
 */
describe('tax once on the total of a document', () => {
  it.each([
    // Lines, exact tax at 10 %, rounded on the total; rounding each line would give the last figure.
    [[115, 115, 115], 34.5, 35, 36],
    [[114, 114, 114], 34.2, 34, 33],
    [[105, 105], 21, 21, 22],
    [[1, 1, 1, 1], 0.4, 0, 0],
    [[5], 0.5, 1, 1]
  ])('%j: %d cents become %d, not %d', (lines, exact, onTotal, byLine) => {
    const total = lines.reduce((sum, line) => sum + line, 0);
    expect(total / 10).toBeCloseTo(exact, 9);
    expect(taxed(total, 'added', 1000).tax).toBe(onTotal);
    expect(lines.reduce((sum, line) => sum + taxed(line, 'added', 1000).tax, 0)).toBe(byLine);
  });

  it('takes one eleventh out of a price that holds 10 %', () => {
    // 1/11 of 100.05 is 9.0954…; of 0.05 it is 0.0045…; of 60.50 exactly 5.50.
    expect(taxed(10_005, 'included', 1000).tax).toBe(910);
    expect(taxed(5, 'included', 1000).tax).toBe(0);
    expect(taxed(6050, 'included', 1000)).toEqual({ net: 5500, tax: 550, total: 6050 });
  });
});

describe('the signature of a message', () => {
  const secret = 'whsec_a_secret_of_ours';
  const stripe = new Stripe('sk_test_none');

  it('as our stand-in makes it is the SDK’s own, and the SDK takes it', async () => {
    const fake = await startFakeCardHost();
    const payload = JSON.stringify({ id: 'evt_1', object: 'event', type: 'x', data: { object: {} } });
    const timestamp = Math.floor(Date.now() / 1000);
    const theirs = stripe.webhooks.generateTestHeaderString({
      payload,
      secret: fake.webhookSecret,
      timestamp
    });
    expect(fake.sign(payload, timestamp)).toBe(theirs.replace(/,v0=.*$/, ''));
    expect(stripe.webhooks.constructEvent(payload, fake.sign(payload), fake.webhookSecret).id).toBe('evt_1');
    await fake.close();
  });

  it('does not survive any change of one character of body, time or signature', () => {
    const payload = JSON.stringify({
      id: 'evt_1',
      object: 'event',
      data: { object: { amount_total: 50_000 } }
    });
    const header = stripe.webhooks.generateTestHeaderString({ payload, secret });
    expect(stripe.webhooks.constructEvent(payload, header, secret).id).toBe('evt_1');
    const refused = (body: string, signature: string, key = secret) =>
      expect(() => stripe.webhooks.constructEvent(body, signature, key)).toThrow();
    for (let i = 0; i < payload.length; i++) {
      const other = payload[i] === '0' ? '1' : '0';
      refused(payload.slice(0, i) + other + payload.slice(i + 1), header);
    }
    const time = /t=(\d+)/.exec(header)![1]!;
    refused(payload, header.replace(time, String(Number(time) - 1)));
    refused(
      payload,
      header.replace(/v1=./, (found) => (found === 'v1=0' ? 'v1=1' : 'v1=0'))
    );
    refused(payload, header, `${secret}x`);
    refused(payload, '');
    const old = stripe.webhooks.generateTestHeaderString({
      payload,
      secret,
      timestamp: Math.floor(Date.now() / 1000) - 301
    });
    refused(payload, old);
  });
});

const quote: QuoteDocument = {
  schema: 1,
  studio: { name: 'Łąka & Söhne Maßatelier', letterhead: 'Wollgasse 3, 1070 Wien\nUID ATU00000000' },
  order: 12,
  version: 3,
  client: 'Дарина Коваль',
  currency: 'EUR',
  lengthUnit: 'cm',
  day: '2026-05-31',
  validUntil: '2026-06-14',
  garments: [
    { name: 'Wilma skirt', label: '38', quantity: 1 },
    { name: 'Ilse bodice', label: '38', quantity: 2 }
  ],
  cloths: [
    { name: 'Loden', roles: 'Main cloth', width: 1460, length: 1800, own: false, amount: 8640 },
    { name: 'Grandmother’s silk', roles: 'Lining', width: 900, length: null, own: true, amount: 0 }
  ],
  trims: [{ words: 'Horn buttons, 6', amount: 1380 }],
  extras: [{ words: 'Rush', amount: 5000 }],
  minutes: 690,
  making: 67_519,
  tax: { mode: 'added', rate: 2000, amount: 16_508 },
  net: 82_539,
  total: 99_047,
  deposit: 49_524,
  fittings: 2,
  due: '2026-08-01',
  dates: 'The first fitting about four weeks after the deposit.',
  alterations: 'Small alterations found at the fittings are included.',
  exclusions: 'Underwear, shoes, travel.',
  terms: Array.from(
    { length: 40 },
    (_, i) => `Term ${i + 1}: some words that say how we work together.`
  ).join('\n'),
  law: 'The law of your country stays in force.'
};

describe('the paper of a quote', () => {
  it('says everything that the quote says, over as many pages as it needs, and is the same each time', async () => {
    const bytes = await quotePdf(quote, 1_780_000_000_000);
    expect(Buffer.from(await quotePdf(quote, 1_780_000_000_000)).equals(Buffer.from(bytes))).toBe(true);
    if (process.env.WARPWISE_PICTURES) {
      mkdirSync(process.env.WARPWISE_PICTURES, { recursive: true });
      writeFileSync(`${process.env.WARPWISE_PICTURES}/quote.pdf`, bytes);
    }
    const file = await getDocument({ data: new Uint8Array(bytes), verbosity: 0 }).promise;
    expect(file.numPages).toBeGreaterThan(1);
    let text = '';
    for (let i = 1; i <= file.numPages; i++) {
      const page = await file.getPage(i);
      const { width, height } = page.getViewport({ scale: 1 });
      expect(width).toBeCloseTo((210 / 25.4) * 72, 1);
      for (const item of (await page.getTextContent()).items) {
        if (!('str' in item)) continue;
        text += `${item.str} `;
        const [x, y] = [item.transform[4] as number, item.transform[5] as number];
        expect(x >= 0 && x + item.width <= width && y > 0 && y < height, item.str).toBe(true);
      }
    }
    for (const words of [
      ...['Łąka & Söhne Maßatelier', 'Wollgasse 3, 1070 Wien', 'Quote 12.3', 'Дарина Коваль'],
      ...[
        'valid until 14 Jun 2026',
        '2 × Ilse bodice, 38',
        '146 cm wide',
        '180 cm with ends',
        'brought by you'
      ],
      ...[
        '€86.40',
        '€13.80',
        '€50.00',
        '€675.19',
        '€825.39',
        'Tax 20 %',
        '€165.08',
        '€990.47',
        '€495.24',
        '€495.23'
      ],
      ...['2 fittings are included', '1 Aug 2026', 'Term 40:', 'stays in force', 'Underwear', '11:30 hours']
    ])
      expect(text, words).toContain(words);
  });

  it('shows lines that add up to the price before tax, or none at all', () => {
    const sum = quoteLines(quote).reduce((total, { amount }) => total + (amount ?? 0), 0);
    expect(sum).toBe(quote.net);
    expect(quoteLines({ ...quote, making: null }).every(({ amount }) => amount === null)).toBe(true);
  });
});

describe('the mails around a quote', () => {
  const about = { studioId: 's', studio: 'Söhne & Łąka', order: 12, orderId: 'o' };
  const token = 'T'.repeat(43);
  const all = [
    mails.quoteSent('k', about, 'a@b.example', { ...quote, version: 3 }, token),
    mails.linkSent('k', about, 'a@b.example', 'Дарина', token),
    mails.receipt('k', about, 'a@b.example', {
      client: 'Дарина',
      kind: 'deposit',
      method: 'transfer',
      amount: 49_524,
      currency: 'EUR',
      when: '31 May 2026, 14:02',
      owed: 49_523
    }),
    mails.questionAsked('k', about, 'a@b.example', {
      client: 'Дарина',
      address: 'd@e.example',
      words: '<b>May I\nbring a friend?</b>'
    })
  ];

  it('are read alike by an independent parser (mailparser), text and HTML', async () => {
    for (const message of all) {
      const built = await createTransport({ streamTransport: true, buffer: true }).sendMail({
        from: 'Workroom <w@r.example>',
        to: message.recipient,
        subject: message.subject,
        text: message.text,
        html: message.html
      });
      const read = await simpleParser(built.message as Buffer);
      expect(read.subject).toBe(message.subject);
      expect(read.text?.trim()).toBe(message.text.trim());
      expect(read.html).not.toContain('<b>May');
    }
    expect(all[0]!.text).toContain(`/c/${token}`);
    expect(all[0]!.text).toContain('€990.47');
    expect(all[2]!.text).toMatch(/the deposit of €495\.24 by bank transfer.*\n[\s\S]*Still open: €495\.23/);
  });
});
