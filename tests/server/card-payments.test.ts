import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { cardHostOf, useCardHost } from '$lib/server/card-host';
import * as cardPayments from '$lib/server/card-payments';
import { readConfig } from '$lib/server/config';
import { newId } from '$lib/server/ids';
import * as payments from '$lib/server/payments';
import { startFakeCardHost, type FakeCardHost, type FakeEvent } from '../fakes/fake-card-host';
import { POST } from '../../src/routes/api/payments/webhook/+server';
import { eventFor, makeCast, type Cast } from './cast';
import { agreeTo, makeQuoted } from './money';

/*
 * Cards: the real SDK against the local card host over HTTP, and the real webhook handler. The price is 1000.00 EUR, the deposit a
 * half.
 */

let cast: Cast;
let fake: FakeCardHost;
let order: string;
const client = 'ada@far.example';

beforeEach(async () => {
  cast = await makeCast();
  fake = await startFakeCardHost();
  fake.lose = true;
  useCardHost(cardHostOf(readConfig(fake.env).cards!));
  const { scope } = cast.here.owner;
  ({ order } = await makeQuoted(scope));
  await agreeTo(scope, order);
});
afterEach(async () => {
  useCardHost(null);
  await fake.close();
  await cast.close();
});

const scope = () => cast.here.owner.scope;
const account = () => payments.account(scope(), order);
const sessionOf = (url: string) => fake.sessions.get(url.split('/').at(-1)!)!;
const begin = async (kind: 'deposit' | 'balance' = 'deposit') =>
  sessionOf(await cardPayments.begin(scope(), order, kind, client));
const lastEvent = () => fake.events.at(-1)!;
const receipts = () => cast.db('messages').where({ template: 'receipt' });

/** Posts a message to the real handler, signed by the fake unless a header is given. */
async function post(event: FakeEvent | string, signature?: string): Promise<number> {
  const body = typeof event === 'string' ? event : JSON.stringify(event);
  const request = new Request('http://localhost/api/payments/webhook', {
    method: 'POST',
    headers: { 'stripe-signature': signature ?? fake.sign(body) },
    body
  });
  const call = { ...eventFor<Record<string, unknown>>({ method: 'POST' }), request };
  return (await POST(call as unknown as Parameters<typeof POST>[0])).status;
}

async function expectOpen(): Promise<void> {
  expect(await account()).toMatchObject({ received: 0, refunded: 0, owed: 100_000, depositMissing: 50_000 });
  expect(await receipts()).toHaveLength(0);
}

describe('a deposit by card', () => {
  it('is asked of the card host with our name for it, and no token of the client’s page', async () => {
    const session = await begin();
    const [payment] = (await account()).payments;
    expect(session).toMatchObject({
      amount_total: 50_000,
      currency: 'eur',
      client_reference_id: payment!.id,
      words: 'Deposit, order 7, Linden Row'
    });
    expect(session.success_url).toMatch(/\/c\/back$/);
    await expectOpen();
  });

  it('counts once the message comes, with one receipt and one word to the studio', async () => {
    const session = await begin();
    await fake.pay(session.id);
    await expectOpen();
    expect(await post(lastEvent())).toBe(200);
    expect(await account()).toMatchObject({ received: 50_000, owed: 50_000, depositMissing: 0 });
    expect(await receipts()).toMatchObject([{ recipient: client }]);
    expect((await receipts())[0].body).toContain('€500.00 by card');
    expect(await cast.db('messages').where({ template: 'studio-paid' })).toHaveLength(1);
  });

  it('is one session, however often its button is pressed, and when pressed at once', async () => {
    const urls = await Promise.all(
      [1, 2, 3].map(() => cardPayments.begin(scope(), order, 'deposit', client))
    );
    urls.push(await cardPayments.begin(scope(), order, 'deposit', client));
    expect(new Set(urls).size).toBe(1);
    expect(fake.sessions.size).toBe(1);
    expect(await cast.db('payments')).toHaveLength(1);
  });

  it('gives way when everything is paid at once instead: one page is open at a time', async () => {
    const deposit = await begin();
    const whole = await begin('balance');
    expect(whole.amount_total).toBe(100_000);
    expect(deposit.status).toBe('expired');
    await fake.pay(whole.id);
    await post(lastEvent());
    expect(await account()).toMatchObject({ owed: 0, depositMissing: 0 });
    await expect(cardPayments.begin(scope(), order, 'deposit', client)).rejects.toThrow();
  });

  it('is ended when the money came by hand meanwhile', async () => {
    const session = await begin();
    await cast.db('payments').update({ created_at: 1 });
    await payments.recordByHand(scope(), order, {
      id: newId(),
      kind: 'deposit',
      method: 'transfer',
      amount: 50_000,
      day: '2026-05-31',
      note: '',
      receiptTo: null
    });
    await cardPayments.endWaiting(scope(), order);
    expect(session.status).toBe('expired');
    expect((await account()).payments.map(({ state }) => state)).toEqual(['settled', 'expired']);
  });

  it('is refused while nothing is agreed, and where cards are not taken', async () => {
    const { order: other } = await makeQuoted(scope(), 8);
    await expect(cardPayments.begin(scope(), other, 'deposit', client)).rejects.toThrow(/page/);
    useCardHost(null);
    await expect(cardPayments.begin(scope(), order, 'deposit', client)).rejects.toThrow(/cash/);
  });

  it('says so when the card host is down, and is the same session afterwards', async () => {
    fake.down = true;
    await expect(cardPayments.begin(scope(), order, 'deposit', client)).rejects.toThrow(/Nothing was paid/);
    fake.down = false;
    await begin();
    expect(await cast.db('payments')).toHaveLength(1);
    expect(fake.sessions.size).toBe(1);
  });
});

describe('messages of the card host', () => {
  it('twice, and many at once, count once', async () => {
    const session = await begin();
    await fake.pay(session.id);
    const event = lastEvent();
    expect(await Promise.all([post(event), post(event), post(event)])).toEqual([200, 200, 200]);
    // The same news under another name, as the host sends it for delayed ways to pay.
    await post({ ...event, id: 'evt_other', type: 'checkout.session.async_payment_succeeded' });
    expect(await account()).toMatchObject({ received: 50_000 });
    expect(await receipts()).toHaveLength(1);
    expect(await cast.db('payment_events')).toHaveLength(2);
  });

  it('out of order: an expiry that comes after the money changes nothing, money after an expiry counts', async () => {
    const session = await begin();
    const expired = { ...session, status: 'expired', payment_status: 'unpaid' };
    const told = (id: string, type: string, object: unknown): FakeEvent => ({
      id,
      object: 'event',
      type,
      created: 1,
      data: { object }
    });
    expect(await post(told('evt_1', 'checkout.session.expired', expired))).toBe(200);
    expect((await account()).payments[0]!.state).toBe('expired');
    await fake.pay(session.id);
    await post(lastEvent());
    await post(told('evt_2', 'checkout.session.expired', expired));
    expect(await account()).toMatchObject({ received: 50_000 });
    expect((await account()).payments[0]!.state).toBe('settled');
  });

  it('late: signed anew they count, with their old signature they don’t', async () => {
    const session = await begin();
    await fake.pay(session.id);
    const body = JSON.stringify(lastEvent());
    const anHourAgo = Math.floor(Date.now() / 1000) - 3600;
    expect(await post(body, fake.sign(body, anHourAgo))).toBe(400);
    await expectOpen();
    expect(await post(body)).toBe(200);
    expect(await account()).toMatchObject({ received: 50_000 });
  });

  it.each([
    ['no signature', () => ''],
    ['a signature of nothing', () => 't=1,v1='],
    ['somebody else’s secret', (body: string) => fake.sign(body).replace(/v1=..../, 'v1=0000')]
  ])('forged, with %s, change nothing', async (_, signature) => {
    const session = await begin();
    await fake.pay(session.id);
    const body = JSON.stringify(lastEvent());
    expect(await post(body, signature(body))).toBe(400);
    await expectOpen();
    expect(await cast.db('payment_events')).toHaveLength(0);
  });

  it('altered after signing change nothing', async () => {
    const session = await begin();
    await fake.pay(session.id);
    const body = JSON.stringify(lastEvent());
    const signature = fake.sign(body);
    for (const altered of [`${body} `, body.replace('50000', '50001'), body.replace('"paid"', '"PAID"')])
      expect(await post(altered, signature)).toBe(400);
    await expectOpen();
  });

  it.each([
    ['another sum', { amount_total: 1 }],
    ['another currency', { currency: 'usd' }],
    ['nothing paid', { payment_status: 'unpaid' }],
    ['an unknown session', { id: 'cs_unknown', client_reference_id: 'nobody' }],
    ['our payment under a foreign session', { id: 'cs_foreign' }]
  ])('truly signed but about %s change nothing', async (_, changes) => {
    const session = await begin();
    await fake.pay(session.id);
    const event = lastEvent();
    expect(await post({ ...event, data: { object: { ...session, ...changes } } })).toBe(200);
    await expectOpen();
  });

  it('of other kinds are taken and left', async () => {
    expect(
      await post({ id: 'evt_x', object: 'event', type: 'customer.created', created: 1, data: { object: {} } })
    ).toBe(200);
    expect(await cast.db('payment_events')).toMatchObject([{ outcome: 'not for us' }]);
  });

  it('that are lost are found by asking, and count once when they come after all', async () => {
    const session = await begin();
    await fake.pay(session.id);
    expect(await cardPayments.askAbout('all')).toBe(1);
    expect(await account()).toMatchObject({ received: 50_000, depositMissing: 0 });
    await post(lastEvent());
    await cardPayments.askAbout('all');
    expect(await account()).toMatchObject({ received: 50_000 });
    expect(await receipts()).toHaveLength(1);
  });

  it('find a payment whose session could not be noted before the server died', async () => {
    const session = await begin();
    await cast.db('payments').update({ provider_session: null });
    await fake.pay(session.id);
    await post(lastEvent());
    expect(await account()).toMatchObject({ received: 50_000 });
  });
});

describe('money that goes back to the card', () => {
  const pay = async () => {
    const session = await begin();
    await fake.pay(session.id);
    await post(lastEvent());
    return (await account()).payments.find(({ kind }) => kind === 'deposit')!.id;
  };

  it('is asked for once, counts, and has a receipt', async () => {
    const of = await pay();
    const id = newId();
    await cardPayments.refund(scope(), order, { id, of, amount: 20_000 });
    await cardPayments.refund(scope(), order, { id, of, amount: 20_000 });
    expect(fake.refunds.size).toBe(1);
    expect(await account()).toMatchObject({ received: 50_000, refunded: 20_000, owed: 70_000 });
    expect(await receipts()).toHaveLength(2);
    await expect(cardPayments.refund(scope(), order, { id: newId(), of, amount: 30_001 })).rejects.toThrow(
      /left/
    );
  });

  it('waits when the host is away or slow, never goes twice, and is money again when it fails', async () => {
    const of = await pay();
    fake.down = true;
    const id = newId();
    await cardPayments.refund(scope(), order, { id, of, amount: 20_000 });
    expect(await account()).toMatchObject({ refunded: 0 });
    fake.down = false;
    fake.refundStatus = 'pending';
    await cardPayments.askAbout('all');
    await cardPayments.askAbout('all');
    expect(fake.refunds.size).toBe(1);
    const [made] = [...fake.refunds.values()];
    const told = (eventId: string, status: string): FakeEvent => ({
      id: eventId,
      object: 'event',
      type: 'refund.updated',
      created: 1,
      data: { object: { ...made!, status } }
    });
    await post(told('evt_a', 'succeeded'));
    await post(told('evt_b', 'succeeded'));
    expect(await account()).toMatchObject({ refunded: 20_000 });
    await post(told('evt_c', 'failed'));
    await post(told('evt_d', 'succeeded'));
    expect(await account()).toMatchObject({ refunded: 0, owed: 50_000 });
  });

  it('made on the card host’s own pages is written down too', async () => {
    const of = await pay();
    const { provider_payment } = await cast.db('payments').where({ id: of }).first();
    const object = {
      id: 're_there',
      object: 'refund',
      amount: 5000,
      currency: 'eur',
      payment_intent: provider_payment,
      status: 'succeeded',
      metadata: {}
    };
    await post({ id: 'evt_r', object: 'event', type: 'refund.created', created: 1, data: { object } });
    await post({ id: 'evt_s', object: 'event', type: 'refund.updated', created: 1, data: { object } });
    expect(await account()).toMatchObject({ refunded: 5000, owed: 55_000 });
  });

  it('is refused for money that did not come by card', async () => {
    const id = newId();
    await payments.recordByHand(scope(), order, {
      id,
      kind: 'other',
      method: 'cash',
      amount: 1000,
      day: '2026-05-31',
      note: '',
      receiptTo: null
    });
    await expect(cardPayments.refund(scope(), order, { id: newId(), of: id, amount: 500 })).rejects.toThrow(
      /card/
    );
  });
});
