import { clothCost, shareCost } from '$lib/cloth/cost';
import { areaByOrder } from '$lib/lay/by-order';
import { readingsOf } from '$lib/lay/readings';
import type { Millimetres, Minor, Share, SquareMillimetres } from '$lib/units/measure';
import { database } from './database';
import * as lays from './lays';
import * as orderCloths from './order-cloths';
import type { Scope } from './scope';

/*
 * Several orders on one cloth in one lay: whose pieces still have to be cut from a cloth, and what each order's part is.
 */

/** An order that still asks for pieces of a cloth. */
export interface OpenNeed {
  readonly id: string;
  readonly number: number;
  readonly clientName: string;
  readonly dueDate: string | null;
  readonly stage: string;
  readonly garments: number;
}

interface NeedRow {
  id: string;
  number: number;
  client_name: string;
  due_date: string | null;
  stage: string;
  garments: number | string;
}

/** Orders that take this cloth, are not over, and have no released or cut lay on it; the earliest due first. */
export async function openNeeds(scope: Scope, clothId: string): Promise<OpenNeed[]> {
  const rows: NeedRow[] = await database()('order_items')
    .join('orders', 'orders.id', 'order_items.order_id')
    .where({ 'order_items.studio_id': scope.studio })
    .whereNotIn('orders.stage', ['handedOver', 'cancelled'])
    .whereIn(
      'order_items.id',
      database()('order_item_cloths')
        .where({ studio_id: scope.studio, cloth_id: clothId })
        .select('order_item_id')
    )
    .groupBy('orders.id')
    .orderByRaw('orders.due_date is null, orders.due_date, orders.number')
    .limit(200)
    .select({
      id: 'orders.id',
      number: 'orders.number',
      client_name: 'orders.client_name',
      due_date: 'orders.due_date',
      stage: 'orders.stage'
    })
    .sum({ garments: 'order_items.quantity' });
  const cloths = await orderCloths.byOrder(
    scope,
    rows.map(({ id }) => id)
  );
  return rows
    .filter(({ id }) => cloths.get(id)?.some((cloth) => cloth.id === clothId && !cloth.released))
    .map((row) => ({
      id: row.id,
      number: row.number,
      clientName: row.client_name,
      dueDate: row.due_date,
      stage: row.stage,
      garments: Number(row.garments)
    }));
}

/** One order's part of a joint lay. */
export interface OrderShare {
  readonly order: { readonly id: string; readonly number: number };
  readonly area: SquareMillimetres;
  readonly share: Share;
  /** Its part of the cloth to buy, or of the cloth that is taken. */
  readonly length: Millimetres;
  /** Absent for who must not see prices, and while there is no price. */
  readonly cost?: Minor;
}

/** The parts of a lay's orders, by the area of their pieces; costs add up to the cost of the whole. */
export async function sharesOf(
  scope: Scope,
  lay: Pick<lays.Lay, 'document' | 'panels' | 'orders' | 'cloth'>
): Promise<OrderShare[]> {
  const items = await database()('order_items')
    .where({ studio_id: scope.studio })
    .whereIn('id', [...new Set(lay.document.garments.map(({ orderItem }) => orderItem))])
    .select<{ id: string; order_id: string }[]>('id', 'order_id');
  const orderOf = new Map(items.map(({ id, order_id }) => [id, order_id]));
  const areas = areaByOrder(lay.document, lay.panels, (item) => orderOf.get(item));
  const weights = lay.orders.map(({ id }) => areas.get(id) ?? 0);
  const whole = weights.reduce((sum, area) => sum + area, 0);
  if (whole === 0) return [];
  const { total } = readingsOf(lay.document, lay.panels).clothToBuy;
  const { price } = lay.cloth;
  const costs = price ? shareCost(clothCost(total, price.minor, price.unit), weights) : null;
  return lay.orders.map((order, i) => ({
    order,
    area: weights[i]!,
    share: weights[i]! / whole,
    length: (total * weights[i]!) / whole,
    ...(costs ? { cost: costs[i]! } : {})
  }));
}
