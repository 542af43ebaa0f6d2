import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import type { ClothRole } from '$lib/pattern/panel';
import * as cloths from '$lib/server/cloths';
import { readListing } from '$lib/server/listing';
import { lineForm, newOrderForm } from '$lib/server/order-form';
import * as orders from '$lib/server/orders';
import type { Scope } from '$lib/server/scope';
import { makeCast, type Cast } from './cast';

let cast: Cast;
let owner: Scope;
let foreign: Scope;

beforeEach(async () => {
  cast = await makeCast();
  owner = cast.here.owner.scope;
  foreign = cast.elsewhere.owner.scope;
});
afterEach(() => cast.close());

const head: orders.OrderInput = { clientName: 'Edda', dueDate: '2027-02-01', stage: 'agreed', note: '' };

/** A style with one version whose panels have these roles; gives the version's id. Only roles matter to orders. */
async function style(scope: Scope, id: string, roles: ClothRole[], number = 1): Promise<string> {
  const row = { studio_id: scope.studio, created_at: 1 };
  if (number === 1) await cast.db('styles').insert({ ...row, id, name: id, updated_at: 1 });
  const versionId = `${id}-v${number}`;
  await cast.db('style_versions').insert({
    ...row,
    id: versionId,
    style_id: id,
    number,
    panels: JSON.stringify({ schema: 1, panels: roles.map((role) => ({ role })) }),
    panel_count: roles.length,
    created_by: 'u'
  });
  return versionId;
}

const cloth = (scope: Scope, name: string) =>
  cloths.create(scope, {
    name,
    fibre: '',
    fullWidth: 1400,
    usableWidth: 1380,
    typed: { fullWidth: '140 cm', usableWidth: '138 cm' },
    price: null,
    sidesAlike: false,
    nap: 'none',
    colour: '#FFFDF8',
    supplierNote: ''
  });

const listing = (text = '') => readListing(new URLSearchParams(text), orders.orderSorts, 'due');

describe('numbers', () => {
  test('run per studio without gaps, also when a creation is refused', async () => {
    await orders.create(owner, head);
    await expect(
      orders.create(owner, head, [{ styleVersionId: 'none', label: '', quantity: 1, cloths: {} }])
    ).rejects.toMatchObject({ status: 400 });
    await Promise.all(Array.from({ length: 8 }, () => orders.create(owner, head)));
    await orders.create(foreign, head);
    const numbers = (await orders.list(owner, listing('sort=number'))).rows.map((order) => order.number);
    expect(numbers).toEqual([1, 2, 3, 4, 5, 6, 7, 8, 9]);
    expect((await orders.list(foreign, listing())).rows[0]?.number).toBe(1);
  });

  test('a transaction that fails gives its number back', async () => {
    const id = await orders.create(owner, head);
    await expect(orders.create(owner, head, [], { id })).rejects.toThrow();
    const next = await orders.read(owner, await orders.create(owner, head));
    expect(next.number).toBe(2);
  });
});

describe('lines', () => {
  test('take a cloth for each role that the panels of the style have', async () => {
    const version = await style(owner, 'coat', ['lining', 'main', 'main']);
    const wool = await cloth(owner, 'Wool');
    const id = await orders.create(owner, head, [
      { styleVersionId: version, label: '38', quantity: 2, cloths: { main: wool } }
    ]);
    const order = await orders.read(owner, id);
    expect(order.items[0]).toMatchObject({
      label: '38',
      quantity: 2,
      style: { id: 'coat', number: 1 },
      roles: [
        { role: 'main', cloth: { id: wool, name: 'Wool' } },
        { role: 'lining', cloth: null }
      ]
    });
    expect(order.cloths).toMatchObject([{ id: wool, roles: ['main'], released: false }]);
    expect((await orders.list(owner, listing())).rows[0]).toMatchObject({ garments: 2, clothsToLay: 1 });
  });

  test('of one cloth in two roles count as one cloth', async () => {
    const version = await style(owner, 'coat', ['lining', 'main']);
    const wool = await cloth(owner, 'Wool');
    const id = await orders.create(owner, head, [
      { styleVersionId: version, label: '', quantity: 1, cloths: { main: wool, lining: wool } }
    ]);
    expect((await orders.read(owner, id)).cloths).toMatchObject([{ roles: ['lining', 'main'] }]);
  });

  test("refuse another studio's style and cloth at the field", async () => {
    const theirs = await style(foreign, 'theirs', ['main']);
    const ours = await style(owner, 'ours', ['main']);
    const theirCloth = await cloth(foreign, 'Theirs');
    const id = await orders.create(owner, head);
    const line = { label: '', quantity: 1 };
    await expect(
      orders.addItem(owner, id, 1, { ...line, styleVersionId: theirs, cloths: {} })
    ).rejects.toMatchObject({ extra: { fields: { style: expect.any(String) } } });
    await expect(
      orders.addItem(owner, id, 1, { ...line, styleVersionId: ours, cloths: { main: theirCloth } })
    ).rejects.toMatchObject({ extra: { fields: { 'cloth.main': expect.any(String) } } });
    expect((await orders.read(owner, id)).version).toBe(1);
  });

  test('of another order can be neither changed nor removed', async () => {
    const version = await style(owner, 'coat', ['main']);
    const line = { styleVersionId: version, label: '', quantity: 1, cloths: {} };
    const one = await orders.create(owner, head, [line]);
    const other = await orders.create(owner, head);
    const item = (await orders.read(owner, one)).items[0]!.id;
    await expect(orders.updateItem(owner, other, 1, item, line)).rejects.toMatchObject({ status: 404 });
    await expect(orders.removeItem(owner, other, 1, item)).rejects.toMatchObject({ status: 404 });
    expect((await orders.read(owner, other)).version).toBe(1);
    expect((await orders.read(owner, one)).items).toHaveLength(1);
  });

  test('keep their style version until another is chosen', async () => {
    const first = await style(owner, 'coat', ['main']);
    const line = { styleVersionId: first, label: '', quantity: 1, cloths: {} };
    const id = await orders.create(owner, head, [line]);
    const second = await style(owner, 'coat', ['main', 'lining'], 2);
    const before = (await orders.read(owner, id)).items[0]!;
    expect(before.style).toMatchObject({ number: 1, versions: [{ number: 2 }, { number: 1 }] });
    await orders.updateItem(owner, id, 1, before.id, { ...line, styleVersionId: second });
    expect((await orders.read(owner, id)).items[0]!.roles).toHaveLength(2);
    expect(await orders.styleChoices(owner)).toMatchObject([{ versionId: second, number: 2 }]);
  });
});

describe('changes', () => {
  test('name the version that was looked at; a stale one changes nothing', async () => {
    const id = await orders.create(owner, head);
    expect(await orders.update(owner, id, 1, { ...head, note: 'first' })).toBe(2);
    await expect(orders.update(owner, id, 1, { ...head, note: 'second' })).rejects.toMatchObject({
      status: 409,
      type: 'order-out-of-date'
    });
    expect(await orders.read(owner, id)).toMatchObject({ note: 'first', version: 2 });
  });

  test("never reach another studio's order", async () => {
    const id = await orders.create(owner, head);
    await expect(orders.read(foreign, id)).rejects.toMatchObject({ status: 404 });
    await expect(orders.update(foreign, id, 1, head)).rejects.toMatchObject({ status: 404 });
    await expect(orders.removeItem(foreign, id, 1, 'x')).rejects.toMatchObject({ status: 404 });
    expect((await orders.list(foreign, listing())).total).toBe(0);
  });
});

describe('the list', () => {
  test('leaves out ended orders unless asked, sorts the undated last, and finds by number and client', async () => {
    await orders.create(owner, { ...head, clientName: 'Undated', dueDate: null });
    await orders.create(owner, { ...head, clientName: 'Late', dueDate: '2027-03-01' });
    await orders.create(owner, { ...head, clientName: 'Early', dueDate: '2027-01-01' });
    await orders.create(owner, { ...head, clientName: 'Over', stage: 'closed' });
    const names = async (text: string, which?: Parameters<typeof orders.list>[2]) =>
      (await orders.list(owner, listing(text), which)).rows.map((order) => order.clientName);
    expect(await names('')).toEqual(['Early', 'Late', 'Undated']);
    expect(await names('sort=-due')).toEqual(['Late', 'Early', 'Undated']);
    expect(await names('q=4', 'all')).toEqual(['Over']);
    expect(await names('q=late')).toEqual(['Late']);
    expect(await names('', 'closed')).toEqual(['Over']);
  });
});

describe('the forms', () => {
  test('read a line with the cloth of each role, empty ones left out', () => {
    expect(
      lineForm.parse({
        version: '3',
        style: 's',
        label: ' 38 ',
        quantity: '2',
        'cloth.main': 'c',
        'cloth.lining': ''
      })
    ).toEqual({ version: 3, item: { styleVersionId: 's', label: '38', quantity: 2, cloths: { main: 'c' } } });
  });

  test('refuse days that do not exist and quantities that are none', () => {
    const faults = (fields: Record<string, string>) =>
      newOrderForm.safeParse({ clientName: 'Edda', ...fields }).error?.issues.map((issue) => issue.path[0]);
    expect(faults({ dueDate: '2027-02-29' })).toEqual(['dueDate']);
    expect(faults({ quantity: '1.5' })).toEqual(['quantity']);
    expect(faults({ quantity: '0' })).toEqual(['quantity']);
    expect(faults({ clientName: ' ' })).toEqual(['clientName']);
    expect(faults({ stage: 'lost' })).toEqual(['stage']);
    expect(newOrderForm.parse({ clientName: 'Edda', quantity: '' })).toMatchObject({
      order: { dueDate: null, stage: 'enquiry' },
      lines: []
    });
  });
});
