import { z } from 'zod';
import { priceUnits, type PriceUnit } from '$lib/cloth/cost';
import type { LengthUnit } from '$lib/units/length';
import type { Millimetres, Minor } from '$lib/units/measure';
import { typedLength, typedPrice } from './cloth-length-form';
import { database } from './database';
import { newId } from './ids';
import { may } from './permissions';
import { notFound } from './problem';
import type { Scope } from './scope';

/*
 * The widths that a cloth is sold in, with what each costs and in which steps: what the width table compares.
 */

export interface ClothWidth {
  readonly id: string;
  /** Who sells it so; '' where nobody said. */
  readonly seller: string;
  readonly fullWidth: Millimetres;
  readonly usableWidth: Millimetres;
  readonly buyStep: Millimetres;
  /** Absent for who must not see prices; null while unknown. */
  readonly price?: { readonly minor: Minor; readonly unit: PriceUnit } | null;
}

export type WidthInput = Omit<ClothWidth, 'id' | 'price'> & {
  readonly price: { readonly minor: Minor; readonly unit: PriceUnit } | null;
};

interface WidthRow {
  id: string;
  seller: string;
  full_width: number;
  usable_width: number;
  buy_step: number;
  price?: number | null;
  price_unit?: PriceUnit;
}

/** The widths of a cloth, the narrowest first; its own width as it stands on its page is not among them. */
export async function list(scope: Scope, clothId: string): Promise<ClothWidth[]> {
  const rows = await database()('cloth_widths')
    .where({ studio_id: scope.studio, cloth_id: clothId })
    .orderBy(['usable_width', 'id'])
    .select<WidthRow[]>(
      'id',
      'seller',
      'full_width',
      'usable_width',
      'buy_step',
      ...(may(scope.role, 'prices: see') ? ['price', 'price_unit'] : [])
    );
  return rows.map((row) => ({
    id: row.id,
    seller: row.seller,
    fullWidth: row.full_width,
    usableWidth: row.usable_width,
    buyStep: row.buy_step,
    ...(row.price_unit === undefined
      ? {}
      : { price: row.price == null ? null : { minor: row.price, unit: row.price_unit } })
  }));
}

/** 404 for a cloth that is not this studio's. */
export async function create(
  scope: Scope,
  clothId: string,
  width: WidthInput,
  { id = newId() }: { id?: string } = {}
): Promise<string> {
  const cloth = await database()('cloths').where({ studio_id: scope.studio, id: clothId }).first('id');
  if (!cloth) throw notFound('cloth');
  await database()('cloth_widths').insert({
    id,
    studio_id: scope.studio,
    cloth_id: clothId,
    seller: width.seller,
    full_width: width.fullWidth,
    usable_width: width.usableWidth,
    buy_step: width.buyStep,
    price: width.price?.minor ?? null,
    price_unit: width.price?.unit ?? 'metre'
  });
  return id;
}

export async function remove(scope: Scope, clothId: string, id: string): Promise<void> {
  const removed = await database()('cloth_widths')
    .where({ studio_id: scope.studio, cloth_id: clothId, id })
    .delete();
  if (removed === 0) throw notFound('width');
}

export function widthForm({ lengthUnit, currency }: { lengthUnit: LengthUnit; currency: string }) {
  const width = (words: string) => typedLength(lengthUnit, words, { least: 20, most: 10_000 });
  return z
    .object({
      seller: z.string().trim().max(120, 'At most 120 characters, please.').default(''),
      fullWidth: width('How wide is it from selvedge to selvedge?'),
      usableWidth: width('How much of the width can be cut from?'),
      buyStep: typedLength(lengthUnit, 'In which steps is it sold?', { least: 1, most: 10_000 }),
      price: typedPrice(currency),
      priceUnit: z.enum(priceUnits).default('metre')
    })
    .transform((form, context): WidthInput => {
      if (form.usableWidth.mm > form.fullWidth.mm)
        context.addIssue({
          code: 'custom',
          path: ['usableWidth'],
          message: 'The usable width can’t be more than the full width.'
        });
      return {
        seller: form.seller,
        fullWidth: form.fullWidth.mm,
        usableWidth: form.usableWidth.mm,
        buyStep: form.buyStep.mm,
        price: form.price === null ? null : { minor: form.price, unit: form.priceUnit }
      };
    });
}
