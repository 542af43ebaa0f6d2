import type { Minor } from '$lib/units/measure';
import type { BasisPoints, TaxMode } from '$lib/units/share';
import type { Scope } from './scope';

/*
 * What a studio's prices and quotes begin with. Rates, shares and days are only a beginning (common practice, no published
 * source): every figure can be replaced in an order.
 */

export interface MoneyDefaults {
  /** Minor units for an hour of work. */
  readonly hourly: Minor;
  readonly overhead: BasisPoints;
  readonly margin: BasisPoints;
  readonly tax: { readonly mode: TaxMode; readonly rate: BasisPoints };
  readonly depositShare: BasisPoints;
  /** A price is rounded to a multiple of this many minor units. */
  readonly roundTo: Minor;
  /** Days that a quote is valid. */
  readonly validDays: number;
  readonly fittings: number;
  readonly terms: string;
  readonly alterations: string;
  readonly exclusions: string;
  /** Under the studio's name: address, telephone, tax number; lines. */
  readonly letterhead: string;
}

/** Stands on every quote, whatever the studio's own terms say. */
export const LAW_NOTICE =
  'Nothing in these terms takes away rights that the law of your country gives you as a consumer. Whether an order made to your own measurements can be called off differs from country to country.';

export const DEFAULT_TERMS = [
  'Work begins, and cloth is bought, when the deposit is paid.',
  'Changes that you ask for after agreeing are quoted anew before they are made.',
  'Please tell us a day ahead if you can’t come to a fitting.',
  'The balance is due when the garment is handed over.'
].join('\n');

export const DEFAULT_ALTERATIONS =
  'Small alterations found at the fittings are included. Changes of your measurements after the first fitting are charged by the hour.';

export async function moneyDefaults(_scope: Scope): Promise<MoneyDefaults> {
  return {
    hourly: 0,
    overhead: 0,
    margin: 0,
    tax: { mode: 'none', rate: 0 },
    depositShare: 5000,
    roundTo: 1,
    validDays: 14,
    fittings: 2,
    terms: DEFAULT_TERMS,
    alterations: DEFAULT_ALTERATIONS,
    exclusions: '',
    letterhead: ''
  };
}
