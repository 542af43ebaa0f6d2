import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { cheapest, fits } from '$lib/lay/trial';
import * as clothLengths from '$lib/server/cloth-lengths';
import * as clothTrials from '$lib/server/cloth-trials';
import * as clothWidths from '$lib/server/cloth-widths';
import { registerAllJobs } from '$lib/server/job-kinds';
import { JobRunner } from '$lib/server/job-runner';
import * as jobs from '$lib/server/jobs';
import * as jointLays from '$lib/server/joint-lays';
import { newId } from '$lib/server/ids';
import * as layRelease from '$lib/server/lay-release';
import * as lays from '$lib/server/lays';
import { COMMON_EFFICIENCY, kindsOf, pastEfficiency } from '$lib/server/past-efficiency';
import { load } from '../../src/routes/(app)/orders/[id]/cloth/[cloth]/+page.server';
import { eventFor, makeCast, type Cast } from './cast';
import { good, makeOrder, type OrderRows } from './lay-orders';

let cast: Cast;
let rows: OrderRows;
let number = 300;
beforeAll(async () => {
  cast = await makeCast();
  registerAllJobs();
});
afterAll(() => cast.close());
beforeEach(async () => {
  rows = await makeOrder(cast.here.owner.scope, { number: number++ });
});

const owner = () => cast.here.owner.scope;
const measureIn = (name: string, changes: Partial<clothLengths.LengthInput> = {}) =>
  clothLengths.create(owner(), rows.main, {
    kind: 'remnant',
    name,
    length: 3000,
    usableWidth: 980,
    typed: { length: '3 m', usableWidth: '98 cm' },
    outline: null,
    batch: '',
    place: '',
    note: '',
    price: null,
    ...changes
  });
const ask = (question: clothTrials.TrialQuestion) =>
  clothTrials.create(owner(), { order: rows.order, cloth: rows.main, question, seconds: 0.5 });
const told = async (question: clothTrials.TrialQuestion) =>
  (await clothTrials.read(owner(), rows.order, rows.main, question))!;
/** Another order of the same cloth. */
async function otherOrder(): Promise<OrderRows> {
  const other = await makeOrder(owner(), { number: number++ });
  await cast
    .db('order_item_cloths')
    .where({ order_item_id: other.item, role: 'main' })
    .update({ cloth_id: rows.main });
  return other;
}

describe('what would it fit on?', () => {
  it('tries every length that no other order has, and a lay can be made of what was found', async () => {
    const roll = await measureIn('Roll', { kind: 'roll', length: 20_000 });
    const snug = await measureIn('Snug', { length: 900 });
    const short = await measureIn('Short', { length: 400 });
    const narrow = await measureIn('Narrow', { usableWidth: 140 });
    // As large as the snug one, but of its upper half only a strip is there.
    const odd = await measureIn('Odd', {
      length: 900,
      outline: [
        { x: 0, y: 0 },
        { x: 900, y: 0 },
        { x: 900, y: 120 },
        { x: 0, y: 120 }
      ]
    });
    const taken = await measureIn('Taken');
    const other = await otherOrder();
    await clothLengths.reserve(owner(), taken, { version: 1, orderId: other.order });

    await ask('lengths');
    await expect(ask('lengths')).rejects.toMatchObject({ status: 409, type: 'trial-running' });
    await new JobRunner().drain();
    const { state, tried, of } = await told('lengths');
    expect([state, of]).toEqual(['done', 5]);
    const by = new Map(tried.map((one) => [one.id, one]));
    expect(fits(by.get(roll)!)).toBe(true);
    expect(fits(by.get(snug)!)).toBe(true);
    expect(by.get(short)).toMatchObject({ hopeless: expect.stringContaining('long') });
    expect(by.get(narrow)).toMatchObject({ hopeless: expect.stringContaining('wide') });
    expect(by.get(odd)!.leftOver).toBeGreaterThan(0);
    expect(by.has(taken)).toBe(false);

    const { onLengths } = (await load(
      eventFor({ locals: cast.here.cutter.locals, params: { id: rows.order, cloth: rows.main } })
    )) as { onLengths: { tried: { id: string }[] } };
    // The remnant of which least is left over first, what can't do last.
    expect(onLengths.tried.slice(0, 2).map(({ id }) => id)).toEqual([snug, roll]);

    const made = await clothTrials.takeLength(owner(), { order: rows.order, cloth: rows.main }, snug);
    const lay = await lays.read(owner(), made.id);
    expect(lay.document.strip.given?.id).toBe(snug);
    expect((await lays.check(owner(), made.id, lay.version)).verdict.findings).toEqual([]);
  });

  it('has nothing to try where nothing is at hand', async () => {
    await expect(ask('lengths')).rejects.toMatchObject({ status: 400 });
  });

  it('stops with what it has, and belongs to its studio', async () => {
    await measureIn('One');
    const { job } = await ask('lengths');
    await expect(jobs.read(cast.elsewhere.owner.scope, job)).rejects.toMatchObject({ status: 404 });
    await jobs.stop(owner(), job);
    expect((await told('lengths')).state).toBe('stopped');
    await expect(
      clothTrials.create(cast.elsewhere.owner.scope, {
        order: rows.order,
        cloth: rows.main,
        question: 'widths',
        seconds: 1
      })
    ).rejects.toMatchObject({ status: 404 });
  });
});

describe('the width table', () => {
  it('settles the same pieces on each width; the cheapest is marked, and cutters see no cost', async () => {
    const width = (usableWidth: number, minor: number) =>
      clothWidths.create(owner(), rows.main, {
        seller: '',
        fullWidth: usableWidth + 40,
        usableWidth,
        buyStep: 100,
        price: { minor, unit: 'metre' }
      });
    const wide = await width(1400, 4_000_123);
    const narrow = await width(500, 100);
    await ask('widths');
    await new JobRunner().drain();
    const { tried } = await told('widths');
    expect(tried.map(({ id }) => id)).toEqual(['own', narrow, wide]);
    for (const one of tried) {
      expect(fits(one)).toBe(true);
      expect(one.leastLength).toBeLessThanOrEqual(one.lengthUsed);
      expect(one.toBuy.total).toBeGreaterThanOrEqual(one.lengthUsed + 40);
    }
    const view = async (locals: App.Locals) =>
      (await load(eventFor({ locals, params: { id: rows.order, cloth: rows.main } }))) as {
        onWidths: { tried: { id: string; cost: number | null; cheapest: boolean }[] };
      };
    const seen = (await view(cast.here.owner.locals)).onWidths.tried;
    expect(seen.filter((one) => one.cheapest).map(({ id }) => id)).toEqual([narrow]);
    const blind = await view(cast.here.cutter.locals);
    expect(blind.onWidths.tried.every(({ cost }) => cost === null)).toBe(true);
    expect(blind.onWidths.tried.some((one) => one.cheapest)).toBe(false);
    expect(JSON.stringify(blind)).not.toContain('4000123');
  });
});

describe('the cheapest', () => {
  it('counts only what fits and has a price', () => {
    const one = (id: string, leftOver: number, total: number) =>
      ({ id, leftOver, hopeless: null, toBuy: { total } }) as Parameters<typeof cheapest>[0][number];
    const tried = [one('a', 0, 900), one('b', 0, 700), one('c', 1, 100)];
    const cost: Record<string, number | null> = { a: 10, b: 10, c: 1 };
    expect(cheapest(tried, ({ id }) => cost[id]!)?.id).toBe('b');
    expect(cheapest(tried, () => null)).toBeNull();
  });
});

describe('an estimate before there is a lay', () => {
  it('goes by common practice first, then by what the studio’s lays reached', async () => {
    const studio = cast.elsewhere.owner.scope;
    const first = await makeOrder(studio, { number: 1 });
    await cast.db('styles').where({ studio_id: studio.studio }).update({ kind: 'Bodice' });
    const kinds = await kindsOf(studio, first.order);
    expect(kinds).toEqual(['Bodice']);
    expect(await pastEfficiency(studio, kinds)).toEqual({
      efficiency: COMMON_EFFICIENCY,
      lays: 0,
      of: 'practice'
    });
    const { id } = await lays.create(studio, { orderId: first.order, clothId: first.main });
    const { version, document } = await lays.read(studio, id);
    await lays.save(studio, id, { version, saveId: newId(), document: good(document) });
    await layRelease.release(studio, id, { version: version + 1, name: 'Go' });
    const { verdict } = await lays.read(studio, id);
    const past = await pastEfficiency(studio, kinds);
    expect(past).toMatchObject({ lays: 1, of: 'kind' });
    expect(past.efficiency).toBeCloseTo(verdict!.readings.efficiency!, 9);
    expect((await pastEfficiency(studio, ['Coat'])).of).toBe('studio');
  });
});

describe('joint lays', () => {
  it('are offered the orders that still need the cloth', async () => {
    const other = await otherOrder();
    const numbers = async () => (await jointLays.openNeeds(owner(), rows.main)).map(({ id }) => id);
    expect(await numbers()).toEqual([rows.order, other.order]);
    expect(await jointLays.openNeeds(cast.elsewhere.owner.scope, rows.main)).toEqual([]);
    const { id } = await lays.create(owner(), { orderId: other.order, clothId: rows.main });
    const { document } = await lays.read(owner(), id);
    await lays.save(owner(), id, { version: 1, saveId: newId(), document: good(document) });
    await layRelease.release(owner(), id, { version: 2, name: 'Go' });
    expect(await numbers()).toEqual([rows.order]);
  });

  it('share their cost by area, to the last minor unit, and only for who may see prices', async () => {
    const other = await otherOrder();
    await cast.db('order_items').where({ id: other.item }).update({ quantity: 2 });
    const { id } = await lays.create(owner(), {
      orderId: rows.order,
      clothId: rows.main,
      with: [other.order]
    });
    await lays.save(owner(), id, {
      version: 1,
      saveId: newId(),
      document: good((await lays.read(owner(), id)).document)
    });
    const shares = await jointLays.sharesOf(owner(), await lays.read(owner(), id));
    expect(shares.map(({ order }) => order.id)).toEqual([rows.order, other.order]);
    // Same style, one garment against two.
    expect(shares[0]!.share).toBeCloseTo(1 / 3, 9);
    const lay = await lays.read(owner(), id);
    const { verdict } = await lays.check(owner(), id, lay.version);
    const total = Math.round((verdict.readings.clothToBuy.total / 1000) * 1234);
    expect(shares.reduce((sum, share) => sum + share.cost!, 0)).toBe(total);
    const blind = cast.here.cutter.scope;
    for (const share of await jointLays.sharesOf(blind, await lays.read(blind, id)))
      expect(share).not.toHaveProperty('cost');
  });
});
