import { clothCost, type PriceUnit } from '$lib/cloth/cost';
import { readingsOf } from '$lib/lay/readings';
import type { Millimetres, Minor, Share } from '$lib/units/measure';
import { buildPrice, type PriceBuild } from '$lib/units/price';
import type { BasisPoints, TaxMode } from '$lib/units/share';
import { database } from './database';
import * as jointLays from './joint-lays';
import * as lays from './lays';
import { moneyDefaults, type MoneyDefaults } from './money-defaults';
import * as orders from './orders';
import { emptySheet, openSheet, type PriceSheet } from './price-sheet';
import { Problem } from './problem';
import type { Scope } from './scope';
import * as studios from './studios';

/*
 * The price of an order: its facts (cloth from the chosen lays, the studio's rates) under what a person wrote about it.
 */

/** A cloth of the order with what its chosen lays need of it. */
export interface PricedCloth {
  readonly id: string;
  readonly name: string;
  readonly usableWidth: Millimetres;
  /** The chosen lays of this cloth; empty while none is chosen. */
  readonly lays: readonly {
    readonly id: string;
    readonly name: string;
    readonly loose: number;
    /** The order's part of it; null in a lay of its own. */
    readonly joint: { readonly share: Share; readonly cost: Minor | null } | null;
    /** To buy for this order. */
    readonly length: Millimetres;
  }[];
  /** Length to buy for them, of a joint lay the order's share; null while there is none. */
  readonly length: Millimetres | null;
  readonly price: { readonly minor: Minor; readonly unit: PriceUnit } | null;
  /** Whether the client brings it. */
  readonly own: boolean;
}

/** What stands for the fields that a person left open. */
export interface PriceTerms {
  readonly minutes: number;
  readonly rate: Minor;
  readonly overhead: BasisPoints;
  readonly margin: BasisPoints;
  readonly tax: { readonly mode: TaxMode; readonly rate: BasisPoints };
  readonly deposit: { readonly share: BasisPoints } | { readonly amount: Minor };
  readonly roundTo: Minor;
}

export interface OrderPrice {
  readonly order: orders.Order;
  readonly currency: string;
  readonly defaults: MoneyDefaults;
  /** 0 while nobody has written anything. */
  readonly version: number;
  readonly sheet: PriceSheet;
  readonly cloths: readonly PricedCloth[];
  readonly terms: PriceTerms;
  readonly build: PriceBuild;
}

/** The price of an order as it stands now. 404 for an order that is not this studio's. */
export async function read(scope: Scope, orderId: string): Promise<OrderPrice> {
  const order = await orders.read(scope, orderId);
  const { currency } = await studios.read(scope);
  const defaults = await moneyDefaults(scope);
  const stored = await database()('price_sheets')
    .where({ studio_id: scope.studio, order_id: orderId })
    .first<{ version: number; document: string } | undefined>('version', 'document');
  const sheet = stored ? openSheet(JSON.parse(stored.document)) : emptySheet;
  const cloths = await clothsOf(scope, order, sheet);
  const terms: PriceTerms = {
    minutes: sheet.minutes ?? 0,
    rate: sheet.rate ?? defaults.hourly,
    overhead: sheet.overheadShare ?? defaults.overhead,
    margin: sheet.marginShare ?? defaults.margin,
    tax: { mode: sheet.taxMode ?? defaults.tax.mode, rate: sheet.taxRate ?? defaults.tax.rate },
    deposit:
      sheet.depositAmount !== null
        ? { amount: sheet.depositAmount }
        : { share: sheet.depositShare ?? defaults.depositShare },
    roundTo: defaults.roundTo
  };
  const build = buildPrice({
    cloths: cloths.map((cloth) => ({
      computed: costOf(cloth),
      byHand: sheet.cloths[cloth.id]?.byHand ?? null
    })),
    trims: sheet.trims,
    extras: sheet.extras,
    work: { minutes: terms.minutes, rate: terms.rate, byHand: sheet.workByHand },
    overhead: { share: terms.overhead, byHand: sheet.overheadByHand },
    margin: { share: terms.margin, byHand: sheet.marginByHand },
    priceByHand: sheet.priceByHand,
    roundTo: terms.roundTo,
    tax: terms.tax,
    deposit: terms.deposit
  });
  return { order, currency, defaults, version: stored?.version ?? 0, sheet, cloths, terms, build };
}

function costOf({ own, lays, price }: PricedCloth): Minor | null {
  if (own) return 0;
  if (price === null || lays.length === 0) return null;
  const alone = lays.filter(({ joint }) => joint === null).reduce((sum, { length }) => sum + length, 0);
  // The parts of a joint lay add up to its cost over all its orders.
  return lays.reduce((sum, { joint }) => sum + (joint?.cost ?? 0), clothCost(alone, price.minor, price.unit));
}

async function clothsOf(scope: Scope, order: orders.Order, sheet: PriceSheet): Promise<PricedCloth[]> {
  const prices = await database()('cloths')
    .where({ studio_id: scope.studio })
    .whereIn(
      'id',
      order.cloths.map(({ id }) => id)
    )
    .select<{ id: string; price: number | null; price_unit: PriceUnit }[]>('id', 'price', 'price_unit');
  const chosen = await database()('lays')
    .where({ studio_id: scope.studio, chosen: 1 })
    .where((either) =>
      either
        .where({ order_id: order.id })
        .orWhereIn(
          'id',
          database()('lay_orders').where({ studio_id: scope.studio, order_id: order.id }).select('lay_id')
        )
    )
    .orderBy('created_at')
    .select<{ id: string; cloth_id: string }[]>('id', 'cloth_id');
  const found: PricedCloth[] = [];
  for (const cloth of order.cloths) {
    const needs = await Promise.all(
      chosen.filter(({ cloth_id }) => cloth_id === cloth.id).map(({ id }) => needOf(scope, id, order.id))
    );
    const price = prices.find(({ id }) => id === cloth.id);
    found.push({
      id: cloth.id,
      name: cloth.name,
      usableWidth: cloth.usableWidth,
      lays: needs,
      length: needs.length > 0 ? needs.reduce((sum, { length }) => sum + length, 0) : null,
      price: price?.price != null ? { minor: price.price, unit: price.price_unit } : null,
      own: sheet.cloths[cloth.id]?.own ?? false
    });
  }
  return found;
}

/** What a lay takes of its cloth for an order: as the server last found it, computed anew if the lay changed since. */
async function needOf(scope: Scope, layId: string, orderId: string): Promise<PricedCloth['lays'][number]> {
  const lay = await lays.read(scope, layId);
  const readings =
    lay.verdict && lay.verdictVersion === lay.version
      ? lay.verdict.readings
      : readingsOf(lay.document, lay.panels);
  const part =
    lay.orders.length > 1
      ? (await jointLays.sharesOf(scope, lay)).find(({ order }) => order.id === orderId)
      : undefined;
  return {
    id: lay.id,
    name: lay.name,
    loose: readings.pieces.loose,
    joint: part ? { share: part.share, cost: part.cost ?? null } : null,
    length: part?.length ?? readings.clothToBuy.total
  };
}

/** Stores what a person wrote. Refuses (409 price-out-of-date) when somebody else did since they looked. */
export async function save(
  scope: Scope,
  orderId: string,
  version: number,
  sheet: PriceSheet,
  now = Date.now()
): Promise<void> {
  await orders.read(scope, orderId);
  const row = { document: JSON.stringify(sheet), updated_at: now };
  const own = { studio_id: scope.studio, order_id: orderId };
  const done =
    version === 0
      ? await database()('price_sheets')
          .insert({ ...own, ...row, version: 1 })
          .onConflict(['studio_id', 'order_id'])
          .ignore()
          .returning('order_id')
          .then((rows: unknown[]) => rows.length)
      : await database()('price_sheets')
          .where({ ...own, version })
          .update({ ...row, version: version + 1 });
  if (done === 0)
    throw new Problem(
      409,
      'price-out-of-date',
      'Somebody changed this price since you opened it',
      'Your typing is kept. Look at what it says now, then save again.'
    );
}
