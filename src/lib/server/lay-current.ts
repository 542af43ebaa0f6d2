import type { LayDocument } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import { openLayDocument } from '$lib/lay/stored-lay';
import type { Knex } from 'knex';
import { database } from './database';
import * as layFacts from './lay-facts';
import type { LayFacts } from './lay-facts';
import * as layLengths from './lay-lengths';
import * as layRevisions from './lay-revisions';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';

/*
 * A lay as it stands: its row, with what the order and the cloth say now.
 */

export type LayState = 'open' | 'released' | 'cut';

export interface LayRow {
  id: string;
  order_id: string;
  cloth_id: string;
  name: string;
  state: LayState;
  chosen: number;
  version: number;
  document: string;
  verdict: string | null;
  verdict_version: number | null;
  released_revision_id: string | null;
  created_by: string;
  created_at: number;
  updated_at: number;
}

/** The row of a lay of this studio; 404 for any other. */
export async function rowOf(scope: Scope, id: string, db: Knex = database()): Promise<LayRow> {
  const row = await db('lays').where({ studio_id: scope.studio, id }).first<LayRow | undefined>();
  if (!row) throw notFound('lay');
  return row;
}

/** The orders that a lay serves: the one it was made from, then those that it was joined with. */
export async function ordersOf(
  scope: Scope,
  row: Pick<LayRow, 'id' | 'order_id'>,
  db: Knex = database()
): Promise<[string, ...string[]]> {
  const others = await db('lay_orders')
    .join('orders', 'orders.id', 'lay_orders.order_id')
    .where({ 'lay_orders.studio_id': scope.studio, 'lay_orders.lay_id': row.id })
    .orderBy('orders.number')
    .select<{ order_id: string }[]>('lay_orders.order_id');
  return [row.order_id, ...others.map(({ order_id }) => order_id)];
}

/** What a lay is now: an open one with the facts of its order and cloth as they stand, a released one as it was kept. */
export interface Current {
  readonly row: LayRow;
  readonly facts: LayFacts;
  readonly document: LayDocument;
  readonly panels: PanelBook;
}

export async function current(scope: Scope, id: string): Promise<Current> {
  const row = await rowOf(scope, id);
  const facts = await layFacts.read(
    scope,
    await ordersOf(scope, row),
    row.cloth_id,
    await layLengths.lengthOf(scope, id)
  );
  if (row.state !== 'open' && row.released_revision_id) {
    const kept = await layRevisions.keptOf(scope, row.released_revision_id);
    return { row, facts, document: kept.document, panels: kept.panels };
  }
  const document = layFacts.withFacts(openLayDocument(JSON.parse(row.document)), facts);
  return { row, facts, document, panels: facts.book };
}

/** Refuses to change a lay that is released or cut. */
export function refuseUnlessOpen(row: Pick<LayRow, 'state'>): void {
  if (row.state === 'released')
    throw new Problem(
      409,
      'lay-released',
      'This lay is released',
      'A released lay is read-only. Reopen it to change it: that makes a new version.'
    );
  if (row.state === 'cut')
    throw new Problem(409, 'lay-cut', 'This lay is cut', 'A lay that was cut never changes.');
}

/** The refusal of a stale save, with what is stored now. */
export async function outOfDate(scope: Scope, id: string): Promise<Problem> {
  const { row, document } = await current(scope, id);
  const last = await database()('lay_saves')
    .leftJoin('users', 'users.id', 'lay_saves.saved_by')
    .where({ 'lay_saves.studio_id': scope.studio, lay_id: id })
    .orderBy('lay_saves.version', 'desc')
    .first<{ name: string | null; saved_at: number } | undefined>({
      name: 'users.name',
      saved_at: 'lay_saves.saved_at'
    });
  return new Problem(
    409,
    'lay-out-of-date',
    'The lay has changed meanwhile',
    'Your work is kept. Take over what changed, then save again.',
    {
      current: {
        version: row.version,
        document,
        savedBy: last?.name ?? 'the workroom',
        savedAt: last?.saved_at ?? row.updated_at
      }
    }
  );
}
