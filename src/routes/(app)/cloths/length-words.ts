import type { ClothLength } from '$lib/server/cloth-lengths';
import { formatDecimal, formatLength, type LengthUnit } from '$lib/units/length';

/*
 * A roll or remnant in words.
 */

export const kindWords: Record<ClothLength['kind'], string> = {
  roll: 'Roll',
  remnant: 'Remnant',
  client: 'The client’s own'
};

/** '2.40 m' or '2 5/8 yd': a length of cloth as it is sold. */
export function clothLengthWords(mm: number, unit: LengthUnit): string {
  return unit === 'cm'
    ? formatLength(mm, 'm', { decimals: 2, fixed: true })
    : formatLength(mm, 'yd', { fraction: 16 });
}

/** '12.0 points per 100 yd²', by the studio's unit; 'no flaws noted' where there are none. */
export function scoreWords({ flaws, score }: Pick<ClothLength, 'flaws' | 'score'>, unit: LengthUnit): string {
  if (flaws.length === 0) return 'no flaws noted';
  return unit === 'cm'
    ? `${formatDecimal(score.perSquareMetres, 1, true)} points per 100 m²`
    : `${formatDecimal(score.perSquareYards, 1, true)} points per 100 yd²`;
}

export function stateWords(length: Pick<ClothLength, 'state' | 'order'>): string {
  if (length.state === 'used') return 'Used up';
  return length.order ? `Reserved, order ${length.order.number}` : 'Free';
}
