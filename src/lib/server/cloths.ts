import type { Knex } from 'knex';
import { z } from 'zod';
import type { PriceUnit } from '$lib/cloth/cost';
import type { Shrinkage, Treatment } from '$lib/cloth/shrinkage';
import type { Millimetres, Minor } from '$lib/units/measure';
import * as audit from './audit';
import { database } from './database';
import { newId } from './ids';
import { containing, pageOf, type Listing, type Page } from './listing';
import { may } from './permissions';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';

/*
 * The cloths of a studio. Prices and what is noted about suppliers are left out of the query for whoever must not see
 * prices.
 */

export const clothNaps = ['none', 'oneWay'] as const;
export type ClothNap = (typeof clothNaps)[number];

export interface ClothPrice {
  readonly minor: Minor;
  readonly unit: PriceUnit;
}

/** A cloth as lists show it. */
export interface ListedCloth {
  readonly id: string;
  readonly name: string;
  readonly fibre: string;
  readonly fullWidth: Millimetres;
  readonly usableWidth: Millimetres;
  readonly sidesAlike: boolean;
  readonly nap: ClothNap;
  readonly colour: string;
  readonly archived: boolean;
  /** Absent for who must not see prices; null while unknown. */
  readonly price?: ClothPrice | null;
}

export interface Cloth extends ListedCloth {
  /** The widths as they were typed. */
  readonly typed: { readonly fullWidth: string; readonly usableWidth: string };
  /** Absent for who must not see prices. */
  readonly supplierNote?: string;
  readonly shrinkage: Shrinkage;
  /** What it is sold in whole multiples of. */
  readonly buyStep: Millimetres;
  readonly updatedAt: number;
}

export interface ClothInput {
  readonly name: string;
  readonly fibre: string;
  readonly fullWidth: Millimetres;
  readonly usableWidth: Millimetres;
  readonly typed: { readonly fullWidth: string; readonly usableWidth: string };
  readonly price: ClothPrice | null;
  readonly sidesAlike: boolean;
  readonly nap: ClothNap;
  /** #RRGGBB */
  readonly colour: string;
  readonly supplierNote: string;
  /** Left out: it does not shrink. */
  readonly shrinkage?: Shrinkage;
  /** Left out: 100 mm. */
  readonly buyStep?: Millimetres;
}

interface ClothRow {
  id: string;
  name: string;
  fibre: string;
  full_width: number;
  usable_width: number;
  typed: string;
  sides_alike: number;
  nap: ClothNap;
  colour: string;
  archived_at: number | null;
  shrink_treatment: Treatment;
  shrink_warp: number;
  shrink_weft: number;
  buy_step: number;
  updated_at: number;
  price?: number | null;
  price_unit?: PriceUnit;
  supplier_note?: string;
}

const open = [
  'id',
  'name',
  'fibre',
  'full_width',
  'usable_width',
  'typed',
  'sides_alike',
  'nap',
  'colour',
  'archived_at',
  'shrink_treatment',
  'shrink_warp',
  'shrink_weft',
  'buy_step',
  'updated_at'
];
const priced = [...open, 'price', 'price_unit', 'supplier_note'];
const columnsFor = (scope: Scope) => (may(scope.role, 'prices: see') ? priced : open);

const typedSchema = z.object({ fullWidth: z.string(), usableWidth: z.string() });

function listedOf(row: ClothRow): ListedCloth {
  const shown = {
    id: row.id,
    name: row.name,
    fibre: row.fibre,
    fullWidth: row.full_width,
    usableWidth: row.usable_width,
    sidesAlike: row.sides_alike === 1,
    nap: row.nap,
    colour: row.colour,
    archived: row.archived_at !== null
  };
  if (row.price_unit === undefined) return shown;
  return { ...shown, price: row.price == null ? null : { minor: row.price, unit: row.price_unit } };
}

function clothOf(row: ClothRow): Cloth {
  return {
    ...listedOf(row),
    typed: typedSchema.parse(JSON.parse(row.typed)),
    ...(row.supplier_note === undefined ? {} : { supplierNote: row.supplier_note }),
    shrinkage: { treatment: row.shrink_treatment, warp: row.shrink_warp, weft: row.shrink_weft },
    buyStep: row.buy_step,
    updatedAt: row.updated_at
  };
}

export const clothSorts = ['name', 'fibre', 'width', 'updated'] as const;
export type ClothSort = (typeof clothSorts)[number];
const sortColumns = { name: 'name', fibre: 'fibre', width: 'usable_width', updated: 'updated_at' } as const;

/** One page of the studio's cloths; archived ones only when asked for. */
export async function list(
  scope: Scope,
  listing: Listing<ClothSort>,
  which: { readonly archived: boolean } = { archived: false }
): Promise<Page<ListedCloth>> {
  const query = database()('cloths').where({ studio_id: scope.studio }).select(columnsFor(scope));
  if (which.archived) query.whereNotNull('archived_at');
  else query.whereNull('archived_at');
  containing(query, ['name', 'fibre'], listing.search);
  const page = await pageOf<ClothRow, ClothSort>(query, listing, sortColumns, 'id');
  return { ...page, rows: page.rows.map(listedOf) };
}

/** Every cloth that may be chosen for an order, by name: id and name with what tells cloths apart. */
export async function choices(
  scope: Scope
): Promise<{ id: string; name: string; usableWidth: Millimetres }[]> {
  const rows = await database()('cloths')
    .where({ studio_id: scope.studio })
    .whereNull('archived_at')
    .orderBy('name')
    .select<{ id: string; name: string; usable_width: number }[]>('id', 'name', 'usable_width');
  return rows.map(({ id, name, usable_width }) => ({ id, name, usableWidth: usable_width }));
}

/** Throws 404 for what is not this studio's. */
export async function read(scope: Scope, id: string): Promise<Cloth> {
  const row = await database()('cloths')
    .where({ studio_id: scope.studio, id })
    .first<ClothRow | undefined>(columnsFor(scope));
  if (!row) throw notFound('cloth');
  return clothOf(row);
}

/** The orders whose lines take this cloth, and whether lays were made of it. */
export async function uses(
  scope: Scope,
  id: string
): Promise<{ orders: { id: string; number: number; clientName: string; stage: string }[]; lays: number }> {
  const orders = await database()('order_item_cloths')
    .join('order_items', 'order_items.id', 'order_item_cloths.order_item_id')
    .join('orders', 'orders.id', 'order_items.order_id')
    .where({ 'order_item_cloths.studio_id': scope.studio, 'order_item_cloths.cloth_id': id })
    .distinct<{ id: string; number: number; clientName: string; stage: string }[]>({
      id: 'orders.id',
      number: 'orders.number',
      clientName: 'orders.client_name',
      stage: 'orders.stage'
    })
    .orderBy('orders.number', 'desc')
    .limit(50);
  const [lays] = await database()('lays')
    .where({ studio_id: scope.studio, cloth_id: id })
    .count<{ n: number }[]>({ n: 'id' });
  return { orders, lays: Number(lays?.n ?? 0) };
}

function rowOf(scope: Scope, cloth: ClothInput): Record<string, unknown> {
  if (cloth.usableWidth > cloth.fullWidth)
    throw new Problem(
      400,
      'invalid-input',
      'The usable width is larger than the full width',
      `A cloth of ${cloth.fullWidth} mm can't have ${cloth.usableWidth} mm usable.`
    );
  return {
    name: cloth.name,
    fibre: cloth.fibre,
    full_width: cloth.fullWidth,
    usable_width: cloth.usableWidth,
    typed: JSON.stringify(cloth.typed),
    sides_alike: cloth.sidesAlike ? 1 : 0,
    nap: cloth.nap,
    colour: cloth.colour,
    shrink_treatment: cloth.shrinkage?.treatment ?? 'none',
    shrink_warp: cloth.shrinkage?.warp ?? 0,
    shrink_weft: cloth.shrinkage?.weft ?? 0,
    buy_step: cloth.buyStep ?? 100,
    ...(may(scope.role, 'prices: change')
      ? {
          price: cloth.price?.minor ?? null,
          price_unit: cloth.price?.unit ?? 'metre',
          supplier_note: cloth.supplierNote
        }
      : {})
  };
}

/** Adds a cloth and gives its id. */
export async function create(
  scope: Scope,
  cloth: ClothInput,
  { id, now = Date.now(), db = database() }: { id?: string; now?: number; db?: Knex } = {}
): Promise<string> {
  const newOne = id ?? newId(now);
  await db('cloths').insert({
    id: newOne,
    studio_id: scope.studio,
    ...rowOf(scope, cloth),
    created_at: now,
    updated_at: now
  });
  return newOne;
}

/** Changes a cloth. Lays that were made of it keep the widths that they were made with. */
export async function update(
  scope: Scope,
  id: string,
  cloth: ClothInput,
  now: number = Date.now()
): Promise<void> {
  const changed = await database()('cloths')
    .where({ studio_id: scope.studio, id })
    .update({ ...rowOf(scope, cloth), updated_at: now });
  if (changed === 0) throw notFound('cloth');
}

/** Takes a cloth out of the choices (it stays on the orders and lays that have it), or puts it back. */
export async function archive(
  scope: Scope,
  id: string,
  archived: boolean,
  now: number = Date.now()
): Promise<void> {
  const changed = await database()('cloths')
    .where({ studio_id: scope.studio, id })
    .update({ archived_at: archived ? now : null, updated_at: now });
  if (changed === 0) throw notFound('cloth');
  await audit.recordBy(scope, archived ? 'cloth: archived' : 'cloth: put back', id);
}
