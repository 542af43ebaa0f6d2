import * as audit from './audit';
import { database } from './database';
import * as orders from './orders';
import * as payments from './payments';
import { Problem } from './problem';
import type { Scope } from './scope';

/*
 * No cloth is cut before the deposit that the client agreed to has come in, unless the owner says so, with a reason.
 */

/** Why an owner let an order be cut without its deposit; null where nobody did. */
export async function waiver(
  scope: Scope,
  orderId: string
): Promise<{ note: string; by: string; at: number } | null> {
  const row = await database()('deposit_waivers')
    .leftJoin('users', 'users.id', 'deposit_waivers.by')
    .where({ 'deposit_waivers.studio_id': scope.studio, order_id: orderId })
    .first<{ note: string; by: string | null; at: number } | undefined>({
      note: 'note',
      by: 'users.name',
      at: 'at'
    });
  return row ? { ...row, by: row.by ?? 'the owner' } : null;
}

/** Lets the order be cut without its deposit. Written down; said again it keeps the first reason. */
export async function waive(scope: Scope, orderId: string, note: string, now = Date.now()): Promise<void> {
  await orders.read(scope, orderId);
  await database().transaction(async (trx) => {
    await trx('deposit_waivers')
      .insert({ order_id: orderId, studio_id: scope.studio, note, by: scope.user, at: now })
      .onConflict('order_id')
      .ignore();
    await audit.recordBy(scope, 'order: cut without deposit', orderId, { note }, trx);
  });
}

/** @throws Problem 409 naming the first order whose agreed deposit is missing and not waived. Names no sum: cutters read it. */
export async function refuseWithoutDeposit(scope: Scope, orderIds: readonly string[]): Promise<void> {
  for (const id of orderIds) {
    const { agreed, missing } = await payments.depositOf(scope, id);
    if (!agreed || missing <= 0 || (await waiver(scope, id))) continue;
    const { number } = await orders.read(scope, id);
    throw new Problem(
      409,
      'deposit-missing',
      `The deposit of order ${number} has not come in`,
      'Nothing is released to cutting before it. The owner can let it be cut all the same, on the payments of the order.'
    );
  }
}
