import type { Knex } from 'knex';
import type { MeasuredLength } from '$lib/cloth/given-strip';
import type { Millimetres } from '$lib/units/measure';
import type { ClothLength } from './cloth-lengths';
import * as clothLengths from './cloth-lengths';
import { database } from './database';
import { invalid, Problem } from './problem';
import type { Scope } from './scope';

/*
 * On which roll or remnant a lay is made.
 */

/** The length that a lay is made on, or null. */
export async function lengthOf(
  scope: Scope,
  layId: string,
  db: Knex = database()
): Promise<ClothLength | null> {
  const row = await db('lay_lengths')
    .where({ studio_id: scope.studio, lay_id: layId })
    .first<{ length_id: string } | undefined>('length_id');
  return row ? clothLengths.read(scope, row.length_id, db) : null;
}

/** A length as the strip of a lay takes it. `cloth` gives what its selvedges take. */
export function measured(
  length: ClothLength,
  cloth: { readonly fullWidth: Millimetres; readonly usableWidth: Millimetres }
): MeasuredLength {
  return {
    given: {
      id: length.id,
      name: length.name,
      kind: length.kind,
      batch: length.batch,
      outline: length.outline === null ? null : [...length.outline]
    },
    length: length.length,
    usableWidth: length.usableWidth,
    fullWidth: length.usableWidth + Math.max(0, cloth.fullWidth - cloth.usableWidth),
    flaws: length.flaws.map(({ id, fromEnd, fromSelvedge, along, across, note }) => ({
      id,
      x: fromEnd,
      y: fromSelvedge,
      along,
      across,
      radius: 0,
      note
    }))
  };
}

/** The lays that are made on a length. */
export async function laysOn(
  scope: Scope,
  lengthId: string
): Promise<{ id: string; name: string; state: 'open' | 'released' | 'cut'; order: number }[]> {
  return database()('lay_lengths')
    .join('lays', 'lays.id', 'lay_lengths.lay_id')
    .join('orders', 'orders.id', 'lays.order_id')
    .where({ 'lay_lengths.studio_id': scope.studio, 'lay_lengths.length_id': lengthId })
    .orderBy('lays.updated_at', 'desc')
    .limit(100)
    .select<{ id: string; name: string; state: 'open' | 'released' | 'cut'; order: number }[]>({
      id: 'lays.id',
      name: 'lays.name',
      state: 'lays.state',
      order: 'orders.number'
    });
}

/** A length on which `orders` may lay on `clothId`. Refused for another cloth, one that is used up, or another order's. */
export async function usableFor(
  scope: Scope,
  lengthId: string,
  clothId: string,
  orders: readonly string[]
): Promise<ClothLength> {
  const length = await clothLengths.read(scope, lengthId);
  if (length.clothId !== clothId)
    throw invalid({ length: `${length.name} is not of the cloth of this lay.` });
  refuseUnlessFor(length, orders);
  return length;
}

function refuseUnlessFor(length: ClothLength, orders: readonly string[]): void {
  if (length.state === 'used')
    throw new Problem(409, 'length-used', 'Used up', `${length.name} is used up: nothing of it is left.`);
  if (length.order && !orders.includes(length.order.id))
    throw new Problem(
      409,
      'length-reserved',
      'Reserved already',
      `${length.name} is reserved for order ${length.order.number}. Release it there first, or take another length.`
    );
}

/** Ties a lay to a length, or frees it with null. Within the transaction of who counts the version of the lay. */
export async function tie(trx: Knex, scope: Scope, layId: string, lengthId: string | null): Promise<void> {
  await trx('lay_lengths').where({ studio_id: scope.studio, lay_id: layId }).delete();
  if (lengthId !== null)
    await trx('lay_lengths').insert({ studio_id: scope.studio, lay_id: layId, length_id: lengthId });
}

/**
 * Before a lay on a length is released, within that transaction: the length is reserved for the lay's first order unless it is
 * one of its orders' already. Refused when it is another order's, when the client's own cloth has flaws that nobody signed off,
 * or when another batch was cut or released for a garment of these orders.
 */
export async function claim(
  trx: Knex,
  scope: Scope,
  layId: string,
  orders: readonly string[],
  now: number
): Promise<void> {
  const length = await lengthOf(scope, layId, trx);
  if (!length) return;
  refuseUnlessFor(length, orders);
  if (length.kind === 'client' && length.flaws.length > 0 && length.signed === null)
    throw new Problem(
      409,
      'flaws-not-signed',
      'The flaws are not signed off',
      `${length.name} is the client’s own cloth and has ${length.flaws.length === 1 ? 'a flaw' : `${length.flaws.length} flaws`}. Let the client see and sign them off before it is cut.`
    );
  await refuseOtherBatch(trx, scope, layId, length);
  if (!length.order)
    await clothLengths.reserve(scope, length.id, { version: length.version, orderId: orders[0]! }, now, trx);
}

/** One garment comes from one batch: shades differ. */
async function refuseOtherBatch(trx: Knex, scope: Scope, layId: string, length: ClothLength): Promise<void> {
  const other = await trx('lay_items')
    .join({ twin: 'lay_items' }, 'twin.order_item_id', 'lay_items.order_item_id')
    .join('lays', 'lays.id', 'twin.lay_id')
    .join('lay_lengths', 'lay_lengths.lay_id', 'lays.id')
    .join('cloth_lengths', 'cloth_lengths.id', 'lay_lengths.length_id')
    .where({ 'lay_items.studio_id': scope.studio, 'lay_items.lay_id': layId })
    .where({ 'cloth_lengths.cloth_id': length.clothId })
    .whereNot({ 'lays.id': layId })
    .whereIn('lays.state', ['released', 'cut'])
    .whereNot({ 'cloth_lengths.batch': length.batch })
    .first<{ lay: string; batch: string } | undefined>({ lay: 'lays.name', batch: 'cloth_lengths.batch' });
  if (other)
    throw new Problem(
      409,
      'other-batch',
      'Another batch',
      `“${other.lay}” cuts the same garment from batch ${other.batch || 'without a name'}, ${length.name} is batch ${length.batch || 'without a name'}. One garment is cut from one batch: shades differ.`
    );
}
