import type { BuyTerms } from '$lib/cloth/what-to-buy';
import type { Millimetres, Share } from '$lib/units/measure';
import type { LayPlacement } from './document';

/*
 * The pieces of an order tried on several cloths: on every roll and remnant at hand, or on every width that is sold.
 */

/** What came of one try. Lengths and shares only: what it costs is for who may see prices. */
export interface Tried {
  /** The cloth length, or the width that is sold; 'own' for the width on the cloth's page. */
  readonly id: string;
  readonly needed: number;
  /** Pieces that found no place. */
  readonly leftOver: number;
  readonly lengthUsed: Millimetres;
  readonly efficiency: Share | null;
  readonly leastLength: Millimetres;
  readonly toBuy: BuyTerms;
  /** What it covers of the cloth that was tried, ends and full width included; null on cloth to buy. */
  readonly shareOfLength: Share | null;
  /** Why nothing was tried at all: a piece wider than the cloth. */
  readonly hopeless: string | null;
  readonly placements: readonly LayPlacement[];
}

/** Whether every piece found its place. */
export const fits = (one: Pick<Tried, 'hopeless' | 'leftOver'>): boolean =>
  one.hopeless === null && one.leftOver === 0;

/**
 * The best cloth at hand first: where everything fits, that of which the least is left over; then those on which most pieces
 * found a place.
 */
export function bestLengthFirst(a: Tried, b: Tried): number {
  const rank = (one: Tried): number => (fits(one) ? 0 : one.hopeless === null ? 1 : 2);
  return (
    rank(a) - rank(b) ||
    (fits(a) ? (b.shareOfLength ?? 0) - (a.shareOfLength ?? 0) : a.leftOver - b.leftOver) ||
    a.lengthUsed - b.lengthUsed
  );
}

/** The cheapest of some widths by `cost` (null: unknown); of equal ones the one with the shorter length to buy. */
export function cheapest(tried: readonly Tried[], cost: (one: Tried) => number | null): Tried | null {
  let best: { one: Tried; cost: number } | null = null;
  for (const one of tried) {
    const its = fits(one) ? cost(one) : null;
    if (its === null) continue;
    if (!best || its < best.cost || (its === best.cost && one.toBuy.total < best.one.toBuy.total))
      best = { one, cost: its };
  }
  return best?.one ?? null;
}
