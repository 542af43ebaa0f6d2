import type { Knex } from 'knex';
import type { Stage } from './orders';
import type { Scope } from './scope';

/**
 * Moves an order on when an event says so (a quote sent, agreed), within the event's transaction: only from one of the stages
 * `from`, so that a person who was further is never put back.
 */
export async function advanceStage(
  trx: Knex,
  scope: Scope,
  orderId: string,
  from: readonly Stage[],
  to: Stage,
  now: number
): Promise<void> {
  await trx('orders')
    .where({ studio_id: scope.studio, id: orderId })
    .whereIn('stage', [...from])
    .update({ stage: to, version: trx.raw('version + 1'), updated_at: now });
}
