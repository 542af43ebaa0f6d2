import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openChoice, spreadOf } from '$lib/cloth/spread';
import * as clothLengths from '$lib/server/cloth-lengths';
import * as cutting from '$lib/server/cutting';
import { database } from '$lib/server/database';
import { newId } from '$lib/server/ids';
import * as lays from '$lib/server/lays';
import * as layRelease from '$lib/server/lay-release';
import { makeCast, type Cast } from './cast';
import { cutPanel, makeOrder } from './lay-orders';
import { makeProps, type Props } from './props';

let cast: Cast;
let own: Props;
beforeAll(async () => {
  cast = await makeCast();
  own = await makeProps(cast.here);
});
afterAll(() => cast.close());

const nothing = { widthMet: null, flaws: '', recuts: '', offcuts: [] };

describe('the cutting room', () => {
  it('queues released lays with what is ticked off, for its own studio only', async () => {
    const { scope } = cast.here.cutter;
    const [lay] = await cutting.queue(scope);
    expect(lay).toMatchObject({ lay: own.releasedLay, ticked: 0, pieces: 1, stop: false });
    expect(JSON.stringify(lay)).not.toMatch(/price|minor/);
    expect(await cutting.queue(cast.elsewhere.owner.scope)).toEqual([]);
    await expect(cutting.ticket(cast.elsewhere.owner.scope, own.releasedLay)).rejects.toMatchObject({
      status: 404
    });
    await expect(cutting.ticket(scope, own.lay)).rejects.toMatchObject({ status: 404 });
  });

  it('takes a tick once however often it is sent, and takes it back', async () => {
    const { scope } = cast.here.cutter;
    for (let k = 0; k < 3; k++) await cutting.tick(scope, own.releasedLay, [{ placement: 'p1', cut: true }]);
    expect((await cutting.ticket(scope, own.releasedLay)).pieces.map(({ ticked }) => ticked)).toEqual([true]);
    await cutting.tick(scope, own.releasedLay, [{ placement: 'p1', cut: false }]);
    expect((await cutting.queue(scope))[0]).toMatchObject({ ticked: 0 });
    await expect(
      cutting.tick(scope, own.releasedLay, [{ placement: 'nothing', cut: true }])
    ).rejects.toMatchObject({ status: 404 });
  });

  it('says which pieces no longer fit a narrower or a shorter cloth, and by how much', async () => {
    const { scope } = cast.here.cutter;
    const { pieces } = await cutting.ticket(scope, own.releasedLay);
    const { maxX, maxY } = pieces[0]!.box;
    const ends = 40;
    expect(await cutting.unfit(scope, own.releasedLay, { width: maxY, length: maxX + ends })).toEqual([]);
    expect(await cutting.unfit(scope, own.releasedLay, { width: maxY - 12, length: null })).toEqual([
      expect.stringContaining('12 mm')
    ]);
    expect(await cutting.unfit(scope, own.releasedLay, { width: maxY, length: maxX + ends - 9 })).toEqual([
      expect.stringContaining('9 mm')
    ]);
    await expect(cutting.unfit(scope, own.releasedLay, { width: maxY, length: 30 })).rejects.toMatchObject({
      status: 400
    });
  });

  it('measures folded cloth as it is folded: what is missing of the open width is missing by half', async () => {
    const { scope } = cast.here.owner;
    const outline = [
      { x: 0, y: 0 },
      { x: 300, y: 0 },
      { x: 300, y: 100 },
      { x: 0, y: 100 }
    ];
    const front = cutPanel('front', outline, { paired: true, howMany: 2 });
    const rows = await makeOrder(scope, { number: 301, style: [front] });
    const { id } = await lays.create(scope, { orderId: rows.order, clothId: rows.main });
    const { document, version } = await lays.read(scope, id);
    const spread = spreadOf(document.strip, { ...openChoice, kind: 'lengthwise' });
    const width = document.strip.usableWidth;
    await lays.save(scope, id, {
      version,
      saveId: newId(),
      document: {
        ...document,
        strip: { ...document.strip, spread },
        placements: [
          {
            id: 'pair',
            panel: 'front',
            garment: document.garments[0]!.id,
            x: 0,
            y: width / 2 - 100,
            turn: 0,
            flip: false,
            locked: false
          }
        ]
      }
    });
    await layRelease.release(scope, id, { version: (await lays.read(scope, id)).version, name: 'Folded' });
    expect(await cutting.unfit(scope, id, { width, length: null })).toEqual([]);
    expect(await cutting.unfit(scope, id, { width: width - 200, length: null })).toEqual([
      expect.stringContaining('100 mm')
    ]);
  });

  it('records the cut once, closes the lay for good, and needs a roll before it keeps remnants', async () => {
    const { scope } = cast.here.cutter;
    await expect(
      cutting.record(scope, own.releasedLay, {
        ...nothing,
        lengthUsed: 900,
        offcuts: [{ length: 300, width: 300, place: '' }]
      })
    ).rejects.toMatchObject({ status: 400 });
    const both = await Promise.allSettled([
      cutting.record(scope, own.releasedLay, { ...nothing, lengthUsed: 912, recuts: 'inside, a slub' }),
      cutting.record(scope, own.releasedLay, { ...nothing, lengthUsed: 912 })
    ]);
    expect(both.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
    expect(await cutting.recordOf(scope, own.releasedLay)).toMatchObject({ lengthUsed: 912, by: 'Cato' });
    expect((await cutting.queue(scope)).map(({ lay }) => lay)).not.toContain(own.releasedLay);
    await expect(
      cutting.tick(scope, own.releasedLay, [{ placement: 'p1', cut: true }])
    ).rejects.toMatchObject({ status: 409 });
    await expect(layRelease.reopen(cast.here.owner.scope, own.releasedLay)).rejects.toMatchObject({
      status: 409
    });
    const { document, version } = await lays.read(scope, own.releasedLay);
    await expect(
      lays.save(cast.here.owner.scope, own.releasedLay, {
        version,
        saveId: 'late',
        document: { ...document, placements: [] }
      })
    ).rejects.toMatchObject({ status: 409 });
    expect(await database()('cut_records').where({ lay_id: own.releasedLay })).toHaveLength(1);
    expect(await clothLengths.list(scope, own.lining)).toEqual([]);
  });
});
