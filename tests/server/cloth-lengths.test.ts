import sharp from 'sharp';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import type { LayDocument } from '$lib/lay/document';
import * as clothLengths from '$lib/server/cloth-lengths';
import { lengthForm, flawForm } from '$lib/server/cloth-length-form';
import * as files from '$lib/server/files';
import { newId } from '$lib/server/ids';
import * as layRelease from '$lib/server/lay-release';
import * as lays from '$lib/server/lays';
import { createPicture } from '$lib/server/pictures';
import { makeCast, type Cast } from './cast';
import { good, makeOrder, type OrderRows } from './lay-orders';

let cast: Cast;
let rows: OrderRows;
beforeAll(async () => {
  cast = await makeCast();
});
afterAll(() => cast.close());
let number = 100;
beforeEach(async () => {
  rows = await makeOrder(cast.here.owner.scope, { number: number++ });
});

const owner = () => cast.here.owner.scope;
const roll = (changes: Partial<clothLengths.LengthInput> = {}): clothLengths.LengthInput => ({
  kind: 'roll',
  name: 'Roll 3',
  length: 3000,
  usableWidth: 980,
  typed: { length: '3 m', usableWidth: '98 cm' },
  outline: null,
  batch: 'B7',
  place: '',
  note: '',
  price: { minor: 4321, unit: 'metre' },
  ...changes
});
const flaw = { fromEnd: 500, fromSelvedge: 200, along: 100, across: 10, hole: false, note: 'slub' };
const measureIn = (changes: Partial<clothLengths.LengthInput> = {}) =>
  clothLengths.create(owner(), rows.main, roll(changes));
const layOn = async (length: string | null, order = rows.order) =>
  (await lays.create(owner(), { orderId: order, clothId: rows.main, length })).id;
const save = async (id: string, change: (document: LayDocument) => LayDocument) => {
  const { version, document } = await lays.read(owner(), id);
  return lays.save(owner(), id, { version, saveId: newId(), document: change(document) });
};
/** Another order of the same cloth. */
async function otherOrder(): Promise<OrderRows> {
  const other = await makeOrder(owner(), { number: number++ });
  await cast
    .db('order_item_cloths')
    .where({ order_item_id: other.item, role: 'main' })
    .update({ cloth_id: rows.main });
  return { ...other, main: rows.main };
}

describe('lengths at hand', () => {
  it('are told with their flaws and four-point score, to cutters without prices', async () => {
    const id = await measureIn();
    await clothLengths.addFlaw(owner(), id, flaw);
    const [told] = await clothLengths.list(owner(), rows.main);
    expect(told).toMatchObject({ id, state: 'free', price: { minor: 4321, unit: 'metre' }, version: 2 });
    // 100 mm is more than 3 in and up to 6 in: 2 points on 3 m of 980 mm.
    expect(told!.score.points).toBe(2);
    expect(told!.score.perSquareMetres).toBeCloseTo((2 * 100_000) / (3 * 980), 6);
    const [seen] = await clothLengths.list(cast.here.cutter.scope, rows.main);
    expect(seen).not.toHaveProperty('price');
    expect(JSON.stringify(seen)).not.toContain('4321');
  });

  it('of another studio are not there', async () => {
    const id = await measureIn();
    const stranger = cast.elsewhere.owner.scope;
    await expect(clothLengths.read(stranger, id)).rejects.toMatchObject({ status: 404 });
    await expect(clothLengths.addFlaw(stranger, id, flaw)).rejects.toMatchObject({ status: 404 });
    await expect(clothLengths.create(stranger, rows.main, roll())).rejects.toMatchObject({ status: 404 });
    expect(await clothLengths.list(stranger, rows.main)).toEqual([]);
  });

  it('cost nothing when they are the client’s own, whatever was typed', async () => {
    const id = await measureIn({ kind: 'client' });
    expect((await clothLengths.read(owner(), id)).price).toEqual({ minor: 0, unit: 'metre' });
  });

  it('keep the price that a cutter can’t see when a cutter measures them anew', async () => {
    const id = await measureIn();
    await clothLengths.update(cast.here.cutter.scope, id, 1, roll({ price: null, name: 'Roll 4' }));
    expect(await clothLengths.read(owner(), id)).toMatchObject({ name: 'Roll 4', price: { minor: 4321 } });
  });

  it('are for one order at a time, by version', async () => {
    const id = await measureIn();
    const other = await otherOrder();
    const outcomes = await Promise.allSettled(
      [rows.order, other.order].map((orderId) => clothLengths.reserve(owner(), id, { version: 1, orderId }))
    );
    expect(outcomes.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
    const taken = await clothLengths.read(owner(), id);
    expect(taken.state).toBe('reserved');
    const { number: taker } = await cast.db('orders').where({ id: taken.order!.id }).first('number');
    expect(taken.order!.number).toBe(taker);
    const loser = taken.order!.id === rows.order ? other.order : rows.order;
    await expect(
      clothLengths.reserve(owner(), id, { version: taken.version, orderId: loser })
    ).rejects.toMatchObject({ status: 409, type: 'length-reserved' });
    await expect(clothLengths.release(owner(), id, 1)).rejects.toMatchObject({ type: 'length-out-of-date' });
    await clothLengths.release(owner(), id, taken.version);
    await clothLengths.reserve(owner(), id, { version: taken.version + 1, orderId: loser });
    expect((await clothLengths.read(owner(), id)).order!.id).toBe(loser);
  });

  it('become shorter when they are cut from, their flaws move, and are gone when nothing is left', async () => {
    const id = await measureIn();
    await clothLengths.addFlaw(owner(), id, flaw);
    await clothLengths.addFlaw(owner(), id, { ...flaw, fromEnd: 2500 });
    await clothLengths.use(owner(), id, { version: 3, left: 1000 });
    const left = await clothLengths.read(owner(), id);
    expect(left).toMatchObject({ length: 1000, state: 'free' });
    expect(left.flaws.map(({ fromEnd }) => fromEnd)).toEqual([500]);
    await expect(clothLengths.use(owner(), id, { version: left.version, left: 2000 })).rejects.toMatchObject({
      status: 400
    });
    const offcut = await clothLengths.keepOffcut(owner(), id, {
      ...roll({ name: 'Bag 1', length: 300 }),
      outline: null
    });
    expect(await clothLengths.read(owner(), offcut)).toMatchObject({
      kind: 'remnant',
      batch: 'B7',
      length: 300
    });
    await clothLengths.use(owner(), id, { version: left.version, left: 0 });
    expect((await clothLengths.read(owner(), id)).state).toBe('used');
    await expect(
      clothLengths.reserve(owner(), id, { version: left.version + 1, orderId: rows.order })
    ).rejects.toMatchObject({ type: 'length-used' });
  });
});

describe('the forms', () => {
  const studio = { lengthUnit: 'cm' as const, currency: 'EUR' };
  const typed = { kind: 'remnant', name: 'Bag', length: '100', usableWidth: '60' };

  it('take an edge as typed corners', () => {
    const form = lengthForm(studio).parse({ ...typed, outline: '0; 0\n0; 60\n100; 30 cm' });
    // Once around counter-clockwise, whichever way it was typed.
    expect(form.outline).toEqual([
      { x: 1000, y: 300 },
      { x: 0, y: 600 },
      { x: 0, y: 0 }
    ]);
  });

  it.each([
    ['0; 0\n100; 60\n100; 0\n0; 60', /crosses itself/],
    ['0; 0\n100; 0\n120; 50', /outside the length and width/],
    ['0; 0\n100; 0', /at least 3 corners/],
    ['0; 0\n100 0\n3; 4', /Corner 2 is “100 0”/]
  ])('say what is wrong with an edge', (outline, message) => {
    const parsed = lengthForm(studio).safeParse({ ...typed, outline });
    expect(parsed.error!.issues).toMatchObject([
      { path: ['outline'], message: expect.stringMatching(message) }
    ]);
  });

  it('measure a flaw from either selvedge', () => {
    const on = { length: 1000, usableWidth: 600 };
    const flaw = { fromEnd: '20', fromSelvedge: '5', along: '1', across: '2' };
    expect(flawForm(studio, on).parse(flaw)).toMatchObject({ fromEnd: 200, fromSelvedge: 50 });
    expect(flawForm(studio, on).parse({ ...flaw, selvedge: 'far' })).toMatchObject({ fromSelvedge: 550 });
    expect(flawForm(studio, on).safeParse({ ...flaw, fromEnd: '120' }).success).toBe(false);
  });
});

describe('a photo', () => {
  it('is written anew, smaller, without what the camera added', async () => {
    const bytes = await sharp({ create: { width: 2400, height: 1200, channels: 3, background: '#6A4C7D' } })
      .withExif({ IFD0: { Copyright: 'a secret place' } })
      .jpeg()
      .toBuffer();
    const kept = await files.read(owner(), (await createPicture(owner(), { name: 'roll.jpg', bytes })).id);
    const told = await sharp(kept.bytes).metadata();
    expect(told).toMatchObject({ format: 'webp', width: 1600, height: 800 });
    expect(told.exif).toBeUndefined();
  });

  it.each([
    ['markup', '<svg xmlns="http://www.w3.org/2000/svg"/>'],
    ['rubbish', 'GIF89a nothing']
  ])('that is %s is refused', async (_, content) => {
    const bytes = new TextEncoder().encode(content);
    await expect(createPicture(owner(), { name: 'x.jpg', bytes })).rejects.toMatchObject({
      status: 415,
      type: 'not-a-photo'
    });
  });
});

describe('a lay on a length', () => {
  it('has its length, width, price and flaws, after the end allowance', async () => {
    const length = await measureIn();
    await clothLengths.addFlaw(owner(), length, flaw);
    const lay = await lays.read(owner(), await layOn(length));
    const { strip } = lay.document;
    expect(strip).toMatchObject({ length: 2960, usableWidth: 980, fullWidth: 1020 });
    expect(strip.given).toMatchObject({ id: length, name: 'Roll 3', batch: 'B7', outline: null });
    expect(strip.flaws).toMatchObject([{ x: 480, y: 200, along: 100, across: 10, note: 'slub' }]);
    expect(lay.cloth.price).toEqual({ minor: 4321, unit: 'metre', currency: 'EUR' });
    const seen = await lays.read(cast.here.cutter.scope, lay.id);
    expect(seen.cloth).not.toHaveProperty('price');
  });

  it('can’t claim other measures than the length has, but other ends', async () => {
    const id = await layOn(await measureIn());
    await expect(
      save(id, (document) => ({ ...document, strip: { ...document.strip, length: 9000 } }))
    ).rejects.toMatchObject({ status: 400, type: 'not-of-this-lay' });
    await save(id, (document) => ({
      ...document,
      strip: { ...document.strip, length: 2940, endAllowance: { start: 40, end: 20 } }
    }));
    expect((await lays.read(owner(), id)).document.strip).toMatchObject({
      length: 2940,
      endAllowance: { start: 40, end: 20 }
    });
  });

  it('follows a flaw that is noted later, and the check finds the piece on it', async () => {
    const length = await measureIn();
    const id = await layOn(length);
    await save(id, good);
    await clothLengths.addFlaw(owner(), length, { ...flaw, fromEnd: 120, fromSelvedge: 60 });
    const { version } = await lays.read(owner(), id);
    const { verdict } = await lays.check(owner(), id, version);
    expect(verdict.findings.map(({ kind }) => kind)).toContain('flaw');
  });

  it('is shortened by shrinking the cloth first, and its flaws move', async () => {
    await cast
      .db('cloths')
      .where({ id: rows.main })
      .update({ shrink_treatment: 'shrunkFirst', shrink_warp: 0.05, shrink_weft: 0.1 });
    const length = await measureIn();
    await clothLengths.addFlaw(owner(), length, flaw);
    const { strip } = (await lays.read(owner(), await layOn(length))).document;
    expect(strip).toMatchObject({ length: 2850 - 40, usableWidth: 882 });
    expect(strip.flaws).toMatchObject([{ x: 475 - 20, y: 180, along: 95, across: 9 }]);
    const bought = (await lays.read(owner(), await layOn(null))).document.strip;
    expect(bought).toMatchObject({ length: null, usableWidth: 900, fullWidth: 936 });
  });

  it('has enlarged panels on cloth that shrinks later, in book, area and revision alike', async () => {
    const plain = await lays.read(owner(), await layOn(null));
    await cast
      .db('cloths')
      .where({ id: rows.main })
      .update({ shrink_treatment: 'enlarged', shrink_warp: 0.05, shrink_weft: 0 });
    const grown = await lays.read(owner(), plain.id);
    const long = (lay: lays.Lay) => {
      const yoke = Object.values(lay.panels).find(({ shape }) => shape.panel === 'yoke')!;
      return Math.max(...yoke.shape.cut.map(({ x }) => x)) - Math.min(...yoke.shape.cut.map(({ x }) => x));
    };
    expect(long(plain)).toBe(400);
    expect(long(grown)).toBeCloseTo(400 / 0.95, 3);
    expect(grown.document.strip.shrinkage).toEqual({ treatment: 'enlarged', warp: 0.05, weft: 0 });
  });

  it('moves to another length and back to cloth to buy, by version', async () => {
    const id = await layOn(null);
    const length = await measureIn({ length: 700 });
    const { version } = await lays.read(owner(), id);
    const wanted = { version, saveId: newId(), length };
    await lays.setLength(owner(), id, wanted);
    expect((await lays.read(owner(), id)).document.strip).toMatchObject({ length: 660, usableWidth: 980 });
    await expect(lays.setLength(owner(), id, { ...wanted, saveId: newId() })).rejects.toMatchObject({
      type: 'lay-out-of-date'
    });
    await lays.setLength(owner(), id, { version: version + 1, saveId: newId(), length: null });
    expect((await lays.read(owner(), id)).document.strip).toMatchObject({
      given: null,
      length: null,
      usableWidth: 1000
    });
  });

  it('reserves it when it is released, and no other order’s lay may have it then', async () => {
    const length = await measureIn();
    const id = await layOn(length);
    await save(id, good);
    const other = await otherOrder();
    const rival = await layOn(length, other.order);
    await save(rival, good);
    const { version } = await lays.read(owner(), id);
    await layRelease.release(owner(), id, { version, name: 'Go' });
    expect((await clothLengths.read(owner(), length)).order!.id).toBe(rows.order);
    const late = await lays.read(owner(), rival);
    await expect(
      layRelease.release(owner(), rival, { version: late.version, name: 'Go' })
    ).rejects.toMatchObject({ status: 409, type: 'length-reserved' });
    const { version: now } = await clothLengths.read(owner(), length);
    await expect(clothLengths.release(owner(), length, now)).rejects.toMatchObject({ type: 'lay-released' });
    await expect(layOn(length, other.order)).rejects.toMatchObject({ type: 'length-reserved' });
  });

  it('of the client’s own cloth is released only once its flaws are signed off', async () => {
    const length = await measureIn({ kind: 'client' });
    await clothLengths.addFlaw(owner(), length, { ...flaw, fromEnd: 2900 });
    const id = await layOn(length);
    await save(id, good);
    const { version } = await lays.read(owner(), id);
    await expect(layRelease.release(owner(), id, { version, name: 'Go' })).rejects.toMatchObject({
      type: 'flaws-not-signed'
    });
    await clothLengths.signOff(owner(), length, { version: 2, by: 'Ada' });
    await layRelease.release(owner(), id, { version, name: 'Go' });
  });

  it('takes one garment from one batch', async () => {
    const first = await layOn(await measureIn({ batch: 'B7' }));
    await save(first, good);
    const { version } = await lays.read(owner(), first);
    await layRelease.release(owner(), first, { version, name: 'Go' });
    const second = await layOn(await measureIn({ batch: 'B8' }));
    await save(second, good);
    const late = await lays.read(owner(), second);
    await expect(
      layRelease.release(owner(), second, { version: late.version, name: 'Go' })
    ).rejects.toMatchObject({ status: 409 });
  });
});

describe('a joint lay', () => {
  it('asks the pieces of every order, says whose they are, and is chosen for all of them', async () => {
    const other = await otherOrder();
    const { id } = await lays.create(owner(), {
      orderId: rows.order,
      clothId: rows.main,
      with: [other.order]
    });
    const lay = await lays.read(owner(), id);
    expect(lay.name).toBe('Joint lay 1');
    expect(lay.orders.map((order) => order.id)).toEqual([rows.order, other.order]);
    expect(lay.document.garments.map(({ orderItem }) => orderItem)).toEqual([rows.item, other.item]);
    for (const [i, { number: no }] of lay.orders.entries())
      expect(lay.document.garments[i]!.label).toContain(`No. ${no}`);
    const alone = await layOn(null, other.order);
    await lays.choose(owner(), alone);
    await lays.choose(owner(), id);
    expect((await lays.read(owner(), alone)).chosen).toBe(false);
  });

  it('is refused where one of the orders takes nothing of the cloth, and across studios', async () => {
    const stranger = await makeOrder(owner(), { number: number++ });
    await expect(
      lays.create(owner(), { orderId: rows.order, clothId: rows.main, with: [stranger.order] })
    ).rejects.toMatchObject({ status: 400 });
    const foreign = await makeOrder(cast.elsewhere.owner.scope, { number: number++ });
    await expect(
      lays.create(owner(), { orderId: rows.order, clothId: rows.main, with: [foreign.order] })
    ).rejects.toMatchObject({ status: 404 });
  });

  it('keeps a lay of one of its orders from being released beside it', async () => {
    const other = await otherOrder();
    const { id } = await lays.create(owner(), {
      orderId: rows.order,
      clothId: rows.main,
      with: [other.order]
    });
    const alone = await layOn(null, other.order);
    await save(alone, good);
    const { version } = await lays.read(owner(), alone);
    await layRelease.release(owner(), alone, { version, name: 'Go' });
    await save(id, (document) => {
      const [first, second] = document.garments.map(({ id: garment }) => garment) as [string, string];
      const placed = good(document).placements;
      return {
        ...document,
        placements: [
          ...placed.map((one) => ({ ...one, garment: first })),
          ...placed.map((one) => ({ ...one, id: `${one.id}b`, garment: second, x: one.x + 800 }))
        ]
      };
    });
    const late = await lays.read(owner(), id);
    expect((await lays.check(owner(), id, late.version)).verdict.findings).toEqual([]);
    await expect(
      layRelease.release(owner(), id, { version: late.version, name: 'Go' })
    ).rejects.toMatchObject({ type: 'other-lay-released' });
  });
});
