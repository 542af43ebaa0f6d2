import fc from 'fast-check';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { clothCost } from '$lib/cloth/cost';
import { readingsOf } from '$lib/lay/readings';
import { newId } from '$lib/server/ids';
import * as lays from '$lib/server/lays';
import { moneyDefaults } from '$lib/server/money-defaults';
import * as payments from '$lib/server/payments';
import { emptySheet } from '$lib/server/price-sheet';
import * as prices from '$lib/server/prices';
import * as quotes from '$lib/server/quotes';
import { actions } from '../../src/routes/(app)/settings/prices/+page.server';
import { ending, eventFor, makeCast, type Cast } from './cast';
import { good, makeOrder } from './lay-orders';
import { agreeTo, makeQuoted, words } from './money';

let cast: Cast;
beforeEach(async () => {
  cast = await makeCast();
});
afterEach(() => cast.close());
const scope = () => cast.here.owner.scope;
const cash = (amount: number, changes: Partial<payments.ByHand> = {}): payments.ByHand => ({
  id: newId(),
  kind: 'other',
  method: 'cash',
  amount,
  day: '2026-05-31',
  note: '',
  receiptTo: null,
  ...changes
});

describe('the price of an order', () => {
  it('takes its cloth from the chosen lay: length to buy × price', async () => {
    const rows = await makeOrder(scope());
    expect((await prices.read(scope(), rows.order)).build.complete).toBe(false);
    const { id } = await lays.create(scope(), { orderId: rows.order, clothId: rows.main });
    await lays.save(scope(), id, {
      version: 1,
      saveId: newId(),
      document: good((await lays.read(scope(), id)).document)
    });
    expect((await prices.read(scope(), rows.order)).cloths[0]!.length).toBeNull();
    await lays.choose(scope(), id);
    const price = await prices.read(scope(), rows.order);
    // 700 mm used, 20 mm at each end, bought in steps of 100 mm: 0.8 m at 12.34.
    expect(price.cloths[0]).toMatchObject({ length: 800, price: { minor: 1234, unit: 'metre' } });
    expect(price.build.cloths[0]).toEqual({ computed: 987, byHand: null, amount: 987 });
    expect(price.build.cloths[1]!.computed).toBeNull();

    await prices.save(scope(), rows.order, 0, {
      ...emptySheet,
      cloths: { [rows.lining]: { byHand: null, own: true }, [rows.main]: { byHand: 1000, own: false } },
      minutes: 60,
      rate: 4000
    });
    const written = await prices.read(scope(), rows.order);
    expect(written.build).toMatchObject({ cloth: 1000, complete: true, total: 5000 });
    expect(written.build.cloths).toEqual([
      { computed: 987, byHand: 1000, amount: 1000 },
      { computed: 0, byHand: null, amount: 0 }
    ]);
    const number = await quotes.create(scope(), rows.order, words);
    const { document } = await quotes.read(scope(), rows.order, number);
    expect(document).toMatchObject({ making: 4000, net: 5000, deposit: 2500 });
    expect(document.cloths.map(({ own, length }) => [own, length])).toEqual([
      [false, 800],
      [true, null]
    ]);
  });

  it('bears its part of a joint lay, and the parts add up to the whole', async () => {
    const one = await makeOrder(scope(), { number: 7 });
    const two = await makeOrder(scope(), { number: 8, quantity: 2 });
    await cast.db('order_item_cloths').where({ cloth_id: two.main }).update({ cloth_id: one.main });
    const { id } = await lays.create(scope(), {
      orderId: one.order,
      clothId: one.main,
      with: [two.order]
    });
    await lays.save(scope(), id, {
      version: 1,
      saveId: newId(),
      document: good((await lays.read(scope(), id)).document)
    });
    await lays.choose(scope(), id);
    const parts = await Promise.all(
      [one, two].map(async ({ order }) => (await prices.read(scope(), order)).build.cloths[0]!.computed!)
    );
    const lay = await lays.read(scope(), id);
    const whole = clothCost(readingsOf(lay.document, lay.panels).clothToBuy.total, 1234, 'metre');
    expect(parts[0]! + parts[1]!).toBe(whole);
    expect(parts[1]! / parts[0]!).toBeCloseTo(2, 1);
  });

  it('begins with what the studio has set, and an order sets otherwise; kept quotes stay', async () => {
    const { order } = await makeQuoted(scope());
    const post = (form: Record<string, string>) =>
      ending(() => actions.default!(eventFor<never>({ locals: cast.here.owner.locals, form })));
    const form = {
      ...{ hourly: '42,50', overhead: '15', margin: '12.5 %', taxMode: 'included', taxRate: '20' },
      ...{ depositShare: '30', roundTo: '5', validDays: '21', fittings: '3', letterhead: 'Row 3' }
    };
    expect(await post({ ...form, margin: 'much', roundTo: '0' })).toMatchObject({
      value: { status: 400, data: { errors: { margin: expect.any(String), roundTo: expect.any(String) } } }
    });
    expect((await moneyDefaults(scope())).hourly).toBe(0);
    expect(await post(form)).toMatchObject({ status: 303 });
    expect(await moneyDefaults(scope())).toMatchObject({ hourly: 4250, roundTo: 500, fittings: 3 });
    expect(await moneyDefaults(cast.elsewhere.owner.scope)).toMatchObject({ hourly: 0, depositShare: 5000 });

    await prices.save(scope(), order, 1, { ...emptySheet, minutes: 60, priceByHand: null, marginShare: 0 });
    const { build, terms } = await prices.read(scope(), order);
    // 42.50 + 15 % = 48.875 → 48.88, in steps of 5.00: 50.00, of which 20 % tax 8.33; a deposit of 30 %.
    expect(build).toMatchObject({ overhead: { amount: 638 }, total: 5000, tax: 833, deposit: 1500 });
    expect(terms.margin).toBe(0);
    expect((await quotes.read(scope(), order, 1)).document).toMatchObject({
      total: 100_000,
      studio: { letterhead: '' }
    });
  });

  it('is saved by version: who is late is told, and nothing is overwritten', async () => {
    const { order } = await makeOrder(scope());
    await prices.save(scope(), order, 0, { ...emptySheet, rate: 1 });
    for (const version of [0, 2])
      await expect(prices.save(scope(), order, version, emptySheet)).rejects.toThrow(/typing is kept/);
    await prices.save(scope(), order, 1, { ...emptySheet, rate: 2 });
    expect((await prices.read(scope(), order)).sheet.rate).toBe(2);
  });
});

describe('money by hand', () => {
  it('counts once when its form is sent twice, and its receipt too', async () => {
    const { order } = await makeQuoted(scope());
    await agreeTo(scope(), order);
    const paid = cash(50_000, { kind: 'deposit', receiptTo: 'ada@far.example' });
    await payments.recordByHand(scope(), order, paid);
    await payments.recordByHand(scope(), order, paid);
    expect(await payments.account(scope(), order)).toMatchObject({ received: 50_000, depositMissing: 0 });
    expect(await cast.db('messages').where({ template: 'receipt' })).toHaveLength(1);
    expect(await payments.depositOf(scope(), order)).toEqual({
      agreed: true,
      asked: 50_000,
      missing: 0,
      currency: 'EUR'
    });
  });

  it('goes back at most once over, and not from another order', async () => {
    const one = await makeQuoted(scope(), 7);
    const two = await makeQuoted(scope(), 8);
    const paid = cash(1000);
    await payments.recordByHand(scope(), one.order, paid);
    const refund = (order: string, amount: number) =>
      payments.refundByHand(scope(), order, {
        id: newId(),
        of: paid.id,
        amount,
        method: 'cash',
        day: '2026-06-01'
      });
    await expect(refund(two.order, 1)).rejects.toThrow(/no such payment/i);
    await refund(one.order, 600);
    await expect(refund(one.order, 401)).rejects.toThrow(/left/);
    await refund(one.order, 400);
    expect(await payments.account(scope(), one.order)).toMatchObject({ kept: 0, refunded: 1000 });
  });
});

describe('money owed and paid', () => {
  it('adds up per order and over all, whatever is done in whatever order', async () => {
    const numbers = [7, 8, 9];
    const all = await Promise.all(numbers.map(async (number) => (await makeQuoted(scope(), number)).order));
    const deed = fc.record({
      which: fc.integer({ min: 0, max: 2 }),
      what: fc.constantFrom('agree', 'requote', 'pay', 'give back'),
      amount: fc.integer({ min: 1, max: 90_000 })
    });
    const deeds = fc.sample(deed, { numRuns: 60, seed: 615 });
    const paid = new Map<string, payments.ByHand[]>(all.map((order) => [order, []]));
    const expected = new Map(all.map((order) => [order, { agreed: 0, received: 0, refunded: 0 }]));
    for (const { which, what, amount } of deeds) {
      const order = all[which]!;
      const sum = expected.get(order)!;
      const [newest] = await quotes.list(scope(), order);
      if (what === 'agree' && newest!.state === 'sent') {
        await agreeTo(scope(), order, newest!.number);
        sum.agreed = newest!.total;
      } else if (what === 'requote') {
        const { version } = await prices.read(scope(), order);
        await prices.save(scope(), order, version, { ...emptySheet, priceByHand: amount });
        const number = await quotes.create(scope(), order, words);
        await quotes.send(scope(), order, number, 'ada@far.example');
      } else if (what === 'pay') {
        const one = cash(amount);
        paid.get(order)!.push(one);
        await payments.recordByHand(scope(), order, one);
        sum.received += amount;
      } else if (what === 'give back') {
        const of = paid.get(order)!.at(-1);
        if (!of) continue;
        const refund = { id: newId(), of: of.id, amount, method: 'cash', day: '2026-06-01' } as const;
        const went = await payments.refundByHand(scope(), order, refund).then(
          () => true,
          () => false
        );
        if (went) sum.refunded += amount;
      }
    }
    for (const order of all) {
      const account = await payments.account(scope(), order);
      const { agreed, received, refunded } = expected.get(order)!;
      expect(account).toMatchObject({ agreed, received, refunded, owed: agreed - received + refunded });
    }
    const sums = [...expected.values()];
    const over = (name: 'agreed' | 'received' | 'refunded') => sums.reduce((sum, one) => sum + one[name], 0);
    expect(over('agreed') > 0 && over('received') > 0 && over('refunded') > 0).toBe(true);
    expect(await payments.totals(scope())).toEqual([
      {
        currency: 'EUR',
        agreed: over('agreed'),
        received: over('received'),
        refunded: over('refunded'),
        owed: over('agreed') - over('received') + over('refunded')
      }
    ]);
    expect(await payments.totals(cast.elsewhere.owner.scope)).toEqual([]);
  });
});
