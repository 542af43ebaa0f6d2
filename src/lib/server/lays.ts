import type { Knex } from 'knex';
import { check as checkLay } from '$lib/lay/check';
import type { LayDocument } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import { same } from '$lib/lay/same';
import { newLay, openLayDocument, UnreadableDocument } from '$lib/lay/stored-lay';
import type { Verdict } from '$lib/lay/verdict';
import { database } from './database';
import { newId } from './ids';
import { refuseWhatIsNotTheirs } from './lay-claims';
import {
  current,
  ordersOf,
  outOfDate,
  refuseUnlessOpen,
  rowOf,
  type LayRow,
  type LayState
} from './lay-current';
import * as layFacts from './lay-facts';
import type { ClothFacts, LayFacts } from './lay-facts';
import * as layLengths from './lay-lengths';
import * as layRevisions from './lay-revisions';
import type { ReleasedRevision } from './lay-revisions';
import { invalid, Problem } from './problem';
import type { Scope } from './scope';

/*
 * Lays: made from an order and one of its cloths, saved by version, checked here. Lists are in lay-list.ts, what is kept
 * for good in lay-revisions.ts and lay-release.ts.
 */

/** A lay as the Lay table and the API get it. */
export interface Lay {
  readonly id: string;
  readonly name: string;
  readonly state: LayState;
  readonly chosen: boolean;
  readonly version: number;
  readonly document: LayDocument;
  readonly panels: PanelBook;
  readonly order: LayFacts['order'];
  /** Every order that it serves: more than one in a joint lay. */
  readonly orders: LayFacts['orders'];
  readonly cloth: ClothFacts;
  readonly verdict: Verdict | null;
  readonly verdictVersion: number | null;
  readonly revision: ReleasedRevision | null;
  readonly updatedAt: number;
}

export async function read(scope: Scope, id: string): Promise<Lay> {
  const { row, facts, document, panels } = await current(scope, id);
  return {
    id: row.id,
    name: row.name,
    state: row.state,
    chosen: row.chosen === 1,
    version: row.version,
    document,
    panels,
    order: facts.order,
    orders: facts.orders,
    cloth: facts.cloth,
    verdict: row.verdict === null ? null : (JSON.parse(row.verdict) as Verdict),
    verdictVersion: row.verdict_version,
    revision: row.released_revision_id ? await layRevisions.released(scope, row.released_revision_id) : null,
    updatedAt: row.updated_at
  };
}

/**
 * A new lay of an order on one of its cloths, everything on the Rail: open cloth, right side up, 20 mm at each end, shears'
 * clearance. `with` joins further orders; `length` takes a roll or remnant. Without a name it is called 'Lay 1', 'Lay 2' and
 * so on. Refused when nothing of one of the orders is cut from that cloth.
 */
export async function create(
  scope: Scope,
  input: {
    readonly orderId: string;
    readonly clothId: string;
    readonly name?: string;
    readonly with?: readonly string[];
    readonly length?: string | null;
  },
  now = Date.now()
): Promise<{ id: string }> {
  const others = [...new Set(input.with ?? [])].filter((id) => id !== input.orderId);
  const orders: [string, ...string[]] = [input.orderId, ...others];
  const length =
    input.length == null ? null : await layLengths.usableFor(scope, input.length, input.clothId, orders);
  const facts = await layFacts.read(scope, orders, input.clothId, length);
  for (const order of orders) {
    const alone = orders.length === 1 ? facts : await layFacts.read(scope, [order], input.clothId);
    if (alone.garments.length === 0)
      throw invalid({ clothId: `Nothing of order ${alone.order.number} is cut from ${facts.cloth.name}.` });
  }
  const document = newLay({
    strip: layFacts.stripWith(layFacts.stripOf(facts.cloth), facts),
    garments: facts.garments,
    book: facts.book,
    takes: facts.takes
  });
  const name = input.name?.trim() || (await nextName(scope, input, others.length > 0));
  return insert(
    scope,
    {
      orderId: input.orderId,
      clothId: input.clothId,
      name,
      document,
      with: others,
      length: length?.id ?? null
    },
    now
  );
}

/** 'Lay 3' for the third lay of an order on a cloth. */
async function nextName(
  scope: Scope,
  lay: { orderId: string; clothId: string },
  joint: boolean
): Promise<string> {
  const [counted] = await database()('lays')
    .where({ studio_id: scope.studio, order_id: lay.orderId, cloth_id: lay.clothId })
    .count<{ count: number }[]>({ count: 'id' });
  return `${joint ? 'Joint lay' : 'Lay'} ${Number(counted?.count ?? 0) + 1}`;
}

/** A copy of a lay (or of `document`, made from it) under another name, open, with the order's facts as they stand. */
export async function duplicate(
  scope: Scope,
  id: string,
  name: string,
  now = Date.now(),
  other?: LayDocument
): Promise<{ id: string }> {
  const { row, facts, document: own } = await current(scope, id);
  const document = other ?? own;
  if (name.trim() === '') throw invalid({ name: 'Give the lay a name.' });
  return insert(
    scope,
    {
      orderId: row.order_id,
      clothId: row.cloth_id,
      name: name.trim(),
      document: layFacts.withFacts(document, facts),
      with: facts.orders.slice(1).map((order) => order.id),
      length: facts.length?.id ?? null
    },
    now
  );
}

async function insert(
  scope: Scope,
  lay: {
    orderId: string;
    clothId: string;
    name: string;
    document: LayDocument;
    with: readonly string[];
    length: string | null;
  },
  now: number
): Promise<{ id: string }> {
  const id = newId(now);
  await database().transaction(async (trx) => {
    await trx('lays').insert({
      id,
      studio_id: scope.studio,
      order_id: lay.orderId,
      cloth_id: lay.clothId,
      name: lay.name,
      state: 'open',
      chosen: 0,
      version: 1,
      document: JSON.stringify(lay.document),
      created_by: scope.user,
      created_at: now,
      updated_at: now
    });
    for (const order of lay.with)
      await trx('lay_orders').insert({ studio_id: scope.studio, lay_id: id, order_id: order });
    await layLengths.tie(trx, scope, id, lay.length);
    await tieItems(trx, scope, id, lay.document);
  });
  return { id };
}

/** Notes which order lines a lay serves. */
async function tieItems(trx: Knex, scope: Scope, layId: string, document: LayDocument): Promise<void> {
  const items = [...new Set(document.garments.map(({ orderItem }) => orderItem))];
  await trx('lay_items')
    .where({ studio_id: scope.studio, lay_id: layId })
    .whereNotIn('order_item_id', items)
    .delete();
  if (items.length > 0)
    await trx('lay_items')
      .insert(
        items.map((item) => ({
          id: newId(),
          studio_id: scope.studio,
          lay_id: layId,
          order_item_id: item
        }))
      )
      .onConflict(['lay_id', 'order_item_id'])
      .ignore();
}

export interface Save {
  /** The version that the document was made from. */
  readonly version: number;
  /** Made by the browser; a repeat gets the first answer. */
  readonly saveId: string;
  /** As posted: it comes in through the door of lay documents. */
  readonly document: unknown;
}

export interface Saved {
  readonly version: number;
  readonly savedAt: number;
}

/**
 * Saves a lay. 409 `lay-out-of-date` with what is stored when it was made from an older version, or when the order or the
 * cloth changed meanwhile; 409 `lay-released` when it is no longer open; 400 for a document that does not fit or claims
 * what is the server's to say.
 */
export async function save(scope: Scope, id: string, posted: Save, now = Date.now()): Promise<Saved> {
  const document = opened(posted.document);
  const { row, facts, document: stored } = await current(scope, id);
  const before = await earlierSave(database(), scope, id, posted.saveId);
  if (before) return before;
  refuseUnlessOpen(row);
  if (row.version !== posted.version) throw await outOfDate(scope, id);
  const claim = refuseWhatIsNotTheirs(document, stored, openLayDocument(JSON.parse(row.document)), facts);
  if (claim === 'facts-changed') throw await outOfDate(scope, id);
  return store(scope, id, { ...posted, document }, now);
}

/**
 * Brings every open lay of an order up to what its lines now ask for: after a line was changed or removed. A lay that
 * differs gets a new version, so that an open Lay table learns of it at its next save.
 */
export async function recount(scope: Scope, orderId: string, now = Date.now()): Promise<void> {
  const open = await servedBy(database(), scope, [orderId])
    .where({ 'lays.state': 'open' })
    .select<{ id: string }[]>('lays.id');
  for (const { id } of open) {
    const { row, document } = await current(scope, id);
    if (same(document, openLayDocument(JSON.parse(row.document)))) continue;
    await store(scope, id, { version: row.version, saveId: newId(now), document }, now);
  }
}

/** Lays that serve one of `orders`, joint ones among them. */
function servedBy(db: Knex, scope: Scope, orders: readonly string[]): Knex.QueryBuilder {
  return db('lays')
    .where({ 'lays.studio_id': scope.studio })
    .where((either) => {
      either
        .whereIn('lays.order_id', orders)
        .orWhereIn('lays.id', db('lay_orders').whereIn('order_id', orders).select('lay_id'));
    });
}

/**
 * Puts an open lay on another roll or remnant, or with null on cloth that is still to be bought. What lies on it stays where it
 * is; the check says what no longer fits. 409 when the named version is not current, or the length is another order's.
 */
export async function setLength(
  scope: Scope,
  id: string,
  wanted: { readonly version: number; readonly saveId: string; readonly length: string | null },
  now = Date.now()
): Promise<Saved> {
  const { row, facts, document } = await current(scope, id);
  refuseUnlessOpen(row);
  const orders = facts.orders.map((order) => order.id);
  const length =
    wanted.length === null ? null : await layLengths.usableFor(scope, wanted.length, row.cloth_id, orders);
  const there = await layFacts.read(scope, orders as [string, ...string[]], row.cloth_id, length);
  return store(
    scope,
    id,
    { version: wanted.version, saveId: wanted.saveId, document: layFacts.withFacts(document, there) },
    now,
    (trx) => layLengths.tie(trx, scope, id, wanted.length)
  );
}

/** The posted document through the door; a refusal says what was got and what is expected. */
function opened(json: unknown): LayDocument {
  try {
    return openLayDocument(json);
  } catch (refusal) {
    if (refusal instanceof UnreadableDocument)
      throw new Problem(400, 'invalid-document', 'The lay does not fit', refusal.message, {
        issues: refusal.issues
      });
    throw refusal;
  }
}

/** Writes an accepted document, unless somebody was faster. */
export async function store(
  scope: Scope,
  id: string,
  save: { readonly version: number; readonly saveId: string; readonly document: LayDocument },
  now: number,
  also: (trx: Knex) => Promise<void> = async () => {}
): Promise<Saved> {
  const outcome = await database().transaction(async (trx): Promise<Saved | null> => {
    const before = await earlierSave(trx, scope, id, save.saveId);
    if (before) return before;
    const version = save.version + 1;
    const changed = await trx('lays')
      .where({ studio_id: scope.studio, id, version: save.version, state: 'open' })
      .update({ document: JSON.stringify(save.document), version, updated_at: now });
    if (changed === 0) return null;
    await trx('lay_saves').insert({
      studio_id: scope.studio,
      lay_id: id,
      save_id: save.saveId,
      version,
      saved_by: scope.user,
      saved_at: now
    });
    await tieItems(trx, scope, id, save.document);
    await also(trx);
    return { version, savedAt: now };
  });
  if (outcome) return outcome;
  refuseUnlessOpen(await rowOf(scope, id));
  throw await outOfDate(scope, id);
}

async function earlierSave(db: Knex, scope: Scope, id: string, saveId: string): Promise<Saved | null> {
  const row = await db('lay_saves')
    .where({ studio_id: scope.studio, lay_id: id, save_id: saveId })
    .first<{ version: number; saved_at: number } | undefined>('version', 'saved_at');
  return row ? { version: row.version, savedAt: row.saved_at } : null;
}

/** The server's check of the named version, which is kept with the lay. 409 when that version is no longer current. */
export async function check(
  scope: Scope,
  id: string,
  version: number
): Promise<{ version: number; verdict: Verdict }> {
  const { row, document, panels } = await current(scope, id);
  if (row.version !== version) throw await outOfDate(scope, id);
  if (row.state !== 'open' && row.verdict !== null)
    return { version, verdict: JSON.parse(row.verdict) as Verdict };
  const verdict = checkLay(document, panels);
  await keepVerdict(scope, id, version, verdict);
  return { version, verdict };
}

async function keepVerdict(scope: Scope, id: string, version: number, verdict: Verdict): Promise<void> {
  const kept = await database()('lays')
    .where({ studio_id: scope.studio, id, version })
    .update({ verdict: JSON.stringify(verdict), verdict_version: version });
  if (kept === 0) throw await outOfDate(scope, id);
}

/** Marks the lay that the order will be cut from on this cloth, and no other. */
export async function choose(scope: Scope, id: string): Promise<void> {
  await database().transaction(async (trx) => {
    const row = await rowOf(scope, id, trx);
    await refuseBesideReleased(trx, scope, row);
    await markChosen(trx, scope, row);
  });
}

/** Marks `row` as the chosen one of its orders and cloth, within a transaction. */
export async function markChosen(trx: Knex, scope: Scope, row: LayRow): Promise<void> {
  const orders = await ordersOf(scope, row, trx);
  await servedBy(trx, scope, orders)
    .where({ cloth_id: row.cloth_id })
    .whereNot({ id: row.id })
    .update({ chosen: 0 });
  await trx('lays').where({ studio_id: scope.studio, id: row.id }).update({ chosen: 1 });
}

/** Refuses when another lay of one of the same orders and the cloth is released: the pieces would be cut twice. */
export async function refuseBesideReleased(trx: Knex, scope: Scope, row: LayRow): Promise<void> {
  const other = await servedBy(trx, scope, await ordersOf(scope, row, trx))
    .where({ cloth_id: row.cloth_id })
    .whereNot({ id: row.id })
    .whereNot({ state: 'open' })
    .first<{ name: string } | undefined>('name');
  if (other)
    throw new Problem(
      409,
      'other-lay-released',
      'Another lay is released',
      `“${other.name}” is released for this order and cloth: the pieces would be cut twice. Reopen it first.`
    );
}
