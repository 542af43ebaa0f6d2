import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import * as clothLengths from '$lib/server/cloth-lengths';
import * as cutting from '$lib/server/cutting';
import { database } from '$lib/server/database';
import * as lays from '$lib/server/lays';
import * as layRelease from '$lib/server/lay-release';
import { makeCast, type Cast } from './cast';
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

  it('says which pieces no longer fit a narrower cloth, and by how much', async () => {
    const { scope } = cast.here.cutter;
    const { pieces } = await cutting.ticket(scope, own.releasedLay);
    const high = pieces[0]!.box.maxY;
    expect(await cutting.tooNarrow(scope, own.releasedLay, { width: high, length: null })).toEqual([]);
    const [piece] = await cutting.tooNarrow(scope, own.releasedLay, { width: high - 12, length: null });
    expect(piece).toMatchObject({ way: 'across', over: expect.closeTo(12, 6) });
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
