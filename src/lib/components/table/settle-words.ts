import type { SettleJob } from '$lib/client/settle-server';
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
  /** In length and, with a price, in money. */
  readonly words: string;
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
      words:
        loose > 0
          ? `Before, ${pieces(loose)} ${loose === 1 ? 'was' : 'were'} loose: nothing to compare.`
          : 'Before, findings stopped the lay: nothing to compare.'
    };
  const gain = before.readings.lengthUsed - after.lengthUsed;
  const saved = price ? costOf(before.readings, price) - costOf(after, price) : 0;
  if (Math.abs(gain) < 0.05) return { sense: 'same', words: 'As long as the lay before' };
  const length = shortLength(Math.abs(gain), unit);
  const money = price && formatMoney(Math.abs(saved), price.currency);
  const [sense, word] = gain > 0 ? (['better', 'less'] as const) : (['worse', 'more'] as const);
  // Cloth is bought in whole steps: what is saved on the table may cost the same.
  if (money && saved === 0)
    return { sense, words: `${length} ${word} than before; the cloth to buy stays the same` };
  return { sense, words: `${length}${money ? ` and ${money}` : ''} ${word} than before` };
}

const costOf = ({ clothToBuy }: Readings, { minor, unit }: Price): number =>
  clothCost(clothToBuy.total, minor, unit);

/** How far a lay is from the least length. */
export function leastWords(readings: Readings, unit: LengthUnit): string {
  const least = readings.leastLength.length;
  const over = readings.lengthUsed - least;
  if (over < 0.05) return 'At the least length: no lay can be shorter.';
  const share = least > 0 ? ` (${formatDecimal((over / least) * 100, 1)} %)` : '';
  return `${shortLength(over, unit)} above the least length${share}`;
}

/** What ended the search; nothing when it failed, which has words of its own. */
export function endWords(state: SettleJob['state'], ended: SettleProgress['ended'] | undefined): string {
  if (state === 'failed') return '';
  if (ended === 'least') return 'No lay of these pieces can be shorter';
  return state === 'stopped' ? 'Stopped' : 'Done';
}
