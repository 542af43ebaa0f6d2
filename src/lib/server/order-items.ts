import type { Knex } from 'knex';
import { z } from 'zod';
import { clothRoles, type ClothRole } from '$lib/pattern/panel';
import { database } from './database';
import { newId } from './ids';
import { invalid } from './problem';
import type { Scope } from './scope';

/*
 * The lines of an order: a style version, for whom or in which size, how many, and a cloth for each role that its
 * panels have. `orders.ts` is the way in; it counts the order's version.
 */

export interface OrderItemInput {
  readonly styleVersionId: string;
  /** Size or wearer: '38', 'Edda'. */
  readonly label: string;
  readonly quantity: number;
  /** Cloth ids by role; roles without a cloth yet are absent. */
  readonly cloths: Partial<Record<ClothRole, string>>;
}

export interface OrderItem {
  readonly id: string;
  readonly label: string;
  readonly quantity: number;
  readonly style: {
    readonly id: string;
    readonly name: string;
    readonly versionId: string;
    readonly number: number;
    /** Every version of the style, the newest first. */
    readonly versions: readonly { readonly id: string; readonly number: number }[];
  };
  /** What its panels are cut from, in the order of `clothRoles`; cloth null while none is chosen. */
  readonly roles: readonly {
    readonly role: ClothRole;
    readonly cloth: { readonly id: string; readonly name: string } | null;
  }[];
}

interface ItemRow {
  id: string;
  label: string;
  quantity: number;
  style_version_id: string;
  number: number;
  style_id: string;
  style_name: string;
}

const rolesOfPanels = z.object({ panels: z.array(z.object({ role: z.enum(clothRoles) })) });

/** The cloth roles that the panels of some style versions have, by version. */
async function rolesOf(scope: Scope, versionIds: readonly string[]): Promise<Map<string, ClothRole[]>> {
  const rows = await database()('style_versions')
    .where({ studio_id: scope.studio })
    .whereIn('id', versionIds)
    .select<{ id: string; panels: string }[]>('id', 'panels');
  return new Map(
    rows.map(({ id, panels }) => {
      const found = new Set(rolesOfPanels.parse(JSON.parse(panels)).panels.map((panel) => panel.role));
      return [id, clothRoles.filter((role) => found.has(role))];
    })
  );
}

/** The lines of an order in their order. */
export async function list(scope: Scope, orderId: string): Promise<OrderItem[]> {
  const rows = await database()('order_items')
    .join('style_versions', 'style_versions.id', 'order_items.style_version_id')
    .join('styles', 'styles.id', 'style_versions.style_id')
    .where({ 'order_items.studio_id': scope.studio, order_id: orderId })
    .orderBy('position')
    .select<ItemRow[]>(
      { id: 'order_items.id', style_id: 'styles.id', style_name: 'styles.name' },
      'label',
      'quantity',
      'style_version_id',
      'number'
    );
  if (rows.length === 0) return [];
  const roles = await rolesOf(
    scope,
    rows.map((row) => row.style_version_id)
  );
  const cloths = await database()('order_item_cloths')
    .join('cloths', 'cloths.id', 'order_item_cloths.cloth_id')
    .where({ 'order_item_cloths.studio_id': scope.studio })
    .whereIn(
      'order_item_id',
      rows.map((row) => row.id)
    )
    .select<{ item: string; role: ClothRole; id: string; name: string }[]>({
      item: 'order_item_id',
      role: 'role',
      id: 'cloths.id',
      name: 'cloths.name'
    });
  const versions = await database()('style_versions')
    .where({ studio_id: scope.studio })
    .whereIn(
      'style_id',
      rows.map((row) => row.style_id)
    )
    .orderBy('number', 'desc')
    .select<{ id: string; number: number; style_id: string }[]>('id', 'number', 'style_id');
  return rows.map((row) => ({
    id: row.id,
    label: row.label,
    quantity: row.quantity,
    style: {
      id: row.style_id,
      name: row.style_name,
      versionId: row.style_version_id,
      number: row.number,
      versions: versions
        .filter((version) => version.style_id === row.style_id)
        .map(({ id, number }) => ({ id, number }))
    },
    roles: (roles.get(row.style_version_id) ?? []).map((role) => {
      const cloth = cloths.find((one) => one.item === row.id && one.role === role);
      return { role, cloth: cloth ? { id: cloth.id, name: cloth.name } : null };
    })
  }));
}

/** Throws a refusal per field when the style version or a cloth is not this studio's. */
export async function refuseForeign(scope: Scope, item: OrderItemInput): Promise<void> {
  const version = await database()('style_versions')
    .where({ studio_id: scope.studio, id: item.styleVersionId })
    .first('id');
  if (!version) throw invalid({ style: 'There is no such style in this studio.' });
  for (const [role, id] of Object.entries(item.cloths)) {
    const cloth = await database()('cloths').where({ studio_id: scope.studio, id }).first('id');
    if (!cloth) throw invalid({ [`cloth.${role}`]: 'There is no such cloth in this studio.' });
  }
}

/** Adds a line at the end, within a transaction of `orders`. */
export async function insert(
  trx: Knex,
  scope: Scope,
  orderId: string,
  item: OrderItemInput,
  id: string
): Promise<void> {
  const [last] = await trx('order_items')
    .where({ studio_id: scope.studio, order_id: orderId })
    .max<{ position: number | null }[]>({ position: 'position' });
  await trx('order_items').insert({
    id,
    studio_id: scope.studio,
    order_id: orderId,
    position: Number(last?.position ?? 0) + 1,
    style_version_id: item.styleVersionId,
    label: item.label,
    quantity: item.quantity
  });
  await insertCloths(trx, scope, id, item.cloths);
}

/** Changes a line, within a transaction of `orders`. False when the order has no such line. */
export async function change(
  trx: Knex,
  scope: Scope,
  orderId: string,
  id: string,
  item: OrderItemInput
): Promise<boolean> {
  const changed = await trx('order_items')
    .where({ studio_id: scope.studio, order_id: orderId, id })
    .update({ style_version_id: item.styleVersionId, label: item.label, quantity: item.quantity });
  if (changed === 0) return false;
  await trx('order_item_cloths').where({ studio_id: scope.studio, order_item_id: id }).delete();
  await insertCloths(trx, scope, id, item.cloths);
  return true;
}

async function insertCloths(
  trx: Knex,
  scope: Scope,
  itemId: string,
  cloths: OrderItemInput['cloths']
): Promise<void> {
  const rows = Object.entries(cloths).map(([role, clothId]) => ({
    id: newId(),
    studio_id: scope.studio,
    order_item_id: itemId,
    role,
    cloth_id: clothId
  }));
  if (rows.length > 0) await trx('order_item_cloths').insert(rows);
}
