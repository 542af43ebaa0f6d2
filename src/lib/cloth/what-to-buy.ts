import { z } from 'zod';
import type { Millimetres, Share, SquareMillimetres } from '$lib/units/measure';
import { roundUpTo } from './cost';
import { asBought, type Shrinkage } from './shrinkage';

/*
 * From the length that a lay takes to the length that is bought, every term by itself.
 */

/** Where the cloth is cut and lapped to leave a flaw out: how often, and how much each lap takes. */
export const splicesSchema = z.object({
  count: z.int().min(0).max(100),
  each: z.number().finite().min(0).max(2000)
});
export type Splices = z.infer<typeof splicesSchema>;
export const noSplices: Splices = { count: 0, each: 0 };

export interface BuyQuestion {
  /** Greatest x of the placed pieces: ends excluded. */
  readonly lengthUsed: Millimetres;
  /** Plies that are spread one on the other, each as long as the lay with its ends; 1 where it is left out. */
  readonly lengths?: number;
  readonly endAllowance: { readonly start: Millimetres; readonly end: Millimetres };
  readonly splices: Splices;
  readonly reserve: Millimetres;
  readonly shrinkage: Shrinkage;
  /** The repeat along the warp of the cloth as it lies, when whole repeats are to be bought; else null. */
  readonly wholeRepeats: Millimetres | null;
  /** What the supplier sells in whole multiples of: 100 mm, ⅛ yd … */
  readonly step: Millimetres;
}

/** The terms of a length to buy; each is what it adds, in this order, and `total` is their sum. */
export interface BuyTerms {
  readonly lengthUsed: Millimetres;
  readonly start: Millimetres;
  readonly end: Millimetres;
  /** Length and ends of every ply beside the first. */
  readonly furtherPlies: Millimetres;
  readonly splices: Millimetres;
  readonly reserve: Millimetres;
  /** What shrinking the cloth before it is laid takes. */
  readonly shrinkage: Millimetres;
  /** What is added up to a whole number of repeats. */
  readonly repeats: Millimetres;
  readonly roundedUpTo: Millimetres;
  readonly total: Millimetres;
}

/** The length to buy, with its terms. */
export function whatToBuy(question: BuyQuestion): BuyTerms {
  const { lengthUsed, endAllowance, reserve, shrinkage, wholeRepeats, step } = question;
  const splices = question.splices.count * question.splices.each;
  const ply = lengthUsed + endAllowance.start + endAllowance.end;
  const furtherPlies = ply * ((question.lengths ?? 1) - 1);
  const laid = ply + furtherPlies + splices + reserve;
  const bought = asBought(shrinkage, laid);
  const repeats = wholeRepeats === null ? 0 : wholeRepeatsOf(bought, asBought(shrinkage, wholeRepeats));
  const whole = Math.max(bought, repeats);
  return {
    lengthUsed,
    start: endAllowance.start,
    end: endAllowance.end,
    furtherPlies,
    splices,
    reserve,
    shrinkage: bought - laid,
    repeats: whole - bought,
    roundedUpTo: step,
    total: roundUpTo(whole, step)
  };
}

/** The least whole number of repeats that `length` fits in: ceil(length ÷ repeat) × repeat (published rule). */
export function wholeRepeatsOf(length: Millimetres, repeat: Millimetres): Millimetres {
  // Digits that a division left over don't ask for another repeat.
  return Math.ceil(length / repeat - 1e-9) * repeat;
}

/**
 * Cloth for matching, in an estimate only: one repeat for each matched piece that lies behind another along the warp (published
 * buying rule: 2 × 4¼ in = 8½ in). In a lay the matching is in the length already.
 */
export function matchingExtra(repeat: Millimetres, matchedPieces: number): Millimetres {
  return repeat * matchedPieces;
}

/**
 * The length that pieces of `area` are likely to take on cloth of `width` (usable, counted once a layer) when lays of the kind
 * reach `efficiency`: area ÷ (width × efficiency), plus the matching extra. An estimate, never a promise.
 */
export function estimatedLength(estimate: {
  readonly area: SquareMillimetres;
  readonly width: Millimetres;
  readonly efficiency: Share;
  readonly matchingExtra: Millimetres;
}): Millimetres {
  if (!(estimate.width > 0 && estimate.efficiency > 0))
    throw new RangeError('An estimate needs a width and an efficiency above nothing');
  return estimate.area / (estimate.width * estimate.efficiency) + estimate.matchingExtra;
}
