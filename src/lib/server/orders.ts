import type { Knex } from 'knex';
import { database } from './database';
import { newId } from './ids';
import { containing, pageOf, type Listing, type Page } from './listing';
import * as orderCloths from './order-cloths';
import * as items from './order-items';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';

/*
 * Orders: who gets what by when, and how far it is. An order's version counts its changes; a change names the version
 * that the person looked at, so that nobody overwrites what they have not seen.
 */

export const stages = [
  'enquiry',
  'quoted',
  'agreed',
  'cutting',
  'sewing',
  'fitting',
  'handedOver',
  'closed',
  'cancelled'
] as const;
export type Stage = (typeof stages)[number];

/** Stages of orders that nobody works on any more. */
const ended: readonly Stage[] = ['closed', 'cancelled'];

export interface OrderInput {
  readonly clientName: string;
  /** 2026-05-31, in the studio's zone; null while open. */
  readonly dueDate: string | null;
  readonly stage: Stage;
  readonly note: string;
}

export interface ListedOrder {
  readonly id: string;
  readonly number: number;
  readonly clientName: string;
  readonly dueDate: string | null;
  readonly stage: Stage;
  readonly updatedAt: number;
  readonly garments: number;
  /** How many cloths its lines take. */
  readonly cloths: number;
  /** How many of them have no released lay yet. */
  readonly clothsToLay: number;
}

export interface Order extends OrderInput {
  readonly id: string;
  readonly number: number;
  readonly version: number;
  readonly createdAt: number;
  readonly updatedAt: number;
  readonly items: readonly items.OrderItem[];
  readonly cloths: readonly orderCloths.OrderCloth[];
}

interface OrderRow {
  id: string;
  number: number;
  client_name: string;
  due_date: string | null;
  stage: Stage;
  note: string;
  version: number;
  created_at: number;
  updated_at: number;
}

export const orderSorts = ['number', 'client', 'due', 'updated'] as const;
export type OrderSort = (typeof orderSorts)[number];
const sortColumns = {
  number: 'number',
  client: 'client_name',
  due: 'due_date',
  updated: 'updated_at'
} as const;

/** One page of the studio's orders: those in work, all of them, or those of one stage. */
export async function list(
  scope: Scope,
  listing: Listing<OrderSort>,
  which: Stage | 'inWork' | 'all' = 'inWork'
): Promise<Page<ListedOrder>> {
  const query = database()('orders')
    .where({ studio_id: scope.studio })
    .select<OrderRow[]>('id', 'number', 'client_name', 'due_date', 'stage', 'updated_at');
  if (which === 'inWork') query.whereNotIn('stage', [...ended]);
  else if (which !== 'all') query.where({ stage: which });
  const number = /^#?(\d{1,9})$/.exec(listing.search)?.[1];
  if (number) query.where({ number: Number(number) });
  else containing(query, ['client_name', 'note'], listing.search);
  const page = await pageOf<OrderRow, OrderSort>(query, listing, sortColumns, 'id');

  const ids = page.rows.map((row) => row.id);
  const garments = await database()('order_items')
    .where({ studio_id: scope.studio })
    .whereIn('order_id', ids)
    .groupBy('order_id')
    .select<{ order_id: string; n: number }[]>('order_id', database().raw('sum(quantity) as n'));
  const cloths = await orderCloths.byOrder(scope, ids);
  return {
    ...page,
    rows: page.rows.map((row) => ({
      id: row.id,
      number: row.number,
      clientName: row.client_name,
      dueDate: row.due_date,
      stage: row.stage,
      updatedAt: row.updated_at,
      garments: Number(garments.find((one) => one.order_id === row.id)?.n ?? 0),
      cloths: cloths.get(row.id)?.length ?? 0,
      clothsToLay: (cloths.get(row.id) ?? []).filter((cloth) => !cloth.released).length
    }))
  };
}

/** Whether the studio has any order at all. */
export async function any(scope: Scope): Promise<boolean> {
  return (await database()('orders').where({ studio_id: scope.studio }).first('id')) !== undefined;
}

/** The order with its lines and cloths. Throws 404 for what is not this studio's. */
export async function read(scope: Scope, id: string): Promise<Order> {
  const row = await database()('orders').where({ studio_id: scope.studio, id }).first<OrderRow | undefined>();
  if (!row) throw notFound('order');
  return {
    id: row.id,
    number: row.number,
    clientName: row.client_name,
    dueDate: row.due_date,
    stage: row.stage,
    note: row.note,
    version: row.version,
    createdAt: row.created_at,
    updatedAt: row.updated_at,
    items: await items.list(scope, id),
    cloths: (await orderCloths.byOrder(scope, [id])).get(id) ?? []
  };
}

/** Opens an order under the studio's next number; numbers have no gaps. Gives its id. */
export async function create(
  scope: Scope,
  order: OrderInput,
  lines: readonly items.OrderItemInput[] = [],
  { id = newId(), now = Date.now() }: { id?: string; now?: number } = {}
): Promise<string> {
  for (const line of lines) await items.refuseForeign(scope, line);
  await database().transaction(async (trx) => {
    await trx('studios').where({ id: scope.studio }).increment('last_order_number', 1);
    const studio = await trx('studios')
      .where({ id: scope.studio })
      .first<{ last_order_number: number }>('last_order_number');
    await trx('orders').insert({
      id,
      studio_id: scope.studio,
      number: studio.last_order_number,
      ...rowOf(order),
      version: 1,
      created_at: now,
      updated_at: now
    });
    for (const line of lines) await items.insert(trx, scope, id, line, newId(now));
  });
  return id;
}

function rowOf(order: OrderInput): Record<string, unknown> {
  return {
    client_name: order.clientName,
    due_date: order.dueDate,
    stage: order.stage,
    note: order.note
  };
}

/**
 * Counts a change of the version that the person looked at, within its transaction. Refuses (409 order-out-of-date)
 * when somebody changed the order since.
 */
async function countChange(
  trx: Knex,
  scope: Scope,
  id: string,
  version: number,
  now: number
): Promise<number> {
  const changed = await trx('orders')
    .where({ studio_id: scope.studio, id, version })
    .update({ version: version + 1, updated_at: now });
  if (changed === 1) return version + 1;
  const current = await trx('orders')
    .where({ studio_id: scope.studio, id })
    .first<{ version: number } | undefined>('version');
  if (!current) throw notFound('order');
  throw new Problem(
    409,
    'order-out-of-date',
    'Somebody changed this order since you opened it',
    'Your typing is kept. Look at what the order says now, then save again.',
    { current: current.version }
  );
}

/** Changes what stands at the head of an order; gives its new version. */
export async function update(
  scope: Scope,
  id: string,
  version: number,
  order: OrderInput,
  now: number = Date.now()
): Promise<number> {
  return database().transaction(async (trx) => {
    const next = await countChange(trx, scope, id, version, now);
    await trx('orders').where({ studio_id: scope.studio, id }).update(rowOf(order));
    return next;
  });
}

/** Adds a line; gives its id. */
export async function addItem(
  scope: Scope,
  id: string,
  version: number,
  item: items.OrderItemInput,
  now: number = Date.now()
): Promise<string> {
  await items.refuseForeign(scope, item);
  const itemId = newId(now);
  await database().transaction(async (trx) => {
    await countChange(trx, scope, id, version, now);
    await items.insert(trx, scope, id, item, itemId);
  });
  return itemId;
}

/** Changes a line. Lays that serve it keep their pieces until `lays` recounts what they are asked for. */
export async function updateItem(
  scope: Scope,
  id: string,
  version: number,
  itemId: string,
  item: items.OrderItemInput,
  now: number = Date.now()
): Promise<void> {
  await items.refuseForeign(scope, item);
  await database().transaction(async (trx) => {
    await countChange(trx, scope, id, version, now);
    if (!(await items.change(trx, scope, id, itemId, item))) throw notFound('line of this order');
  });
}

/** Takes a line away. */
export async function removeItem(
  scope: Scope,
  id: string,
  version: number,
  itemId: string,
  now: number = Date.now()
): Promise<void> {
  await database().transaction(async (trx) => {
    await countChange(trx, scope, id, version, now);
    const removed = await trx('order_items')
      .where({ studio_id: scope.studio, order_id: id, id: itemId })
      .delete();
    if (removed === 0) throw notFound('line of this order');
  });
}

/** The styles that a line may take, each with its newest version, by name. */
export async function styleChoices(
  scope: Scope
): Promise<{ id: string; name: string; versionId: string; number: number }[]> {
  const rows = await database()('styles')
    .join('style_versions', 'style_versions.style_id', 'styles.id')
    .where({ 'styles.studio_id': scope.studio })
    .whereNull('styles.archived_at')
    .orderBy(['styles.name', 'styles.id', { column: 'style_versions.number', order: 'desc' }])
    .select<{ id: string; name: string; versionId: string; number: number }[]>({
      id: 'styles.id',
      name: 'styles.name',
      versionId: 'style_versions.id',
      number: 'style_versions.number'
    });
  return rows.filter((row, i) => rows[i - 1]?.id !== row.id);
}
