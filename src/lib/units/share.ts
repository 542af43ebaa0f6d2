import type { Minor } from './measure';

/*
 * Shares of an amount, and tax. A share is a whole number of basis points: 100 are one per cent. Every rule here rounds
 * once, to the minor unit, half up, from an exact product: no binary fraction is ever in between.
 */

/** Hundredths of a per cent. */
export type BasisPoints = number;

export const WHOLE: BasisPoints = 10_000;

/** `numerator ÷ denominator` to the nearest whole number, a half upwards. The denominator is positive. */
export function dividedHalfUp(numerator: bigint, denominator: bigint): bigint {
  const twice = 2n * numerator + denominator;
  const whole = twice / (2n * denominator);
  // BigInt division cuts towards zero; half up needs the floor.
  return twice < 0n && twice % (2n * denominator) !== 0n ? whole - 1n : whole;
}

function whole(value: number, what: string): bigint {
  if (!Number.isSafeInteger(value)) throw new RangeError(`${what} is a whole number, got ${value}`);
  return BigInt(value);
}

/** A share of an amount, rounded half up to the minor unit. */
export function partOf(amount: Minor, share: BasisPoints): Minor {
  return Number(dividedHalfUp(whole(amount, 'Money') * whole(share, 'A share'), BigInt(WHOLE)));
}

/** The nearest multiple of `step` minor units, a half upwards. Throws unless the step is a positive whole number. */
export function roundedTo(amount: Minor, step: Minor): Minor {
  if (!(step > 0)) throw new RangeError(`Money can't be rounded to ${step}`);
  const by = whole(step, 'A step of money');
  return Number(dividedHalfUp(whole(amount, 'Money'), by) * by);
}

/** What work costs: minutes at a rate for the hour, rounded half up. */
export function workCost(minutes: number, hourly: Minor): Minor {
  return Number(dividedHalfUp(whole(minutes, 'Working time in minutes') * whole(hourly, 'A rate'), 60n));
}

export const taxModes = ['none', 'added', 'included'] as const;
/** 'added' comes on top of the price; 'included' is contained in it; 'none': no tax is shown. */
export type TaxMode = (typeof taxModes)[number];

export interface Taxed {
  readonly net: Minor;
  readonly tax: Minor;
  readonly total: Minor;
}

/**
 * A price with its tax. The tax is worked out **once on the total of the document**, never line by line, and rounded
 * half up to the minor unit; the net of an included tax is what is left, so that net + tax is the total exactly.
 */
export function taxed(price: Minor, mode: TaxMode, rate: BasisPoints): Taxed {
  if (mode === 'none') return { net: price, tax: 0, total: price };
  if (mode === 'added') {
    const tax = partOf(price, rate);
    return { net: price, tax, total: price + tax };
  }
  const tax = Number(
    dividedHalfUp(whole(price, 'Money') * whole(rate, 'A rate'), BigInt(WHOLE) + whole(rate, 'A rate'))
  );
  return { net: price - tax, tax, total: price };
}

export type ShareReading =
  { basisPoints: BasisPoints; error?: undefined } | { basisPoints?: undefined; error: string };

/** A typed share: `20`, `12.5`, `12,5 %`. At most `most` per cent, with at most two decimals. */
export function parseShare(text: string, most = 100): ShareReading {
  const match = /^(\d{1,5})(?:[.,](\d{1,2}))?\s*%?$/.exec(text.trim());
  if (!match) return { error: `Write a share in per cent such as 12.5, got “${text.trim()}”.` };
  const basisPoints = Number(match[1]) * 100 + Number((match[2] ?? '').padEnd(2, '0'));
  if (basisPoints > most * 100) return { error: `At most ${most} per cent, got “${text.trim()}”.` };
  return { basisPoints };
}

/** `1250` as `12.5`: digits for a field, without the sign. */
export function shareDigits(share: BasisPoints): string {
  return String(Math.floor(share / 100)) + decimals(share % 100);
}

const decimals = (hundredths: number): string =>
  hundredths === 0 ? '' : `.${String(hundredths).padStart(2, '0').replace(/0$/, '')}`;

export type TimeReading = { minutes: number; error?: undefined } | { minutes?: undefined; error: string };

/** Typed working time: `12`, `12.5` or `12,25` hours, or `12:30`. Whole minutes, at most 10,000 hours. */
export function parseWork(text: string): TimeReading {
  const typed = text.trim().replace(/\s*h(?:ours?)?$/i, '');
  const clock = /^(\d{1,5}):([0-5]\d)$/.exec(typed);
  const hours = /^(\d{1,5})(?:[.,](\d{1,2}))?$/.exec(typed);
  if (!clock && !hours) return { error: `Write hours such as 12.5 or 12:30, got “${text.trim()}”.` };
  const minutes = clock
    ? Number(clock[1]) * 60 + Number(clock[2])
    : Number(dividedHalfUp(BigInt(hours![1]! + (hours![2] ?? '').padEnd(2, '0')) * 60n, 100n));
  if (minutes > 600_000) return { error: 'At most 10,000 hours.' };
  return { minutes };
}

/** `12:30` for a field; whole hours as `12`. */
export function workDigits(minutes: number): string {
  const rest = minutes % 60;
  return rest === 0 ? String(minutes / 60) : `${Math.floor(minutes / 60)}:${String(rest).padStart(2, '0')}`;
}
