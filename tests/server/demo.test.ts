import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { isSimple } from '$lib/geometry/polygon';
import type { FindingKind } from '$lib/lay/verdict';
import { PANEL_SET_SCHEMA, panelSetSchema } from '$lib/pattern/panel';
import * as accounts from '$lib/server/accounts';
import { layPanelOf } from '$lib/lay/panel-book';
import { integrityFaults } from '$lib/server/database';
import * as demo from '$lib/server/demo';
import * as content from '$lib/server/demo/content';
import * as layList from '$lib/server/lay-list';
import * as lays from '$lib/server/lays';
import { readListing } from '$lib/server/listing';
import * as orders from '$lib/server/orders';
import * as payments from '$lib/server/payments';
import { studioScope, type Scope } from '$lib/server/scope';
import * as studios from '$lib/server/studios';
import { load } from '../../src/routes/+page.server';
import { ending, eventFor, makeCast, type Cast } from './cast';

let cast: Cast;
let owner: Scope;

async function begin(): Promise<void> {
  cast = await makeCast();
  owner = cast.here.owner.scope;
}

const everyOrder = (scope: Scope) =>
  orders.list(scope, readListing(new URLSearchParams('sort=number'), orders.orderSorts, 'number'), 'all');
const everyLay = (scope: Scope) =>
  layList.list(scope, readListing(new URLSearchParams(), layList.laySorts, 'order'));

const tables = ['styles', 'style_versions', 'cloths', 'orders', 'order_items', 'lays', 'lay_revisions'];
const counts = async () =>
  Object.fromEntries(
    await Promise.all(
      tables.map(async (table) => [table, (await cast.db(table).count({ n: '*' }))[0]!.n] as const)
    )
  );

describe('the panels of the demo', () => {
  test.each(content.styles)('$name: every panel fits the schema and resolves to simple outlines', (style) => {
    const { panels } = panelSetSchema.parse({ schema: PANEL_SET_SCHEMA, panels: style.panels });
    for (const panel of panels) {
      const { shape } = layPanelOf(panel);
      expect(isSimple(shape.cut), panel.name).toBe(true);
      expect(isSimple(shape.sew), panel.name).toBe(true);
      const drawn = panel.notches.reduce((sum, notch) => sum + notch.count, 0);
      expect(shape.notches, panel.name).toHaveLength(drawn * (panel.fold ? 2 : 1));
    }
  });
});

describe('a filled studio', () => {
  // Filling places pieces for seconds: one studio for everything that only reads.
  beforeAll(async () => {
    await begin();
    await demo.fill(owner);
  });
  afterAll(() => cast.close());

  test('has a good lay that passes the check and a faulty one that is found out in each of its faults', async () => {
    const all = (await everyLay(owner)).rows;
    expect(all.every((lay) => lay.verdict?.current)).toBe(true);
    for (const lay of all.filter((one) => one.name !== 'In a hurry'))
      expect(lay.verdict, `${lay.cloth.name} ${lay.name}`).toMatchObject({ loose: 0, stops: 0 });
    const good = all.find((lay) => lay.name === 'First lay')!;
    expect(good).toMatchObject({ state: 'open', chosen: true, order: { id: await demo.firstOrder(owner) } });
    expect(good.verdict!.efficiency).toBeGreaterThan(0.7);
    const faulty = await lays.read(owner, all.find((lay) => lay.name === 'In a hurry')!.id);
    const kinds = new Set(faulty.verdict!.findings.map((finding) => finding.kind));
    for (const kind of [
      'overlap',
      'outside-width',
      'off-grain',
      'wrong-hand',
      'missing'
    ] satisfies FindingKind[])
      expect([...kinds]).toContain(kind);
  });

  test('has orders in several stages, one with all its cloths released', async () => {
    const { rows } = await everyOrder(owner);
    expect(rows.map((order) => order.number)).toEqual([1, 2, 3, 4, 5, 6, 7]);
    expect(new Set(rows.map((order) => order.stage)).size).toBeGreaterThanOrEqual(5);
    expect(rows[0]).toMatchObject({ stage: 'handedOver', clothsToLay: 0 });
  });

  test('is not filled a second time, and no other studio with it', async () => {
    const once = await counts();
    await demo.fill(owner);
    expect(await counts()).toEqual(once);
    expect(await demo.isFilled(cast.elsewhere.owner.scope)).toBe(false);
  });
});

test('in the demo the first page is its order until the person has saved a lay; elsewhere it is the orders', async () => {
  await begin();
  const { studio } = await demo.seed();
  const owner = (await accounts.findByEmail(content.people[0]!.email))!;
  const entered = (await studios.enter(studio, owner.id))!;
  const locals: App.Locals = { ...cast.here.owner.locals, scope: entered.scope, studio: entered.studio };
  const start = () => ending(() => load(eventFor<Parameters<typeof load>[0]>({ locals })));
  const first = await demo.firstOrder(entered.scope);
  expect(await start()).toMatchObject({ kind: 'redirect', location: `/orders/${first}` });
  const lay = (await everyLay(entered.scope)).rows.find((one) => one.name === 'First lay')!;
  const { version, document } = await lays.read(entered.scope, lay.id);
  await lays.save(entered.scope, lay.id, { version, saveId: 'first', document });
  expect(await start()).toMatchObject({ kind: 'redirect', location: '/orders' });
  expect(
    await ending(() => load(eventFor<Parameters<typeof load>[0]>({ locals: cast.here.owner.locals })))
  ).toMatchObject({ kind: 'redirect', location: '/orders' });
  await cast.close();
});

test('clearing leaves nothing of the demo, touches no other studio, and numbers begin again', async () => {
  await begin();
  await demo.fill(cast.elsewhere.owner.scope);
  const before = await counts();
  await demo.fill(owner);
  expect(await demo.clear(owner)).toEqual({ kept: [] });
  expect(await counts()).toEqual(before);
  expect(await demo.isFilled(cast.elsewhere.owner.scope)).toBe(true);
  expect(await integrityFaults(cast.db)).toEqual([]);
  const head = { clientName: 'First own', dueDate: null, stage: 'enquiry', note: '' } as const;
  expect((await orders.read(owner, await orders.create(owner, head))).number).toBe(1);
  await cast.close();
});

test("clearing keeps what the studio's own orders take", async () => {
  await begin();
  await demo.fill(owner);
  const style = demo.demoId(owner.studio, 'style skirt 1');
  const cloth = demo.demoId(owner.studio, 'cloth linen');
  const own = await orders.create(owner, { clientName: 'Own', dueDate: null, stage: 'agreed', note: '' }, [
    { styleVersionId: style, label: '', quantity: 1, cloths: { main: cloth } }
  ]);
  const { kept } = await demo.clear(owner);
  expect(kept).toEqual(['Wilma skirt', 'Saltmarsh linen, natural']);
  expect((await orders.read(owner, own)).items[0]!.roles[0]!.cloth?.id).toBe(cloth);
  expect((await everyOrder(owner)).total).toBe(1);
  expect((await orders.read(owner, own)).number).toBe(8);
  await cast.close();
});

test('the demo installation has three people who can sign in, and seeding twice changes nothing', async () => {
  await begin();
  const { studio, signIns } = await demo.seed();
  const once = await counts();
  expect(await demo.seed()).toMatchObject({ studio });
  expect(await counts()).toEqual(once);
  // One quote waits for its answer, one is agreed with its deposit paid; nothing is mailed twice.
  const states = await cast.db('quotes').orderBy('state').pluck('state');
  expect(states).toEqual(['agreed', 'sent']);
  const [account] = await payments.totals(studioScope(studio));
  expect(account!.received).toBeGreaterThan(0);
  expect(account!.agreed - account!.received).toBe(account!.owed);
  expect(await cast.db('messages').where({ template: 'quote' })).toHaveLength(2);
  expect(signIns.map((one) => one.role)).toEqual(['owner', 'patternMaker', 'cutter']);
  for (const { email, password } of signIns) {
    expect(password.length).toBeGreaterThanOrEqual(12);
    expect(await accounts.withPassword(email, password)).toMatchObject({ email });
  }
  expect(await cast.db('studios').where({ is_demo: 1 })).toHaveLength(1);
  await cast.close();
});
