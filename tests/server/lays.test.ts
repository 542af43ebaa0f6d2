import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { openChoice, spreadOf } from '$lib/cloth/spread';
import type { LayDocument } from '$lib/lay/document';
import type { Problem } from '$lib/server/problem';
import * as guides from '$lib/server/guides';
import * as layFacts from '$lib/server/lay-facts';
import * as layList from '$lib/server/lay-list';
import * as layRelease from '$lib/server/lay-release';
import * as layRevisions from '$lib/server/lay-revisions';
import * as lays from '$lib/server/lays';
import { newId } from '$lib/server/ids';
import { isReplaced } from '$lib/server/replaced-panels';
import type { Scope } from '$lib/server/scope';
import { makeCast, type Cast } from './cast';
import { good, makeOrder, type OrderRows } from './lay-orders';

let cast: Cast;
let scope: Scope;
let rows: OrderRows;
let id: string;

beforeEach(async () => {
  cast = await makeCast();
  scope = cast.here.patternMaker.scope;
  rows = await makeOrder(scope);
  ({ id } = await lays.create(scope, { orderId: rows.order, clothId: rows.main, name: 'First' }));
});
afterEach(() => cast.close());

/** How a refusal ended; fails when there was none. */
async function refusal(work: Promise<unknown>): Promise<Problem> {
  const outcome = await work.then(
    () => null,
    (problem: Problem) => problem
  );
  expect(outcome).not.toBeNull();
  return outcome!;
}

async function saveGood(version = 1): Promise<LayDocument> {
  const document = good((await lays.read(scope, id)).document);
  await lays.save(scope, id, { version, saveId: newId(), document });
  return document;
}

describe('a new lay', () => {
  test('hangs what the order takes from this cloth on the Rail, with the facts of the cloth', async () => {
    const lay = await lays.read(scope, id);
    expect(lay).toMatchObject({
      name: 'First',
      state: 'open',
      chosen: false,
      version: 1,
      order: { id: rows.order, number: 7, clientName: 'Ada Lund' },
      cloth: { name: 'Wool', pictureFile: null, price: { minor: 1234, unit: 'metre' } },
      verdict: null,
      verdictVersion: null,
      revision: null
    });
    expect(lay.document.placements).toEqual([]);
    expect(lay.document.needs.map(({ panel, hand, count }) => [panel, hand, count])).toEqual([
      ['front', 'left', 1],
      ['front', 'right', 1],
      ['yoke', 'either', 1]
    ]);
    expect(lay.document.strip).toMatchObject({
      usableWidth: 1000,
      fullWidth: 1040,
      length: null,
      clearance: 3,
      endAllowance: { start: 20, end: 20 },
      reserve: 0,
      buyStep: 100
    });
    expect(Object.keys(lay.panels)).toEqual([`${rows.styleVersion}/front`, `${rows.styleVersion}/yoke`]);
    expect(lay.panels[`${rows.styleVersion}/yoke`]!.shape.cut).toHaveLength(4);
  });

  test('takes a garment for every copy of the line, and the lining on its own cloth', async () => {
    const two = await makeOrder(scope, { quantity: 2, number: 8 });
    const made = await lays.create(scope, { orderId: two.order, clothId: two.lining });
    const lay = await lays.read(scope, made.id);
    expect(lay.name).toBe('Lay 1');
    expect(lay.document.garments.map(({ label }) => label)).toEqual(['Bodice 38 · 1', 'Bodice 38 · 2']);
    expect(lay.document.needs.map(({ panel }) => panel)).toEqual(['inside', 'inside']);
  });

  test('is refused on a cloth that the order takes nothing from', async () => {
    const other = await makeOrder(scope, { number: 9 });
    const problem = await refusal(lays.create(scope, { orderId: rows.order, clothId: other.main }));
    expect(problem).toMatchObject({ status: 400, extra: { fields: { clothId: expect.any(String) } } });
  });
});

describe('saving', () => {
  test('counts versions, and gives a repeat its first answer', async () => {
    const document = good((await lays.read(scope, id)).document);
    const save = { version: 1, saveId: newId(), document };
    const first = await lays.save(scope, id, save, 1000);
    expect(first).toEqual({ version: 2, savedAt: 1000 });
    expect(await lays.save(scope, id, save, 2000)).toEqual(first);
    await lays.save(scope, id, { version: 2, saveId: newId(), document }, 3000);
    expect(await lays.save(scope, id, save, 4000)).toEqual(first);
    expect(await lays.read(scope, id)).toMatchObject({ version: 3, updatedAt: 3000, document });
  });

  test('a stale save changes nothing and learns what is stored, by whom', async () => {
    const cutter = cast.here.cutter;
    const document = good((await lays.read(scope, id)).document);
    await lays.save(cutter.scope, id, { version: 1, saveId: newId(), document }, 5000);
    const problem = await refusal(
      lays.save(scope, id, { version: 1, saveId: newId(), document: { ...document, placements: [] } })
    );
    expect(problem).toMatchObject({
      status: 409,
      type: 'lay-out-of-date',
      extra: { current: { version: 2, document, savedBy: cutter.name, savedAt: 5000 } }
    });
    expect((await lays.read(scope, id)).document).toEqual(document);
  });

  test('of two saves of one version at the same time exactly one is taken', async () => {
    const { document } = await lays.read(scope, id);
    const outcomes = await Promise.allSettled(
      [1, 2, 3].map(() => lays.save(scope, id, { version: 1, saveId: newId(), document: good(document) }))
    );
    expect(outcomes.filter(({ status }) => status === 'fulfilled')).toHaveLength(1);
    expect((await lays.read(scope, id)).version).toBe(2);
  });

  test('refuses what does not fit, with what was got', async () => {
    const problem = await refusal(
      lays.save(scope, id, { version: 1, saveId: newId(), document: { schema: 9 } })
    );
    expect(problem).toMatchObject({ status: 400, type: 'invalid-document' });
    expect(problem.detail).toContain('got 9');
  });

  test('lets the person say what they measured on the table, and nothing else of the cloth', async () => {
    const { document } = await lays.read(scope, id);
    const measured: LayDocument = {
      ...document,
      strip: {
        ...document.strip,
        usableWidth: 985,
        spread: [{ from: 0, to: 985, layers: [{ sideUp: 'wrong', nap: 'along' }], fold: 'none' }],
        length: 2400,
        flaws: [{ id: 'f', x: 10, y: 10, along: 0, across: 0, radius: 3, note: 'slub' }],
        endAllowance: { start: 40, end: 20 },
        reserve: 50,
        clearance: 5
      }
    };
    await lays.save(scope, id, { version: 1, saveId: newId(), document: measured });
    expect((await lays.read(scope, id)).document).toEqual(measured);
    for (const change of [
      { nap: 'oneWay' as const },
      { sidesAlike: true },
      { fullWidth: 2000 },
      { buyStep: 1 }
    ])
      expect(
        await refusal(
          lays.save(scope, id, {
            version: 2,
            saveId: newId(),
            document: { ...measured, strip: { ...measured.strip, ...change } }
          })
        )
      ).toMatchObject({ status: 400, type: 'not-of-this-lay', extra: { field: Object.keys(change)[0] } });
  });

  test('refuses garments and needs that are not the order’s, and pieces of no garment of it', async () => {
    const document = good((await lays.read(scope, id)).document);
    const foreign = await makeOrder(cast.elsewhere.owner.scope);
    const [garment] = document.garments;
    const tampered: Partial<LayDocument>[] = [
      { garments: [] },
      { garments: [{ ...garment!, styleVersion: foreign.styleVersion }] },
      { garments: [{ ...garment!, orderItem: foreign.item }] },
      { garments: [garment!, { ...garment!, id: 'more' }] },
      { needs: [] },
      { needs: document.needs.map((need) => ({ ...need, count: 1000 })) },
      { placements: [{ ...document.placements[0]!, garment: `${foreign.item}:1` }] },
      { placements: [{ ...document.placements[0]!, panel: 'inside' }] },
      {
        rules: {
          matchTolerance: 1,
          mayCoverFlaws: [],
          matchGroups: [
            {
              id: 'm',
              mirrored: false,
              points: [{ garment: `${foreign.item}:1`, panel: 'front', point: 'x' }]
            }
          ]
        }
      }
    ];
    for (const change of tampered)
      expect(
        await refusal(
          lays.save(scope, id, { version: 1, saveId: newId(), document: { ...document, ...change } })
        )
      ).toMatchObject({ status: 400, type: 'not-of-this-lay' });
    expect((await lays.read(scope, id)).version).toBe(1);
  });

  test('keeps a fold and a repeat, and refuses layers that are none of the spreads', async () => {
    const { document } = await lays.read(scope, id);
    const spread = spreadOf(document.strip, { ...openChoice, kind: 'lengthwise', depth: 300 });
    const repeat = { along: { size: 80, offset: 5, symmetric: true }, across: null };
    const folded = { ...document, strip: { ...document.strip, spread, repeat } };
    await lays.save(scope, id, { version: 1, saveId: newId(), document: folded });
    expect((await lays.read(scope, id)).document.strip).toMatchObject({ spread, repeat });
    const [zone] = document.strip.spread;
    const odd = { ...document.strip, spread: [{ ...zone!, fold: 'far' as const }] };
    expect(
      await refusal(
        lays.save(scope, id, { version: 2, saveId: newId(), document: { ...document, strip: odd } })
      )
    ).toMatchObject({ status: 400 });
  });
});

describe('when the order changes under a lay', () => {
  const another = () => cast.db('order_items').where({ id: rows.item }).update({ quantity: 2 });

  test('reading shows what is needed now, and a save of the old needs is offered the new ones', async () => {
    const document = await saveGood();
    await another();
    const now = await lays.read(scope, id);
    expect(now.document.garments).toHaveLength(2);
    expect(now.document.placements).toEqual(document.placements);
    const problem = await refusal(lays.save(scope, id, { version: 2, saveId: newId(), document }));
    expect(problem).toMatchObject({
      type: 'lay-out-of-date',
      extra: { current: { version: 2, document: now.document } }
    });
    await lays.save(scope, id, { version: 2, saveId: newId(), document: now.document });
  });

  test('recounting gives open lays a new version, and only those that differ', async () => {
    await saveGood();
    await lays.recount(scope, rows.order);
    expect((await lays.read(scope, id)).version).toBe(2);
    await another();
    await lays.recount(scope, rows.order);
    const lay = await lays.read(scope, id);
    expect(lay.version).toBe(3);
    expect((await lays.check(scope, id, 3)).verdict.readings.pieces).toEqual({
      needed: 6,
      placed: 3,
      loose: 3
    });
  });

  test('pieces of a garment that is gone may stay until they are taken off, and stop the release', async () => {
    const laid = good((await lays.read(scope, id)).document);
    const point = { garment: laid.garments[0]!.id, panel: 'front', point: 'waist' };
    const document: LayDocument = {
      ...laid,
      rules: {
        matchTolerance: 1,
        mayCoverFlaws: [],
        matchGroups: [{ id: 'm', mirrored: false, points: [point] }]
      }
    };
    await lays.save(scope, id, { version: 1, saveId: newId(), document });
    await cast.db('order_items').where({ id: rows.item }).delete();
    const now = await lays.read(scope, id);
    expect(now.document).toMatchObject({ garments: [], needs: [] });
    await lays.save(scope, id, { version: 2, saveId: newId(), document: now.document });
    const { verdict } = await lays.check(scope, id, 3);
    expect(verdict.findings.map(({ kind }) => kind)).toEqual(document.placements.map(() => 'unknown-panel'));
    expect(await refusal(layRelease.release(scope, id, { version: 3, name: 'x' }))).toMatchObject({
      type: 'findings-stop'
    });
  });

  test('the facts of the cloth follow the cloth, the width stays as measured within them', async () => {
    await saveGood();
    await cast
      .db('cloths')
      .where({ id: rows.main })
      .update({ nap: 'oneWay', full_width: 990, usable_width: 950 });
    const { strip } = (await lays.read(scope, id)).document;
    expect(strip).toMatchObject({ nap: 'oneWay', fullWidth: 990, usableWidth: 990, spread: [{ to: 990 }] });
  });
});

describe('the check', () => {
  test('answers for the named version, and keeps its verdict', async () => {
    await saveGood();
    const { version, verdict } = await lays.check(scope, id, 2);
    expect(version).toBe(2);
    expect(verdict.findings).toEqual([]);
    expect(verdict.readings).toMatchObject({ lengthUsed: 720, pieces: { needed: 3, placed: 3, loose: 0 } });
    expect(await lays.read(scope, id)).toMatchObject({ verdict, verdictVersion: 2 });
  });

  test('refuses a version that is no longer current', async () => {
    await saveGood();
    expect(await refusal(lays.check(scope, id, 1))).toMatchObject({ status: 409, type: 'lay-out-of-date' });
  });
});

describe('releasing', () => {
  test('is refused while a finding stops, with the verdict', async () => {
    const problem = await refusal(layRelease.release(scope, id, { version: 1, name: 'For cutting' }));
    expect(problem).toMatchObject({ status: 409, type: 'findings-stop' });
    expect(problem.extra.verdict).toMatchObject({ findings: [{ kind: 'missing' }, {}, {}] });
    expect(await lays.read(scope, id)).toMatchObject({ state: 'open', verdictVersion: 1 });
    expect(await layRevisions.list(scope, id)).toEqual([]);
  });

  test('makes the lay read-only, keeps exact bytes with their hash, and notes who did it', async () => {
    const document = await saveGood();
    const revision = await layRelease.release(scope, id, { version: 2, name: 'For cutting' }, 7000);
    expect(revision).toMatchObject({ number: 1, name: 'For cutting', releasedAt: 7000 });
    const lay = await lays.read(scope, id);
    expect(lay).toMatchObject({ state: 'released', chosen: true, version: 2, revision, verdictVersion: 2 });
    expect(await refusal(lays.save(scope, id, { version: 2, saveId: newId(), document }))).toMatchObject({
      status: 409,
      type: 'lay-released'
    });
    const { bytes } = await cast.db('lay_revisions').where({ id: revision.id }).first('bytes');
    expect(layRevisions.sha256(bytes)).toBe(revision.hash);
    const text = (bytes as Buffer).toString('utf8');
    for (const secret of ['1234', 'Lund', 'Mill by the weir']) expect(text).not.toContain(secret);
    expect(JSON.parse(text)).toMatchObject({
      document,
      labels: { studio: cast.here.name, order: { number: 7, shortName: 'Ada L.' }, cloth: { name: 'Wool' } },
      keptAt: 7000
    });
    expect(
      await cast.db('audit_entries').where({ action: 'lay: released' }).select('user_id', 'subject')
    ).toEqual([{ user_id: scope.user, subject: id }]);
  });

  test('a released lay stays what it was when style, order or cloth change', async () => {
    await saveGood();
    await layRelease.release(scope, id, { version: 2, name: 'For cutting' });
    const before = await lays.read(scope, id);
    await cast.db('order_items').where({ id: rows.item }).update({ quantity: 5 });
    await cast.db('cloths').where({ id: rows.main }).update({ nap: 'oneWay' });
    await lays.recount(scope, rows.order);
    const after = await lays.read(scope, id);
    expect(after.document).toEqual(before.document);
    expect(after.panels).toEqual(before.panels);
    expect(await layRevisions.read(scope, id, 1)).toMatchObject({
      document: before.document,
      verdict: { findings: [] }
    });
  });

  test('names the version: a stale one is refused', async () => {
    await saveGood();
    expect(await refusal(layRelease.release(scope, id, { version: 1, name: 'x' }))).toMatchObject({
      type: 'lay-out-of-date'
    });
  });

  test('two lays of the same pieces are never both released', async () => {
    await saveGood();
    const copy = await lays.duplicate(scope, id, 'Second');
    await layRelease.release(scope, id, { version: 2, name: 'x' });
    expect(await refusal(layRelease.release(scope, copy.id, { version: 1, name: 'y' }))).toMatchObject({
      status: 409,
      type: 'other-lay-released'
    });
    expect(await refusal(lays.choose(scope, copy.id))).toMatchObject({ type: 'other-lay-released' });
    await layRelease.reopen(scope, id);
    await layRelease.release(scope, copy.id, { version: 1, name: 'y' });
    expect((await lays.read(scope, id)).chosen).toBe(false);
  });

  test('on panels that the order replaced since says STOP, in lists and to the ticket, until kept or reopened', async () => {
    await saveGood();
    const { hash } = await layRelease.release(scope, id, { version: 2, name: 'For cutting' });
    const says = async () => ({
      paper: await guides.verdictOnPaper(hash.slice(0, 20)),
      lists: (await layList.ofOrder(scope, rows.order)).map(({ replaced }) => replaced),
      lay: await isReplaced(scope, id)
    });
    const good = { paper: 'current', lists: [false], lay: false };
    const stop = { paper: 'replaced', lists: [true], lay: true };
    expect(await says()).toEqual(good);
    const item = () => cast.db('order_items').where({ id: rows.item });
    const next = newId();
    const first = await cast.db('style_versions').where({ id: rows.styleVersion }).first();
    await cast.db('style_versions').insert({ ...first, id: next, number: first.number + 1 });
    expect(await says()).toEqual(good);
    await item().update({ style_version_id: next });
    await lays.recount(scope, rows.order);
    expect(await says()).toEqual(stop);
    await item().update({ style_version_id: rows.styleVersion });
    expect(await says()).toEqual(good);
    await item().update({ style_version_id: next });
    await layRelease.reopen(scope, id);
    expect(await says()).toEqual({ paper: 'withdrawn', lists: [false], lay: false });
    expect(await refusal(isReplaced(cast.elsewhere.owner.scope, id))).toMatchObject({ status: 404 });
  });

  test('reopening makes a new version and withdraws the paper; a second release supersedes it', async () => {
    const document = await saveGood();
    const first = await layRelease.release(scope, id, { version: 2, name: 'One' });
    const paper = async () => (await layRevisions.byHash(scope, first.hash.slice(0, 12)))[0];
    expect(await paper()).toMatchObject({ state: 'current', number: 1 });
    expect(await layRelease.reopen(scope, id)).toEqual({ version: 3 });
    expect(await paper()).toMatchObject({ state: 'withdrawn' });
    expect(await refusal(layRelease.reopen(scope, id))).toMatchObject({ status: 409, type: 'lay-open' });
    await lays.save(scope, id, { version: 3, saveId: newId(), document });
    await layRelease.release(scope, id, { version: 4, name: 'Two' });
    expect(await paper()).toMatchObject({ state: 'superseded', currentNumber: 2 });
    expect(
      (await cast.db('audit_entries').where('action', 'like', 'lay:%').orderBy('at')).map(
        ({ action }) => action
      )
    ).toEqual(['lay: released', 'lay: reopened', 'lay: released']);
  });

  test('a cut lay never opens again', async () => {
    await saveGood();
    await layRelease.release(scope, id, { version: 2, name: 'x' });
    await cast.db('lays').where({ id }).update({ state: 'cut' });
    expect(await refusal(layRelease.reopen(scope, id))).toMatchObject({ status: 409, type: 'lay-cut' });
  });

  test('bytes that were damaged are not read', async () => {
    await saveGood();
    const { id: revision } = await layRelease.release(scope, id, { version: 2, name: 'x' });
    await cast
      .db('lay_revisions')
      .where({ id: revision })
      .update({ bytes: Buffer.from('{}') });
    await expect(layRevisions.keptOf(scope, revision)).rejects.toThrow(/damaged/);
  });
});

describe('a fault in the middle', () => {
  /** Lets the next insert into `table` fail, as a full disk would. */
  const breakAt = (table: string) =>
    cast.db.raw(`create trigger fault before insert on ${table} begin select raise(abort, 'disk full'); end`);

  test.each(['lay_saves', 'lay_items'])('a save that fails at %s saves nothing', async (table) => {
    const document = good((await lays.read(scope, id)).document);
    await cast.db('lay_items').where({ lay_id: id }).delete();
    await breakAt(table);
    await expect(lays.save(scope, id, { version: 1, saveId: newId(), document })).rejects.toThrow(
      /disk full/
    );
    expect(await lays.read(scope, id)).toMatchObject({ version: 1, document: { placements: [] } });
    expect(await cast.db('lay_saves')).toEqual([]);
    await cast.db.raw('drop trigger fault');
    expect(await lays.save(scope, id, { version: 1, saveId: newId(), document })).toMatchObject({
      version: 2
    });
  });

  test.each(['lay_revisions', 'audit_entries'])(
    'a release that fails at %s releases nothing',
    async (table) => {
      await saveGood();
      await breakAt(table);
      await expect(layRelease.release(scope, id, { version: 2, name: 'x' })).rejects.toThrow(/disk full/);
      expect(await lays.read(scope, id)).toMatchObject({ state: 'open', chosen: false, revision: null });
      expect(await layRevisions.list(scope, id)).toEqual([]);
    }
  );
});

describe('revisions', () => {
  test('are kept under a name with whatever findings, listed newest first, and restored', async () => {
    const empty = (await lays.read(scope, id)).document;
    await layRelease.keep(scope, id, { version: 1, name: 'Empty' });
    const full = await saveGood();
    const second = await layRelease.keep(scope, id, { version: 2, name: 'Full' });
    expect(second).toMatchObject({ number: 2, name: 'Full', layVersion: 2, releasedAt: null, stops: 0 });
    expect(
      (await layRevisions.list(scope, id)).map(({ number, name, stops }) => [number, name, stops])
    ).toEqual([
      [2, 'Full', 0],
      [1, 'Empty', 3]
    ]);
    expect((await layRevisions.readById(scope, second.id)).document).toEqual(full);
    const saveId = newId();
    const restored = await layRelease.restore(scope, id, { number: 1, version: 2, saveId });
    expect(restored).toEqual({ version: 3, document: empty });
    expect((await lays.read(scope, id)).document).toEqual(empty);
    expect(await layRelease.restore(scope, id, { number: 1, version: 2, saveId })).toEqual(restored);
    expect(
      await refusal(layRelease.restore(scope, id, { number: 2, version: 2, saveId: newId() }))
    ).toMatchObject({ type: 'lay-out-of-date' });
    expect(
      await refusal(layRelease.restore(scope, id, { number: 9, version: 3, saveId: newId() }))
    ).toMatchObject({ status: 404 });
  });

  test('paper of a lay that was never released says so', async () => {
    const { hash } = await layRelease.keep(scope, id, { version: 1, name: 'Try' });
    expect(await layRevisions.byHash(scope, hash)).toMatchObject([
      { state: 'not-released', layName: 'First' }
    ]);
    expect(await layRevisions.byHash(scope, 'abc')).toEqual([]);
    expect(await layRevisions.byHash(cast.elsewhere.owner.scope, hash)).toEqual([]);
  });
});

describe('several lays of an order', () => {
  test('one is chosen at a time', async () => {
    const copy = await lays.duplicate(scope, id, 'Second');
    const chosen = async () => (await cast.db('lays').where({ chosen: 1 }).select('id')).map((row) => row.id);
    await lays.choose(scope, id);
    await lays.choose(scope, copy.id);
    expect(await chosen()).toEqual([copy.id]);
    expect((await lays.read(scope, copy.id)).name).toBe('Second');
  });

  test('a lay notes the lines that it serves', async () => {
    expect(await cast.db('lay_items').where({ lay_id: id }).select('order_item_id')).toEqual([
      { order_item_id: rows.item }
    ]);
  });
});

test('the price stays away from a cutter in the query itself', async () => {
  const asked: string[] = [];
  cast.db.on('query', ({ sql }: { sql: string }) => asked.push(sql));
  const lay = await lays.read(cast.here.cutter.scope, id);
  expect('price' in lay.cloth).toBe(false);
  expect(JSON.stringify(lay)).not.toContain('1234');
  expect(asked.filter((sql) => /price/.test(sql))).toEqual([]);
  const facts = await layFacts.read(cast.here.owner.scope, [rows.order], rows.main);
  expect(facts.cloth.price).toEqual({ minor: 1234, unit: 'metre', currency: 'EUR' });
});
