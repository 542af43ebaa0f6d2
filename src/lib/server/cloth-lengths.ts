import type { Knex } from 'knex';
import { z } from 'zod';
import type { PriceUnit } from '$lib/cloth/cost';
import { edgeText, openEdge } from '$lib/cloth/edge';
import type { Outline } from '$lib/geometry/point';
import type { Millimetres, Minor } from '$lib/units/measure';
import * as audit from './audit';
import * as clothFlaws from './cloth-flaws';
import type { ClothFlaw, FlawInput, FlawScore } from './cloth-flaws';
import { database } from './database';
import { newId } from './ids';
import { may } from './permissions';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';

/*
 * Rolls, remnants and the client's own cloth: what is really on the shelf. What other parts of the product do with them:
 *
 *   list, read           what there is, with flaws and four-point score; prices only for who may see them
 *   create               measures a length in (a delivery, an offcut, what a client brought)
 *   reserve, release     for one order at a time, by version: two orders can't take one
 *   use                  after cutting: what is left becomes its length, or nothing is left
 *   keepOffcut           a remnant left over from it, same cloth and batch
 *
 * Every change counts `version`; a change that names an older one is refused (409).
 */

export const lengthKinds = ['roll', 'remnant', 'client'] as const;
export type LengthKind = (typeof lengthKinds)[number];

export interface ClothLength {
  readonly id: string;
  readonly clothId: string;
  readonly kind: LengthKind;
  readonly name: string;
  readonly length: Millimetres;
  readonly usableWidth: Millimetres;
  /** As typed. */
  readonly typed: { readonly length: string; readonly usableWidth: string };
  /** The edge of an odd remnant, from its start and its near side; null for a whole width. */
  readonly outline: Outline | null;
  readonly batch: string;
  readonly place: string;
  readonly note: string;
  /** Absent for who must not see prices; null: the price of the cloth. */
  readonly price?: { readonly minor: Minor; readonly unit: PriceUnit } | null;
  readonly hasPhoto: boolean;
  readonly state: 'free' | 'reserved' | 'used';
  readonly order: { readonly id: string; readonly number: number } | null;
  /** Who signed the flaws of the client's own cloth off. */
  readonly signed: { readonly by: string; readonly at: number } | null;
  readonly version: number;
  readonly flaws: readonly ClothFlaw[];
  readonly score: FlawScore;
}

export interface LengthInput {
  readonly kind: LengthKind;
  readonly name: string;
  readonly length: Millimetres;
  readonly usableWidth: Millimetres;
  readonly typed: { readonly length: string; readonly usableWidth: string };
  readonly outline: Outline | null;
  readonly batch: string;
  readonly place: string;
  readonly note: string;
  /** Taken only from who may change prices; the client's own cloth costs nothing whatever this says. */
  readonly price: { readonly minor: Minor; readonly unit: PriceUnit } | null;
}

interface LengthRow {
  id: string;
  cloth_id: string;
  kind: LengthKind;
  name: string;
  length: number;
  usable_width: number;
  typed: string;
  outline: string | null;
  batch: string;
  place: string;
  note: string;
  photo_file_id: string | null;
  used_at: number | null;
  signed_by: string | null;
  signed_at: number | null;
  version: number;
  order_id: string | null;
  order_number: number | null;
  price?: number | null;
  price_unit?: PriceUnit;
}

const own = [
  'id',
  'cloth_id',
  'kind',
  'name',
  'length',
  'usable_width',
  'typed',
  'outline',
  'batch',
  'place',
  'note',
  'photo_file_id',
  'used_at',
  'signed_by',
  'signed_at',
  'version',
  'order_id'
].map((column) => `cloth_lengths.${column}`);

const typedSchema = z.object({ length: z.string(), usableWidth: z.string() });

function query(scope: Scope, db: Knex = database()): Knex.QueryBuilder {
  return db('cloth_lengths')
    .leftJoin('orders', 'orders.id', 'cloth_lengths.order_id')
    .where({ 'cloth_lengths.studio_id': scope.studio })
    .select([...own, 'orders.number as order_number'])
    .select(may(scope.role, 'prices: see') ? ['cloth_lengths.price', 'cloth_lengths.price_unit'] : []);
}

function lengthOf(row: LengthRow, flaws: readonly ClothFlaw[]): ClothLength {
  return {
    id: row.id,
    clothId: row.cloth_id,
    kind: row.kind,
    name: row.name,
    length: row.length,
    usableWidth: row.usable_width,
    typed: typedSchema.parse(JSON.parse(row.typed)),
    outline: row.outline === null ? null : openEdge(row.outline),
    batch: row.batch,
    place: row.place,
    note: row.note,
    ...(row.price_unit === undefined
      ? {}
      : { price: row.price == null ? null : { minor: row.price, unit: row.price_unit } }),
    hasPhoto: row.photo_file_id !== null,
    state: row.used_at !== null ? 'used' : row.order_id !== null ? 'reserved' : 'free',
    order:
      row.order_id === null || row.order_number === null
        ? null
        : { id: row.order_id, number: row.order_number },
    signed:
      row.signed_by === null || row.signed_at === null ? null : { by: row.signed_by, at: row.signed_at },
    version: row.version,
    flaws,
    score: clothFlaws.scoreOf(flaws, row.length, row.usable_width)
  };
}

/** The lengths of a cloth: those at hand, rolls first; or those that are used up, the latest first. */
export async function list(
  scope: Scope,
  clothId: string,
  which: { readonly used: boolean } = { used: false }
): Promise<ClothLength[]> {
  const rows: LengthRow[] = await query(scope)
    .where({ 'cloth_lengths.cloth_id': clothId })
    .whereRaw(which.used ? 'cloth_lengths.used_at is not null' : 'cloth_lengths.used_at is null')
    .orderBy(
      which.used
        ? [{ column: 'cloth_lengths.used_at', order: 'desc' }]
        : [
            { column: 'cloth_lengths.kind', order: 'desc' },
            { column: 'cloth_lengths.length', order: 'desc' },
            { column: 'cloth_lengths.id', order: 'asc' }
          ]
    )
    .limit(500);
  const flaws = await clothFlaws.byLength(
    scope,
    rows.map(({ id }) => id)
  );
  return rows.map((row) => lengthOf(row, flaws.get(row.id) ?? []));
}

/** 404 for what is not this studio's. */
export async function read(scope: Scope, id: string, db: Knex = database()): Promise<ClothLength> {
  const row: LengthRow | undefined = await query(scope, db).where({ 'cloth_lengths.id': id }).first();
  if (!row) throw notFound('length of cloth');
  return lengthOf(row, (await clothFlaws.byLength(scope, [id], db)).get(id) ?? []);
}

function rowOf(scope: Scope, input: LengthInput): Record<string, unknown> {
  const price = input.kind === 'client' ? { minor: 0, unit: 'metre' } : input.price;
  return {
    kind: input.kind,
    name: input.name,
    length: input.length,
    usable_width: input.usableWidth,
    typed: JSON.stringify(input.typed),
    outline: input.outline === null ? null : edgeText(input.outline),
    batch: input.batch,
    place: input.place,
    note: input.note,
    ...(may(scope.role, 'prices: change') || input.kind === 'client'
      ? { price: price?.minor ?? null, price_unit: price?.unit ?? 'metre' }
      : {})
  };
}

/** Measures a length in and gives its id. 404 for a cloth that is not this studio's. */
export async function create(
  scope: Scope,
  clothId: string,
  input: LengthInput,
  { now = Date.now(), db = database(), leftFrom = null as string | null, id = newId(now) } = {}
): Promise<string> {
  const cloth = await db('cloths').where({ studio_id: scope.studio, id: clothId }).first('id');
  if (!cloth) throw notFound('cloth');
  await db('cloth_lengths').insert({
    id,
    studio_id: scope.studio,
    cloth_id: clothId,
    ...rowOf(scope, input),
    left_from: leftFrom,
    created_at: now,
    updated_at: now
  });
  return id;
}

/** Changes what was measured. Open lays on it follow; the client's signature falls, because it was for other measures. */
export async function update(
  scope: Scope,
  id: string,
  version: number,
  input: LengthInput,
  now = Date.now()
): Promise<void> {
  await change(scope, id, version, { ...rowOf(scope, input), signed_by: null, signed_at: null }, now);
}

/** Ties a photo to a length, in place of a former one. */
export async function setPhoto(scope: Scope, id: string, fileId: string, now = Date.now()): Promise<void> {
  const { version } = await read(scope, id);
  await change(scope, id, version, { photo_file_id: fileId }, now);
}

/** The file of the photo; 404 where there is none. */
export async function photoFile(scope: Scope, id: string): Promise<string> {
  const row = await database()('cloth_lengths')
    .where({ studio_id: scope.studio, id })
    .first<{ photo_file_id: string | null } | undefined>('photo_file_id');
  if (!row?.photo_file_id) throw notFound('photo');
  return row.photo_file_id;
}

/** Reserves a length for an order. 409 when it is another order's, used up, or was changed meanwhile. */
export async function reserve(
  scope: Scope,
  id: string,
  wanted: { readonly version: number; readonly orderId: string },
  now = Date.now(),
  db: Knex = database()
): Promise<void> {
  const order = await db('orders').where({ studio_id: scope.studio, id: wanted.orderId }).first('id');
  if (!order) throw notFound('order');
  const length = await read(scope, id, db);
  if (length.order && length.order.id !== wanted.orderId)
    throw new Problem(
      409,
      'length-reserved',
      'Reserved already',
      `${length.name} is reserved for order ${length.order.number}. Release it there first, or take another length.`
    );
  await change(scope, id, wanted.version, { order_id: wanted.orderId }, now, db);
  await audit.recordBy(scope, 'cloth length: reserved', id, { order: wanted.orderId }, db);
}

/** Gives a reserved length free. 409 while a released lay lies on it. */
export async function release(scope: Scope, id: string, version: number, now = Date.now()): Promise<void> {
  const { name } = await read(scope, id);
  const lay = await database()('lay_lengths')
    .join('lays', 'lays.id', 'lay_lengths.lay_id')
    .where({ 'lay_lengths.studio_id': scope.studio, 'lay_lengths.length_id': id, 'lays.state': 'released' })
    .first<{ name: string } | undefined>({ name: 'lays.name' });
  if (lay)
    throw new Problem(
      409,
      'lay-released',
      'A released lay lies on it',
      `“${lay.name}” is released to be cut from ${name}. Reopen that lay first.`
    );
  await change(scope, id, version, { order_id: null }, now);
  await audit.recordBy(scope, 'cloth length: released', id);
}

/**
 * After cutting from its start: `left` of it is there yet, reserved for nobody; nothing, and it is used up. Flaws that went
 * with the cut part are forgotten, the others move to the new start. An odd edge is forgotten: measure the rest again.
 */
export async function use(
  scope: Scope,
  id: string,
  used: { readonly version: number; readonly left: Millimetres },
  now = Date.now(),
  db: Knex = database()
): Promise<void> {
  const length = await read(scope, id, db);
  const { left } = used;
  if (!(left >= 0) || left > length.length)
    throw new Problem(
      400,
      'invalid-input',
      'More left than there was',
      `${length.name} measured ${length.length} mm; ${left} mm can't be left of it.`
    );
  await change(
    scope,
    id,
    used.version,
    {
      order_id: null,
      outline: null,
      ...(left === 0
        ? { used_at: now }
        : { length: left, typed: JSON.stringify({ ...length.typed, length: `${left} mm` }) })
    },
    now,
    db
  );
  if (left > 0) await clothFlaws.moveBy(scope, id, length.length - left, db);
  await audit.recordBy(scope, 'cloth length: used', id, { left }, db);
}

/** Keeps what was left over from a length as a remnant of its own, of the same cloth and batch, and gives its id. */
export async function keepOffcut(
  scope: Scope,
  id: string,
  offcut: Pick<LengthInput, 'name' | 'length' | 'usableWidth' | 'typed' | 'outline' | 'place' | 'note'>,
  now = Date.now(),
  db: Knex = database()
): Promise<string> {
  const from = await read(scope, id, db);
  const kind = from.kind === 'client' ? 'client' : 'remnant';
  return create(
    scope,
    from.clothId,
    { ...offcut, kind, batch: from.batch, price: from.price ?? null },
    { now, db, leftFrom: id }
  );
}

/** The client has seen the flaws of their own cloth; by name, as they signed. */
export async function signOff(
  scope: Scope,
  id: string,
  signed: { readonly version: number; readonly by: string },
  now = Date.now()
): Promise<void> {
  await change(scope, id, signed.version, { signed_by: signed.by, signed_at: now }, now);
}

/** Notes a flaw. Open lays on the length keep clear of it; the client's signature falls. */
export async function addFlaw(
  scope: Scope,
  id: string,
  flaw: FlawInput,
  now = Date.now()
): Promise<{ flaw: string }> {
  return database().transaction(async (trx) => {
    await touch(scope, id, now, trx);
    return { flaw: await clothFlaws.insert(trx, scope, id, flaw) };
  });
}

/** Forgets a flaw that was noted wrongly. */
export async function removeFlaw(scope: Scope, id: string, flaw: string, now = Date.now()): Promise<void> {
  await database().transaction(async (trx) => {
    await touch(scope, id, now, trx);
    await clothFlaws.remove(trx, scope, id, flaw);
  });
}

async function touch(scope: Scope, id: string, now: number, trx: Knex): Promise<void> {
  const { version } = await read(scope, id, trx);
  await change(scope, id, version, { signed_by: null, signed_at: null }, now, trx);
}

async function change(
  scope: Scope,
  id: string,
  version: number,
  changes: Record<string, unknown>,
  now: number,
  db: Knex = database()
): Promise<void> {
  const changed = await db('cloth_lengths')
    .where({ studio_id: scope.studio, id, version })
    .whereNull('used_at')
    .update({ ...changes, version: version + 1, updated_at: now });
  if (changed === 1) return;
  const length = await read(scope, id, db);
  if (length.state === 'used')
    throw new Problem(409, 'length-used', 'Used up', `${length.name} is used up: nothing of it is left.`);
  throw new Problem(
    409,
    'length-out-of-date',
    'Changed meanwhile',
    `Somebody changed ${length.name} meanwhile. Look at it again, then repeat what you wanted.`
  );
}
