import { clothRoles, type ClothRole } from '$lib/pattern/panel';
import type { Millimetres } from '$lib/units/measure';
import { database } from './database';
import type { Scope } from './scope';

/*
 * The cloths of orders, gathered from their lines, and which of them may be cut from.
 */

/** A cloth that the lines of an order take. */
export interface OrderCloth {
  readonly id: string;
  readonly name: string;
  readonly colour: string;
  readonly usableWidth: Millimetres;
  /** As what: main, lining … */
  readonly roles: readonly ClothRole[];
  /** Whether a lay of it for this order is released (or cut already). */
  readonly released: boolean;
}

/** The cloths that orders take, by order. */
export async function byOrder(scope: Scope, orderIds: readonly string[]): Promise<Map<string, OrderCloth[]>> {
  const rows = await database()('order_item_cloths')
    .join('order_items', 'order_items.id', 'order_item_cloths.order_item_id')
    .join('cloths', 'cloths.id', 'order_item_cloths.cloth_id')
    .where({ 'order_item_cloths.studio_id': scope.studio })
    .whereIn('order_items.order_id', orderIds)
    .orderBy(['order_items.position', 'order_item_cloths.role'])
    .select<
      { orderId: string; role: ClothRole; id: string; name: string; colour: string; usableWidth: number }[]
    >({
      orderId: 'order_items.order_id',
      role: 'order_item_cloths.role',
      id: 'cloths.id',
      name: 'cloths.name',
      colour: 'cloths.colour',
      usableWidth: 'cloths.usable_width'
    });
  const released = await releasedOf(scope, orderIds);
  const found = new Map<string, OrderCloth[]>();
  for (const row of rows) {
    const cloths = found.get(row.orderId) ?? [];
    found.set(row.orderId, cloths);
    const at = cloths.findIndex((cloth) => cloth.id === row.id);
    const known = cloths[at];
    if (!known)
      cloths.push({
        id: row.id,
        name: row.name,
        colour: row.colour,
        usableWidth: row.usableWidth,
        roles: [row.role],
        released: released.has(`${row.orderId}/${row.id}`)
      });
    else if (!known.roles.includes(row.role)) cloths[at] = { ...known, roles: [...known.roles, row.role] };
  }
  // The main cloth first, as people speak of them.
  const rank = ({ roles }: OrderCloth) => Math.min(...roles.map((role) => clothRoles.indexOf(role)));
  for (const cloths of found.values()) cloths.sort((a, b) => rank(a) - rank(b));
  return found;
}

/** 'order/cloth' of every released or cut lay that serves one of some orders. */
async function releasedOf(scope: Scope, orderIds: readonly string[]): Promise<Set<string>> {
  const lays = () =>
    database()('lays').where({ 'lays.studio_id': scope.studio }).whereIn('lays.state', ['released', 'cut']);
  const own = await lays()
    .whereIn('lays.order_id', orderIds)
    .distinct<{ order: string; cloth: string }[]>({ order: 'lays.order_id', cloth: 'lays.cloth_id' });
  const joined = await lays()
    .join('lay_orders', 'lay_orders.lay_id', 'lays.id')
    .whereIn('lay_orders.order_id', orderIds)
    .distinct<{ order: string; cloth: string }[]>({ order: 'lay_orders.order_id', cloth: 'lays.cloth_id' });
  return new Set([...own, ...joined].map(({ order, cloth }) => `${order}/${cloth}`));
}
