import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { useCardHost } from '$lib/server/card-host';
import * as clientLinks from '$lib/server/client-links';
import { newId } from '$lib/server/ids';
import * as orders from '$lib/server/orders';
import { emptySheet } from '$lib/server/price-sheet';
import * as prices from '$lib/server/prices';
import * as quotes from '$lib/server/quotes';
import { actions, load } from '../../src/routes/(client)/c/[token]/+page.server';
import { GET as pdf } from '../../src/routes/(client)/c/[token]/pdf/+server';
import { ending, eventFor, makeCast, type Call, type Cast } from './cast';
import { agreeTo, makeQuoted, tokenInOutbox, words } from './money';

/*
 * The client as an actor: what a link opens, what it must not open, and what can be done through it. Two studios, two orders here,
 * one order elsewhere.
 */

let cast: Cast;
let mine: Awaited<ReturnType<typeof makeQuoted>>;
let other: Awaited<ReturnType<typeof makeQuoted>>;
let abroad: Awaited<ReturnType<typeof makeQuoted>>;

beforeEach(async () => {
  cast = await makeCast();
  useCardHost(null);
  mine = await makeQuoted(cast.here.owner.scope, 7, 100_000);
  other = await makeQuoted(cast.here.owner.scope, 8, 222_222);
  abroad = await makeQuoted(cast.elsewhere.owner.scope, 7, 333_333);
  await cast
    .db('orders')
    .where({ id: other.order })
    .update({ client_name: 'Somebody Else', note: 'secret note' });
});
afterEach(() => cast.close());

const scope = () => cast.here.owner.scope;
let place = 0;
const at = (token: string, call: Call = {}) =>
  eventFor<never>({ params: { token }, place: `10.1.0.${(place += 1) % 250}`, ...call });
const see = (token: string) => ending(() => load(at(token)));
const act = (name: keyof typeof actions, token: string, form: Record<string, string>) =>
  ending(() => actions[name]!(at(token, { form })));
const answer = (quoted: { hash: string }, changes: Record<string, string> = {}) => ({
  number: '1',
  hash: quoted.hash,
  name: 'Ada Lund',
  read: 'on',
  ...changes
});
const quoteOf = (order: string, number = 1) => quotes.read(scope(), order, number);

describe('a link', () => {
  it('shows its own order, and nothing of the studio or of anybody else', async () => {
    await cast.db('orders').where({ id: mine.order }).update({ note: 'difficult client' });
    const end = await see(mine.token);
    const text = JSON.stringify(end);
    expect(text).toContain('Ada Lund');
    expect(text).toContain('100000');
    for (const secret of [
      ...['difficult client', 'secret note', 'Somebody Else', '222222', '333333', 'Harbour Bench'],
      ...['Mill by the weir', 'overhead', 'margin', 'Odile', mine.token]
    ])
      expect(text, secret).not.toContain(secret);
    for (const id of [mine.order, mine.item, mine.main, other.order, abroad.order, cast.here.id])
      expect(text).not.toContain(id);
  });

  it('that is unknown, cut short, revoked or too old opens nothing, and all are answered alike', async () => {
    const dead = ['x'.repeat(43), mine.token.slice(0, 42), mine.token.toLowerCase(), ''];
    const answers = await Promise.all(dead.map((token) => see(token)));
    const [link] = await clientLinks.list(scope(), mine.order);
    await clientLinks.revoke(scope(), mine.order, link!.id);
    answers.push(await see(mine.token), await act('agree', mine.token, answer(mine)));
    await cast
      .db('client_links')
      .where({ order_id: other.order })
      .update({ expires_at: Date.now() - 1 });
    answers.push(await see(other.token));
    for (const end of answers) expect(end).toMatchObject({ kind: 'error', status: 410 });
    expect(new Set(answers.map((end) => JSON.stringify(end))).size).toBe(1);
    expect((await quoteOf(mine.order)).state).toBe('sent');
  });

  it('is stored hashed, and taken out of the mail once that is sent', async () => {
    expect(JSON.stringify(await cast.db('client_links'))).not.toContain(mine.token);
    const { sendDue } = await import('$lib/server/outbox');
    await sendDue(async () => {});
    expect(JSON.stringify(await cast.db('messages'))).not.toContain(mine.token);
  });

  it('is counted by place when guessed', async () => {
    const ends = [];
    for (let i = 0; i < 70; i++)
      ends.push(
        await ending(() => load(eventFor<never>({ params: { token: `${i}` }, place: '203.0.113.77' })))
      );
    expect(ends.at(-1)).toMatchObject({ kind: 'error', status: 429 });
  });

  it('gives the paper of its own quote only', async () => {
    const get = (token: string, quote: string) =>
      ending(() => pdf(at(token, { path: `/c/x/pdf?quote=${quote}` })));
    const end = await get(mine.token, '1');
    const response = (end as { value: Response }).value;
    expect(response.headers.get('content-type')).toBe('application/pdf');
    expect(response.headers.get('x-robots-tag')).toBe('noindex');
    expect(
      Buffer.from(await response.arrayBuffer())
        .subarray(0, 5)
        .toString()
    ).toBe('%PDF-');
    expect(await get(mine.token, '2')).toMatchObject({ status: 404 });
    await quotes.create(scope(), mine.order, words);
    expect(await get(mine.token, '2')).toMatchObject({ status: 404 });
  });
});

describe('agreeing', () => {
  it('keeps name, time and version, moves the stage, and tells both sides once', async () => {
    expect(await act('agree', mine.token, answer(mine))).toMatchObject({ value: { done: 'agreed' } });
    expect(await act('agree', mine.token, answer(mine))).toMatchObject({ value: { done: 'agreed' } });
    const quote = await quoteOf(mine.order);
    expect(quote).toMatchObject({ state: 'agreed', agreedName: 'Ada Lund', number: 1, hash: mine.hash });
    expect(quote.agreedPlace).toMatch(/^10\.1\.0\./);
    expect(Math.abs(quote.agreedAt! - Date.now())).toBeLessThan(60_000);
    expect((await orders.read(scope(), mine.order)).stage).toBe('agreed');
    const mails = await cast.db('messages').whereIn('template', ['quote-agreed', 'studio-quote']);
    expect(mails.map(({ recipient }) => recipient).sort()).toEqual([
      'ada@far.example',
      cast.here.owner.email
    ]);
  });

  it('asks for a name and for having read', async () => {
    const end = await act('agree', mine.token, answer(mine, { name: ' ', read: '' }));
    expect(end).toMatchObject({ value: { status: 400 } });
    expect(Object.keys((end as { value: { data: { errors: object } } }).value.data.errors).sort()).toEqual([
      'name',
      'read'
    ]);
    expect((await quoteOf(mine.order)).state).toBe('sent');
  });

  it('with another order’s quote, another studio’s, or another hash is refused', async () => {
    for (const hash of [other.hash, abroad.hash, '0'.repeat(64)]) {
      const end = await act('agree', mine.token, answer({ hash }));
      expect(end).toMatchObject({ value: { status: 409 } });
    }
    for (const { order } of [mine, other]) expect((await quoteOf(order)).state).toBe('sent');
  });

  it('to a superseded version is refused; the newer one takes its place', async () => {
    await quotes.create(scope(), mine.order, words);
    await quotes.send(scope(), mine.order, 2, 'ada@far.example');
    expect(await act('agree', mine.token, answer(mine))).toMatchObject({ value: { status: 409 } });
    const { hash } = await quoteOf(mine.order, 2);
    // The first link still opens the order: it shows the newer quote.
    expect(await act('agree', mine.token, answer({ hash }, { number: '2' }))).toMatchObject({
      value: { done: 'agreed' }
    });
    expect((await quotes.list(scope(), mine.order)).map(({ state }) => state)).toEqual([
      'agreed',
      'superseded'
    ]);
  });

  it('to a quote that ran out, was withdrawn, or is still a draft is refused', async () => {
    await cast.db('quotes').where({ order_id: mine.order }).update({ valid_until: '2020-01-01' });
    expect(await act('agree', mine.token, answer(mine))).toMatchObject({ value: { status: 409 } });
    await quotes.withdraw(scope(), other.order, 1);
    expect(await act('agree', other.token, answer(other))).toMatchObject({ value: { status: 409 } });
    const number = await quotes.create(scope(), other.order, words);
    const { hash } = await quoteOf(other.order, number);
    const draft = answer({ hash }, { number: String(number) });
    expect(await act('agree', other.token, draft)).toMatchObject({ value: { status: 409 } });
    expect(JSON.stringify(await see(other.token))).not.toContain(hash);
  });

  it('to a quote whose order changed is refused, until a new one is made', async () => {
    const order = await orders.read(scope(), mine.order);
    await orders.updateItem(scope(), mine.order, order.version, mine.item, {
      styleVersionId: mine.styleVersion,
      label: '40',
      quantity: 2,
      cloths: { main: mine.main, lining: mine.lining }
    });
    expect(await act('agree', mine.token, answer(mine))).toMatchObject({ value: { status: 409 } });
    await expect(quotes.send(scope(), mine.order, 1, 'ada@far.example')).rejects.toThrow(/new one/);
    await quotes.create(scope(), mine.order, words);
    await quotes.send(scope(), mine.order, 2, 'ada@far.example');
    const { hash } = await quoteOf(mine.order, 2);
    expect(await act('agree', await tokenInOutbox(), answer({ hash }, { number: '2' }))).toMatchObject({
      value: { done: 'agreed' }
    });
  });

  it('and declining: the first answer holds', async () => {
    const { number, hash } = answer(mine);
    expect(await act('decline', mine.token, { number, hash })).toMatchObject({ value: { done: 'declined' } });
    expect(await act('agree', mine.token, answer(mine))).toMatchObject({ value: { status: 409 } });
    expect((await quoteOf(mine.order)).state).toBe('declined');
  });
});

describe('asking and paying', () => {
  it('keeps a question once, with the order, and mails it to the owner', async () => {
    const form = { id: newId(), words: 'May I bring my own buttons?' };
    await act('ask', mine.token, form);
    await act('ask', mine.token, form);
    const mails = await cast.db('messages').where({ template: 'question' });
    expect(mails).toMatchObject([{ recipient: cast.here.owner.email }]);
    expect(mails[0].body).toContain('May I bring my own buttons?');
    expect(await cast.db('order_questions')).toMatchObject([{ order_id: mine.order, words: form.words }]);
    expect(JSON.stringify(await see(other.token))).not.toContain('buttons');
  });

  it('is limited per link', async () => {
    let last: unknown;
    for (let i = 0; i < 11; i++) last = await act('ask', mine.token, { id: newId(), words: `Question ${i}` });
    expect(last).toMatchObject({ kind: 'error', status: 429 });
    expect(await cast.db('order_questions')).toHaveLength(10);
  });

  it('without a card host says that cards are not taken, and refuses the button', async () => {
    await agreeTo(scope(), mine.order);
    expect(await see(mine.token)).toMatchObject({ value: { payable: { cards: false, deposit: false } } });
    expect(await act('pay', mine.token, { kind: 'deposit' })).toMatchObject({ value: { status: 409 } });
    expect(await cast.db('payments')).toHaveLength(0);
  });
});

describe('a quote', () => {
  it('never changes, whatever the price does afterwards, and its bytes are watched', async () => {
    await prices.save(scope(), mine.order, 1, { ...emptySheet, priceByHand: 1 });
    expect((await quoteOf(mine.order)).document.total).toBe(100_000);
    const { bytes } = await cast.db('quotes').where({ order_id: mine.order }).first();
    await cast
      .db('quotes')
      .where({ order_id: mine.order })
      .update({ bytes: Buffer.from(String(bytes).replace('100000', '900000')) });
    await expect(quoteOf(mine.order)).rejects.toThrow(/not those that were kept/);
  });

  it('is not made while a cloth’s cost is unknown, and says which', async () => {
    await prices.save(scope(), mine.order, 1, emptySheet);
    await expect(quotes.create(scope(), mine.order, words)).rejects.toThrow(/“Wool” and “Silk”/);
  });

  it('is not the cutter’s, nor a stranger’s', async () => {
    await expect(quotes.read(cast.elsewhere.owner.scope, mine.order, 1)).rejects.toThrow(/no such/i);
  });
});
