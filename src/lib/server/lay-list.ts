import { z } from 'zod';
import type { Share } from '$lib/units/measure';
import { database } from './database';
import { containing, pageOf, type Listing, type Page } from './listing';
import { replacedAmong } from './replaced-panels';
import type { Scope } from './scope';

/*
 * Lays as lists show them: never the document, only what the stored verdict says of them.
 */

export interface ListedLay {
  readonly id: string;
  readonly name: string;
  readonly state: 'open' | 'released' | 'cut';
  readonly chosen: boolean;
  readonly updatedAt: number;
  readonly order: { readonly id: string; readonly number: number; readonly clientName: string };
  /** Numbers of all orders that it serves: more than one in a joint lay. */
  readonly orders: readonly number[];
  readonly cloth: { readonly id: string; readonly name: string; readonly colour: string };
  /** What the server last found; null before the first check. */
  readonly verdict: {
    readonly efficiency: Share | null;
    readonly loose: number;
    readonly stops: number;
    /** Whether the lay has not changed since. */
    readonly current: boolean;
  } | null;
  readonly revision: { readonly id: string; readonly number: number } | null;
  /** Released on panels that its order has since replaced: not to be cut. */
  readonly replaced: boolean;
}

interface LayRow {
  id: string;
  name: string;
  state: ListedLay['state'];
  chosen: number;
  updated_at: number;
  version: number;
  verdict: string | null;
  verdict_version: number | null;
  order_id: string;
  order_number: number;
  client_name: string;
  cloth_id: string;
  cloth_name: string;
  colour: string;
  revision_id: string | null;
  revision_number: number | null;
}

export const laySorts = ['order', 'cloth', 'updated'] as const;
export type LaySort = (typeof laySorts)[number];
const sortColumns = { order: 'orders.number', cloth: 'cloths.name', updated: 'lays.updated_at' } as const;

const verdictSchema = z.object({
  readings: z.object({
    efficiency: z.number().nullable(),
    pieces: z.object({ loose: z.number() })
  }),
  findings: z.array(z.object({ severity: z.enum(['stops', 'warns']) }))
});

function query(scope: Scope) {
  return database()('lays')
    .join('orders', 'orders.id', 'lays.order_id')
    .join('cloths', 'cloths.id', 'lays.cloth_id')
    .leftJoin('lay_revisions', 'lay_revisions.id', 'lays.released_revision_id')
    .where({ 'lays.studio_id': scope.studio })
    .select({
      id: 'lays.id',
      name: 'lays.name',
      state: 'lays.state',
      chosen: 'lays.chosen',
      updated_at: 'lays.updated_at',
      version: 'lays.version',
      verdict: 'lays.verdict',
      verdict_version: 'lays.verdict_version',
      order_id: 'orders.id',
      order_number: 'orders.number',
      client_name: 'orders.client_name',
      cloth_id: 'cloths.id',
      cloth_name: 'cloths.name',
      colour: 'cloths.colour',
      revision_id: 'lay_revisions.id',
      revision_number: 'lay_revisions.number'
    });
}

function listedOf(
  row: LayRow,
  joined: ReadonlyMap<string, readonly number[]>,
  replaced: ReadonlySet<string>
): ListedLay {
  const verdict = row.verdict === null ? null : verdictSchema.parse(JSON.parse(row.verdict));
  return {
    id: row.id,
    name: row.name,
    state: row.state,
    chosen: row.chosen === 1,
    updatedAt: row.updated_at,
    order: { id: row.order_id, number: row.order_number, clientName: row.client_name },
    orders: [row.order_number, ...(joined.get(row.id) ?? [])],
    cloth: { id: row.cloth_id, name: row.cloth_name, colour: row.colour },
    verdict: verdict && {
      efficiency: verdict.readings.efficiency,
      loose: verdict.readings.pieces.loose,
      stops: verdict.findings.filter((finding) => finding.severity === 'stops').length,
      current: row.verdict_version === row.version
    },
    revision:
      row.revision_id === null || row.revision_number === null
        ? null
        : { id: row.revision_id, number: row.revision_number },
    replaced: replaced.has(row.id)
  };
}

/** One page of the studio's lays, of one state or of all. */
export async function list(
  scope: Scope,
  listing: Listing<LaySort>,
  state: ListedLay['state'] | 'all' = 'all'
): Promise<Page<ListedLay>> {
  const lays = query(scope);
  if (state !== 'all') lays.where({ 'lays.state': state });
  const number = /^#?(\d{1,9})$/.exec(listing.search)?.[1];
  if (number) lays.where({ 'orders.number': Number(number) });
  else containing(lays, ['orders.client_name', 'cloths.name', 'lays.name'], listing.search);
  const page = await pageOf<LayRow, LaySort>(lays, listing, sortColumns, 'lays.id');
  const joined = await joinedOrders(scope, page.rows);
  const replaced = await replacedAmong(page.rows.map(({ id }) => id));
  return { ...page, rows: page.rows.map((row) => listedOf(row, joined, replaced)) };
}

/** Numbers of the orders that joint lays serve beside their first, by lay. */
async function joinedOrders(
  scope: Scope,
  rows: readonly { readonly id: string }[]
): Promise<Map<string, number[]>> {
  const found = await database()('lay_orders')
    .join('orders', 'orders.id', 'lay_orders.order_id')
    .where({ 'lay_orders.studio_id': scope.studio })
    .whereIn(
      'lay_orders.lay_id',
      rows.map(({ id }) => id)
    )
    .orderBy('orders.number')
    .select<{ lay: string; number: number }[]>({ lay: 'lay_orders.lay_id', number: 'orders.number' });
  const joined = new Map<string, number[]>();
  for (const { lay, number } of found) joined.set(lay, [...(joined.get(lay) ?? []), number]);
  return joined;
}

/** Every lay of an order, joint ones among them, the chosen ones first. */
export async function ofOrder(scope: Scope, orderId: string): Promise<ListedLay[]> {
  const rows: LayRow[] = await query(scope)
    .where((either) => {
      either
        .where({ 'lays.order_id': orderId })
        .orWhereIn('lays.id', database()('lay_orders').where({ order_id: orderId }).select('lay_id'));
    })
    .orderBy([{ column: 'lays.chosen', order: 'desc' }, 'lays.created_at']);
  const joined = await joinedOrders(scope, rows);
  const replaced = await replacedAmong(rows.map(({ id }) => id));
  return rows.map((row) => listedOf(row, joined, replaced));
}

/** The lays that serve a line of an order: what a change of the line touches. */
export async function ofItem(
  scope: Scope,
  itemId: string
): Promise<{ id: string; name: string; state: ListedLay['state'] }[]> {
  return database()('lay_items')
    .join('lays', 'lays.id', 'lay_items.lay_id')
    .where({ 'lay_items.studio_id': scope.studio, order_item_id: itemId })
    .orderBy('lays.created_at')
    .select<{ id: string; name: string; state: ListedLay['state'] }[]>({
      id: 'lays.id',
      name: 'lays.name',
      state: 'lays.state'
    });
}

/** Whether the person has ever saved a lay in this studio. */
export async function hasSaved(scope: Scope): Promise<boolean> {
  const saved = await database()('lay_saves')
    .where({ studio_id: scope.studio, saved_by: scope.user })
    .first('save_id');
  return saved !== undefined;
}
