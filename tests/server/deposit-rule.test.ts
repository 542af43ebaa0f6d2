import { afterEach, beforeEach, expect, it } from 'vitest';
import { database } from '$lib/server/database';
import * as depositRule from '$lib/server/deposit-rule';
import { newId } from '$lib/server/ids';
import * as layRelease from '$lib/server/lay-release';
import * as lays from '$lib/server/lays';
import * as payments from '$lib/server/payments';
import { makeCast, type Cast } from './cast';
import { agreeTo, makeQuoted } from './money';

let cast: Cast;
beforeEach(async () => (cast = await makeCast()));
afterEach(() => cast.close());
const scope = () => cast.here.owner.scope;

/** A lay of the lining of an order, with its one piece on the cloth. */
async function laid(order: string, lining: string): Promise<() => Promise<unknown>> {
  const { id } = await lays.create(scope(), { orderId: order, clothId: lining, name: 'Lining' });
  const { document } = await lays.read(scope(), id);
  const placements = [
    {
      id: 'p1',
      panel: 'inside',
      garment: document.garments[0]!.id,
      x: 0,
      y: 100,
      turn: 0,
      flip: false,
      locked: false
    }
  ];
  await lays.save(scope(), id, { version: 1, saveId: newId(), document: { ...document, placements } });
  const { version } = await lays.read(scope(), id);
  return () => layRelease.release(cast.here.cutter.scope, id, { version, name: 'For cutting' });
}

it('an order without an agreed quote is released as ever', async () => {
  const { order, lining } = await makeQuoted(scope());
  expect(await (await laid(order, lining))()).toMatchObject({ number: 1 });
});

it('nothing is released before the agreed deposit came in, and the cutter reads no sum', async () => {
  const { order, lining } = await makeQuoted(scope());
  await agreeTo(scope(), order);
  const release = await laid(order, lining);
  const refused = await release().catch((refusal: Error & { code?: string }) => refusal);
  expect(refused).toMatchObject({ status: 409, title: expect.stringContaining('deposit of order 7') });
  expect(JSON.stringify(refused)).not.toMatch(/500|50000/);
  expect(await database()('lays').where({ state: 'released' })).toEqual([]);
  await payments.recordByHand(scope(), order, {
    id: newId(),
    kind: 'deposit',
    method: 'cash',
    amount: 50_000,
    day: '2026-05-31',
    note: '',
    receiptTo: null
  });
  expect(await release()).toMatchObject({ number: 1 });
});

it('an owner lets an order be cut without it, once, with a reason that is written down', async () => {
  const { order, lining } = await makeQuoted(scope());
  await agreeTo(scope(), order);
  const release = await laid(order, lining);
  await expect(depositRule.waive(cast.elsewhere.owner.scope, order, 'not mine')).rejects.toMatchObject({
    status: 404
  });
  await depositRule.waive(scope(), order, 'An old client');
  await depositRule.waive(scope(), order, 'Another reason');
  expect(await depositRule.waiver(scope(), order)).toMatchObject({ note: 'An old client', by: 'Odile' });
  expect(await release()).toMatchObject({ number: 1 });
  expect(await database()('audit_entries').where({ action: 'order: cut without deposit' })).not.toEqual([]);
});
