import { onMeasuredLength, withWidth } from '$lib/cloth/given-strip';
import { asLaid, type Shrinkage, type Treatment } from '$lib/cloth/shrinkage';
import { noSplices } from '$lib/cloth/what-to-buy';
import { openSpread, type Strip } from '$lib/cloth/strip';
import { snap } from '$lib/geometry/point';
import type { Garment, LayDocument } from '$lib/lay/document';
import { enlargedPanel } from '$lib/lay/enlarged';
import { needsOf } from '$lib/lay/needs';
import { layPanelOf, panelKey, type LayPanel, type PanelBook } from '$lib/lay/panel-book';
import { same } from '$lib/lay/same';
import type { ClothRole } from '$lib/pattern/panel';
import { openPanelSet } from '$lib/pattern/panel-set';
import type { PriceUnit } from '$lib/cloth/cost';
import type { Minor } from '$lib/units/measure';
import type { ClothLength } from './cloth-lengths';
import { database } from './database';
import { measured } from './lay-lengths';
import { may } from './permissions';
import { notFound } from './problem';
import type { Scope } from './scope';

/*
 * What the server itself knows of a lay, whatever a posted document says: the garments that the order asks of this cloth,
 * the outlines of their panels, and the facts of the cloth. All of it is read within the scope.
 */

export interface LayFacts {
  /** The order that the lay was made from: the first of a joint lay. */
  readonly order: { readonly id: string; readonly number: number; readonly clientName: string };
  /** Every order that the lay serves, the first first. */
  readonly orders: readonly { readonly id: string; readonly number: number }[];
  readonly cloth: ClothFacts;
  /** The roll or remnant that the lay is made on; null: cloth that is still to be bought. */
  readonly length: ClothLength | null;
  readonly garments: readonly Garment[];
  /** Every panel that a garment of this lay takes from this cloth. */
  readonly book: PanelBook;
  /** Whether a garment takes a panel from this cloth. */
  readonly takes: (garment: Garment, panel: LayPanel) => boolean;
}

export interface ClothFacts {
  readonly id: string;
  readonly name: string;
  readonly fibre: string;
  readonly colour: string;
  readonly pictureFile: string | null;
  readonly fullWidth: number;
  readonly usableWidth: number;
  readonly nap: Strip['nap'];
  readonly sidesAlike: boolean;
  readonly shrinkage: Shrinkage;
  readonly buyStep: number;
  readonly currency: string;
  /** Absent for who must not see prices, and while there is none. On a roll or remnant its own price. */
  readonly price?: { readonly minor: Minor; readonly unit: PriceUnit; readonly currency: string };
}

/**
 * The facts of a lay on a cloth for an order, or for several in a joint lay, on a roll or remnant or on cloth to buy. 404 for
 * an order or a cloth that is not of this studio.
 */
export async function read(
  scope: Scope,
  orderIds: readonly [string, ...string[]],
  clothId: string,
  length: ClothLength | null = null
): Promise<LayFacts> {
  const orders = [];
  for (const id of orderIds) orders.push(await orderFacts(scope, id));
  const [order] = orders as [(typeof orders)[number]];
  const cloth = await clothFacts(scope, clothId);
  const items: Item[] = [];
  for (const { id, number } of orders)
    for (const item of await itemsOn(scope, id, clothId))
      items.push(orders.length > 1 ? { ...item, of: number } : item);
  const panels = new Map<string, readonly LayPanel[]>();
  for (const { styleVersion } of items)
    if (!panels.has(styleVersion)) panels.set(styleVersion, await panelsOf(scope, styleVersion));

  const rolesOfItem = new Map(items.map((item) => [item.id, item.roles]));
  const takes = (garment: Garment, panel: LayPanel): boolean =>
    rolesOfItem.get(garment.orderItem)?.has(panel.role) ?? false;
  const book: Record<string, LayPanel> = {};
  for (const item of items)
    for (const panel of panels.get(item.styleVersion) ?? [])
      if (item.roles.has(panel.role))
        book[panelKey(item.styleVersion, panel.shape.panel)] = enlargedPanel(panel, cloth.shrinkage);
  return {
    order,
    orders: orders.map(({ id, number }) => ({ id, number })),
    cloth: length ? { ...cloth, ...priceOf(length, cloth) } : cloth,
    length,
    garments: items.flatMap(garmentsOf),
    book,
    takes
  };
}

async function orderFacts(
  scope: Scope,
  id: string
): Promise<{ id: string; number: number; clientName: string }> {
  const order = await database()('orders')
    .where({ studio_id: scope.studio, id })
    .first<{ id: string; number: number; client_name: string } | undefined>('id', 'number', 'client_name');
  if (!order) throw notFound('order');
  return { id: order.id, number: order.number, clientName: order.client_name };
}

/** What a roll or remnant costs, where it has a price of its own and the person may see prices. */
function priceOf(length: ClothLength, cloth: ClothFacts): Pick<ClothFacts, 'price'> {
  return length.price ? { price: { ...length.price, currency: cloth.currency } } : {};
}

interface Item {
  readonly id: string;
  readonly label: string;
  readonly quantity: number;
  readonly styleVersion: string;
  readonly styleName: string;
  /** The cloth roles for which this line takes the cloth of the lay. */
  readonly roles: Set<ClothRole>;
  /** The number of its order, in a joint lay. */
  readonly of?: number;
}

/** The order's lines that take something from this cloth. */
async function itemsOn(scope: Scope, orderId: string, clothId: string): Promise<Item[]> {
  const rows = await database()('order_items')
    .join('order_item_cloths', 'order_item_cloths.order_item_id', 'order_items.id')
    .join('style_versions', 'style_versions.id', 'order_items.style_version_id')
    .join('styles', 'styles.id', 'style_versions.style_id')
    .where({
      'order_items.studio_id': scope.studio,
      'order_items.order_id': orderId,
      'order_item_cloths.studio_id': scope.studio,
      'order_item_cloths.cloth_id': clothId
    })
    .orderBy(['order_items.position', 'order_items.id'])
    .select<
      {
        id: string;
        label: string;
        quantity: number;
        style_version: string;
        style_name: string;
        role: ClothRole;
      }[]
    >({
      id: 'order_items.id',
      label: 'order_items.label',
      quantity: 'order_items.quantity',
      style_version: 'order_items.style_version_id',
      style_name: 'styles.name',
      role: 'order_item_cloths.role'
    });
  const items = new Map<string, Item>();
  for (const row of rows) {
    const known = items.get(row.id);
    if (known) known.roles.add(row.role);
    else
      items.set(row.id, {
        id: row.id,
        label: row.label,
        quantity: row.quantity,
        styleVersion: row.style_version,
        styleName: row.style_name,
        roles: new Set([row.role])
      });
  }
  return [...items.values()];
}

/** One garment a copy of the line. Its id stays the same while the line does. */
function garmentsOf(item: Item): Garment[] {
  const name = [item.of ? `No. ${item.of}` : '', item.styleName, item.label]
    .filter((part) => part !== '')
    .join(' ');
  return Array.from({ length: item.quantity }, (_, i) => ({
    id: `${item.id}:${i + 1}`,
    orderItem: item.id,
    styleVersion: item.styleVersion,
    label: (item.quantity === 1 ? name : `${name} · ${i + 1}`).slice(0, 120)
  }));
}

/** Style versions never change, so what they resolve to is kept: the latest few. */
const resolved = new Map<string, readonly LayPanel[]>();
const MOST_RESOLVED = 50;

async function panelsOf(scope: Scope, styleVersion: string): Promise<readonly LayPanel[]> {
  const key = `${scope.studio}/${styleVersion}`;
  const known = resolved.get(key);
  if (known) return known;
  const row = await database()('style_versions')
    .where({ studio_id: scope.studio, id: styleVersion })
    .first<{ panels: string } | undefined>('panels');
  if (!row) throw notFound('style version');
  const panels = openPanelSet(JSON.parse(row.panels)).panels.map(layPanelOf);
  resolved.set(key, panels);
  if (resolved.size > MOST_RESOLVED) resolved.delete(resolved.keys().next().value!);
  return panels;
}

const clothColumns = {
  id: 'cloths.id',
  name: 'cloths.name',
  fibre: 'cloths.fibre',
  colour: 'cloths.colour',
  picture_file_id: 'cloths.picture_file_id',
  full_width: 'cloths.full_width',
  usable_width: 'cloths.usable_width',
  nap: 'cloths.nap',
  sides_alike: 'cloths.sides_alike',
  shrink_treatment: 'cloths.shrink_treatment',
  shrink_warp: 'cloths.shrink_warp',
  shrink_weft: 'cloths.shrink_weft',
  buy_step: 'cloths.buy_step',
  currency: 'studios.currency'
};

async function clothFacts(scope: Scope, clothId: string): Promise<ClothFacts> {
  const seesPrices = may(scope.role, 'prices: see');
  const row = await database()('cloths')
    .join('studios', 'studios.id', 'cloths.studio_id')
    .where({ 'cloths.studio_id': scope.studio, 'cloths.id': clothId })
    .first<
      | {
          id: string;
          name: string;
          fibre: string;
          colour: string;
          picture_file_id: string | null;
          full_width: number;
          usable_width: number;
          nap: Strip['nap'];
          sides_alike: number;
          shrink_treatment: Treatment;
          shrink_warp: number;
          shrink_weft: number;
          buy_step: number;
          currency: string;
          price?: number | null;
          price_unit?: PriceUnit;
        }
      | undefined
    >(
      seesPrices
        ? {
            ...clothColumns,
            price: 'cloths.price',
            price_unit: 'cloths.price_unit'
          }
        : clothColumns
    );
  if (!row) throw notFound('cloth');
  return {
    id: row.id,
    name: row.name,
    fibre: row.fibre,
    colour: row.colour,
    pictureFile: row.picture_file_id,
    fullWidth: row.full_width,
    usableWidth: row.usable_width,
    nap: row.nap,
    sidesAlike: row.sides_alike === 1,
    shrinkage: { treatment: row.shrink_treatment, warp: row.shrink_warp, weft: row.shrink_weft },
    buyStep: row.buy_step,
    currency: row.currency,
    ...(row.price != null && row.price_unit
      ? { price: { minor: row.price, unit: row.price_unit, currency: row.currency } }
      : {})
  };
}

/** The strip that a new lay begins with: open cloth, right side up, shears; shrunk where that is done first. */
export function stripOf(
  cloth: Pick<ClothFacts, 'fullWidth' | 'usableWidth' | 'nap' | 'sidesAlike' | 'shrinkage' | 'buyStep'>
): Strip {
  const usableWidth = laidWidth(cloth.shrinkage, cloth.usableWidth);
  return {
    spread: openSpread(usableWidth),
    usableWidth,
    fullWidth: laidWidth(cloth.shrinkage, cloth.fullWidth),
    length: null,
    nap: cloth.nap,
    sidesAlike: cloth.sidesAlike,
    repeat: { along: null, across: null },
    flaws: [],
    given: null,
    shrinkage: cloth.shrinkage,
    splices: noSplices,
    wholeRepeats: false,
    endAllowance: { start: 20, end: 20 },
    reserve: 0,
    buyStep: cloth.buyStep,
    clearance: 3
  };
}

/** A width of the cloth as it lies, once it was shrunk where that is done first. */
function laidWidth(shrinkage: Shrinkage, width: number): number {
  return snap(asLaid(shrinkage, { along: 0, across: width }).across);
}

/**
 * `document` with what the server owns as it stands now: garments, needs, and the facts of the cloth that nobody changes
 * on the table. On a roll or remnant these are its length, width, edge and flaws as well; else the usable width stays as
 * measured on the table, within the full width. Gives `document` itself when nothing differs.
 */
export function withFacts(document: LayDocument, facts: LayFacts): LayDocument {
  const strip = stripWith(document.strip, facts);
  const garments = [...facts.garments];
  const current = {
    ...document,
    strip,
    garments,
    needs: needsOf(garments, facts.book, strip, facts.takes)
  };
  return same(current, document) ? document : current;
}

/** A strip with what cloth and length say. */
export function stripWith(before: Strip, { cloth, length }: Pick<LayFacts, 'cloth' | 'length'>): Strip {
  const { nap, sidesAlike, shrinkage, buyStep } = cloth;
  const strip: Strip = { ...before, nap, sidesAlike, shrinkage, buyStep };
  if (length) return onMeasuredLength(strip, measured(length, cloth));
  const fullWidth = laidWidth(shrinkage, cloth.fullWidth);
  // Nothing measured on the table holds for other cloth, or for cloth that is treated otherwise.
  const anew = before.given !== null || !same(before.shrinkage, shrinkage);
  const usableWidth = anew
    ? laidWidth(shrinkage, cloth.usableWidth)
    : Math.min(before.usableWidth, fullWidth);
  return {
    ...strip,
    fullWidth,
    usableWidth,
    spread: withWidth(before, { usableWidth, fullWidth }),
    ...(before.given === null ? {} : { given: null, length: null, flaws: [] })
  };
}
