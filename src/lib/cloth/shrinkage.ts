import { z } from 'zod';
import type { Millimetres, Share } from '$lib/units/measure';

/*
 * Cloth shrinks along the warp and across the weft by shares of its own: S = (before − after) ÷ before, measured on a
 * marked square of at least 18 in (about 50 cm) kept 2 in from the selvedge (published rule). What is to measure m after
 * shrinking is cut m ÷ (1 − S), which is more than m × (1 + S): 100 at 5 % is 105.26, not 105. A cloth gets one treatment, never two.
 */

export const treatments = ['none', 'enlarged', 'shrunkFirst', 'boughtShrunk'] as const;

/**
 * none: it does not shrink, or nobody minds · enlarged: panels are cut larger, the garment shrinks later ·
 * shrunkFirst: the cloth is shrunk in the workroom before it is laid · boughtShrunk: it comes shrunk.
 */
export type Treatment = (typeof treatments)[number];

/** No cloth that is cut shrinks by more. */
export const MOST_SHRINKAGE: Share = 0.3;

const share = z.number().finite().min(0).max(MOST_SHRINKAGE);
export const shrinkageSchema = z.object({ treatment: z.enum(treatments), warp: share, weft: share });
export type Shrinkage = z.infer<typeof shrinkageSchema>;

export const noShrinkage: Shrinkage = { treatment: 'none', warp: 0, weft: 0 };

/** What has to be there before shrinking for `length` to be left: length ÷ (1 − share). */
export function beforeShrinking(length: Millimetres, share: Share): Millimetres {
  return length / (1 - share);
}

/** What is left of `length`: length × (1 − share). */
export function afterShrinking(length: Millimetres, share: Share): Millimetres {
  return length * (1 - share);
}

/** By how much panels are enlarged along the cloth's warp and weft, once they are turned: 1 unless that is the treatment. */
export function enlargement({ treatment, warp, weft }: Shrinkage): {
  readonly warp: number;
  readonly weft: number;
} {
  return treatment === 'enlarged'
    ? { warp: beforeShrinking(1, warp), weft: beforeShrinking(1, weft) }
    : { warp: 1, weft: 1 };
}

/** Whether panels are enlarged more along one of warp and weft than along the other. */
export function enlargesUnequally(shrinkage: Shrinkage): boolean {
  const { warp, weft } = enlargement(shrinkage);
  return warp !== weft;
}

/** What a cloth measured before it was shrunk in the workroom measures when it is laid; any other cloth stays as it is. */
export function asLaid(
  { treatment, warp, weft }: Shrinkage,
  measured: { readonly along: Millimetres; readonly across: Millimetres }
): { readonly along: Millimetres; readonly across: Millimetres } {
  if (treatment !== 'shrunkFirst') return measured;
  return { along: afterShrinking(measured.along, warp), across: afterShrinking(measured.across, weft) };
}

/** What has to be bought for `length` to be laid: more only where the cloth is shrunk in the workroom. */
export function asBought({ treatment, warp }: Shrinkage, length: Millimetres): Millimetres {
  return treatment === 'shrunkFirst' ? beforeShrinking(length, warp) : length;
}
