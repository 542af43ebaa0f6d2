import { MM_PER } from '$lib/units/length';
import type { Millimetres, Minor } from '$lib/units/measure';

/** What cloth is sold by. A price keeps the unit that it was typed in. */
export const priceUnits = ['metre', 'yard'] as const;
export type PriceUnit = (typeof priceUnits)[number];

/** Length of one sold unit in millimetres. */
export function unitLength(per: PriceUnit): Millimetres {
  return per === 'metre' ? MM_PER.m : MM_PER.yd;
}

/** `length` in whole thousandths of a millimetre, the grid of the product, so that no sum below is inexact. */
function micrometres(length: Millimetres): bigint {
  if (!Number.isFinite(length) || length < 0) throw new RangeError(`Not a length of cloth: ${length} mm`);
  return BigInt(Math.round(length * 1000));
}

/**
 * What `length` of a cloth costs at `price` minor units per metre or yard, in minor units: exact, then rounded once,
 * half up. Throws when the length is negative or the price is no whole number.
 */
export function clothCost(length: Millimetres, price: Minor, per: PriceUnit): Minor {
  if (!Number.isSafeInteger(price))
    throw new RangeError(`Money is a whole number of minor units, got ${price}`);
  const unit = micrometres(unitLength(per));
  const twice = 2n * micrometres(length) * BigInt(price) + unit;
  const whole = twice / (2n * unit);
  // BigInt division cuts towards zero; half up needs the floor.
  return Number(twice < 0n && twice % (2n * unit) !== 0n ? whole - 1n : whole);
}

/** The same price per the other unit, rounded half up to the minor unit: for comparing offers, never for sums. */
export function pricePer(wanted: PriceUnit, price: Minor, per: PriceUnit): Minor {
  return wanted === per ? price : clothCost(unitLength(wanted), price, per);
}

/**
 * The smallest whole multiple of `step` that is at least `length`, both taken to 0.001 mm: an exact multiple stays
 * what it is, however its digits were computed. Throws when the step is below 0.001 mm.
 */
export function roundUpTo(length: Millimetres, step: Millimetres): Millimetres {
  const part = micrometres(step);
  if (part === 0n) throw new RangeError(`Cloth can't be bought in steps of ${step} mm`);
  const whole = micrometres(length);
  return Number(((whole + part - 1n) / part) * part) / 1000;
}

/**
 * `total` minor units shared by `weights`, in their order: each its share rounded down, and what is then left goes, a unit each, to
 * the largest remainders (of equal ones to the first), so that the parts add up to the total. Throws when no weight is above 0.
 */
export function shareCost(total: Minor, weights: readonly number[]): Minor[] {
  const sum = weights.reduce((all, weight) => all + weight, 0);
  if (!(sum > 0) || weights.some((weight) => weight < 0))
    throw new RangeError('A cost is shared by weights of which at least one is above nothing');
  const exact = weights.map((weight) => (total * weight) / sum);
  const parts = exact.map(Math.floor);
  const left = total - parts.reduce((all, part) => all + part, 0);
  const byRemainder = exact
    .map((part, i) => ({ i, remainder: part - Math.floor(part) }))
    .sort((a, b) => b.remainder - a.remainder || a.i - b.i);
  for (const { i } of byRemainder.slice(0, left)) parts[i]! += 1;
  return parts;
}
