import type { Minor } from './measure';
import { partOf, roundedTo, taxed, workCost, type BasisPoints, type TaxMode } from './share';

/*
 * How the price of an order comes about: cloth, trims, work and extras are its cost; overhead is a share of the cost, margin a
 * share of cost and overhead together (common practice, no published source); the sum is rounded to the studio's step and
 * taxed once. Every computed figure can be replaced by hand, and then says so.
 */

/** A figure as it was computed, as it was written by hand (null: not), and as it counts. */
export interface Figure {
  /** Null where something that it needs is not known. */
  readonly computed: Minor | null;
  readonly byHand: Minor | null;
  readonly amount: Minor;
}

/** A line that a person wrote: buttons, a rush. */
export interface WrittenLine {
  readonly words: string;
  readonly amount: Minor;
}

export interface PriceInput {
  readonly cloths: readonly { readonly computed: Minor | null; readonly byHand: Minor | null }[];
  readonly trims: readonly WrittenLine[];
  readonly extras: readonly WrittenLine[];
  /** Minutes, and the rate for an hour. */
  readonly work: { readonly minutes: number; readonly rate: Minor; readonly byHand: Minor | null };
  readonly overhead: { readonly share: BasisPoints; readonly byHand: Minor | null };
  readonly margin: { readonly share: BasisPoints; readonly byHand: Minor | null };
  /** The price written by hand: before an added tax, with an included one. */
  readonly priceByHand: Minor | null;
  /** The price is rounded to a multiple of this, half up; 1 for none. */
  readonly roundTo: Minor;
  readonly tax: { readonly mode: TaxMode; readonly rate: BasisPoints };
  /** A share of the total, or a sum, which can't be more than the total. */
  readonly deposit: { readonly share: BasisPoints } | { readonly amount: Minor };
}

export interface PriceBuild {
  readonly cloths: readonly Figure[];
  readonly cloth: Minor;
  readonly trims: Minor;
  readonly extras: Minor;
  readonly work: Figure;
  /** Cloth, trims, extras and work. */
  readonly cost: Minor;
  readonly overhead: Figure;
  readonly margin: Figure;
  readonly price: Figure;
  readonly net: Minor;
  readonly tax: Minor;
  readonly total: Minor;
  readonly deposit: Minor;
  /** Whether every figure is known, computed or by hand. */
  readonly complete: boolean;
}

function figure(computed: Minor | null, byHand: Minor | null): Figure {
  return { computed, byHand, amount: byHand ?? computed ?? 0 };
}

const sum = (amounts: readonly Minor[]): Minor => amounts.reduce((total, amount) => total + amount, 0);

/** The price of an order from its parts. Each product is rounded half up once; sums are exact. */
export function buildPrice(input: PriceInput): PriceBuild {
  const cloths = input.cloths.map(({ computed, byHand }) => figure(computed, byHand));
  const cloth = sum(cloths.map(({ amount }) => amount));
  const trims = sum(input.trims.map(({ amount }) => amount));
  const extras = sum(input.extras.map(({ amount }) => amount));
  const work = figure(workCost(input.work.minutes, input.work.rate), input.work.byHand);
  const cost = cloth + trims + extras + work.amount;
  const overhead = figure(partOf(cost, input.overhead.share), input.overhead.byHand);
  const margin = figure(partOf(cost + overhead.amount, input.margin.share), input.margin.byHand);
  const price = figure(roundedTo(cost + overhead.amount + margin.amount, input.roundTo), input.priceByHand);
  const { net, tax, total } = taxed(price.amount, input.tax.mode, input.tax.rate);
  return {
    cloths,
    cloth,
    trims,
    extras,
    work,
    cost,
    overhead,
    margin,
    price,
    net,
    tax,
    total,
    deposit:
      'share' in input.deposit ? partOf(total, input.deposit.share) : Math.min(input.deposit.amount, total),
    complete: price.byHand !== null || cloths.every((one) => one.byHand !== null || one.computed !== null)
  };
}
