import { clothCost } from '$lib/cloth/cost';
import type { Readings } from '$lib/lay/verdict';
import { pieces } from '$lib/lay/wording';
import type { SettleChoice, SettleProgress } from '$lib/settle/run';
import { formatDecimal, formatLength, type LengthUnit } from '$lib/units/length';
import { formatMoney } from '$lib/units/money';

/*
 * How a settle run speaks: its time, what it gains, how far it is from the least length.
 */

type Price = { minor: number; unit: 'metre' | 'yard'; currency: string };

export function shortLength(mm: number, unit: LengthUnit): string {
  return unit === 'cm'
    ? formatLength(mm, 'cm', { decimals: 1, fixed: true })
    : formatLength(mm, 'in', { fraction: 16 });
}

/** '0:42', '12:05' */
export function clock(seconds: number): string {
  const whole = Math.max(0, Math.round(seconds));
  return `${Math.floor(whole / 60)}:${String(whole % 60).padStart(2, '0')}`;
}

/** How long it still searches, or has searched when it has no end of its own. */
export function timeWords(choice: SettleChoice, progress: SettleProgress | null): string {
  const seconds = progress?.seconds ?? 0;
  return choice.budgetSeconds === null
    ? `${clock(seconds)} so far`
    : `${clock(choice.budgetSeconds - seconds)} left`;
}

/** Share of its time that is gone; null when it has no end of its own. */
export function timeShare(choice: SettleChoice, progress: SettleProgress | null): number | null {
  if (choice.budgetSeconds === null) return null;
  return Math.min(1, (progress?.seconds ?? 0) / choice.budgetSeconds);
}

export interface GainWords {
  /** Better, worse or the same as the lay before; null when that one's length does not count. */
  readonly sense: 'better' | 'worse' | 'same' | null;
  readonly length: string;
  /** What the cloth to buy costs less or more; null without a price, or when it is the same. */
  readonly money: string | null;
}

/** What the settled lay gains against the lay before. */
export function gainWords(
  before: { readonly readings: Readings; readonly counts: boolean },
  after: Readings,
  unit: LengthUnit,
  price: Price | null
): GainWords {
  const loose = before.readings.pieces.loose;
  if (!before.counts)
    return {
      sense: null,
      length:
        loose > 0
          ? `Before, ${pieces(loose)} ${loose === 1 ? 'was' : 'were'} loose: nothing to compare.`
          : 'Before, findings stopped the lay: nothing to compare.',
      money: null
    };
  const gain = before.readings.lengthUsed - after.lengthUsed;
  const sense = Math.abs(gain) < 0.05 ? 'same' : gain > 0 ? 'better' : 'worse';
  return {
    sense,
    length:
      sense === 'same'
        ? 'As long as the lay before'
        : `${shortLength(Math.abs(gain), unit)} ${sense === 'better' ? 'less' : 'more'} than before`,
    money: price && moneyWords(before.readings.clothToBuy.total, after.clothToBuy.total, price)
  };
}

function moneyWords(before: number, after: number, { minor, unit, currency }: Price): string | null {
  const saved = clothCost(before, minor, unit) - clothCost(after, minor, unit);
  if (saved === 0) return 'the same cloth to buy';
  return `${formatMoney(Math.abs(saved), currency)} ${saved > 0 ? 'less' : 'more'} to buy`;
}

/** How far a lay is from the least length. */
export function leastWords(readings: Readings, unit: LengthUnit): string {
  const least = readings.leastLength.length;
  const over = readings.lengthUsed - least;
  if (over < 0.05) return 'At the least length: no lay can be shorter.';
  const share = least > 0 ? ` (${formatDecimal((over / least) * 100, 1)} %)` : '';
  return `${shortLength(over, unit)} above the least length${share}`;
}

/** What ended the search. */
export function endWords(ended: SettleProgress['ended'], failed: string | null): string {
  if (failed) return failed;
  if (ended === 'least') return 'Done: no lay of these pieces can be shorter.';
  return ended === 'stopped' ? 'Stopped.' : 'Done.';
}
