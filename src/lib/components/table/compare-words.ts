import type { LayDocument } from '$lib/lay/document';
import type { Verdict } from '$lib/lay/verdict';
import { formatDecimal, formatLength, type LengthUnit } from '$lib/units/length';
import { clothLength, percent } from './slip-words';

/*
 * Two revisions of a lay in one table.
 */

export interface ComparisonRow {
  readonly name: string;
  readonly first: string;
  readonly second: string;
  /** From the first to the second; empty when they are equal. */
  readonly difference: string;
}

/** The readings of two revisions, and what changed from the first to the second. */
export function comparisonRows(first: Verdict, second: Verdict, unit: LengthUnit): ComparisonRow[] {
  const lengthOf = (mm: number): string => formatLength(mm, unit, { decimals: unit === 'cm' ? 1 : 2 });
  const signed = (value: number, words: string): string =>
    value === 0 ? '' : value > 0 ? `+${words.replace('−', '')}` : words;
  const length = (name: string, a: number, b: number): ComparisonRow => ({
    name,
    first: lengthOf(a),
    second: lengthOf(b),
    difference: signed(b - a, lengthOf(b - a))
  });
  const share = (name: string, a: number | null, b: number | null): ComparisonRow => ({
    name,
    first: percent(a),
    second: percent(b),
    difference:
      a === null || b === null || a === b
        ? ''
        : signed(b - a, `${formatDecimal((b - a) * 100, 1, true)} points`)
  });
  const count = (name: string, a: number, b: number): ComparisonRow => ({
    name,
    first: String(a),
    second: String(b),
    difference: signed(b - a, formatDecimal(b - a, 0))
  });
  const stops = (verdict: Verdict): number =>
    verdict.findings.filter(({ severity }) => severity === 'stops').length;
  const [a, b] = [first.readings, second.readings];
  return [
    length('Length used', a.lengthUsed, b.lengthUsed),
    share('Efficiency', a.efficiency, b.efficiency),
    share('Utilisation', a.utilisation, b.utilisation),
    length('Least length', a.leastLength.length, b.leastLength.length),
    {
      name: 'Cloth to buy',
      first: clothLength(a.clothToBuy.total, unit),
      second: clothLength(b.clothToBuy.total, unit),
      difference: signed(
        b.clothToBuy.total - a.clothToBuy.total,
        clothLength(b.clothToBuy.total - a.clothToBuy.total, unit)
      )
    },
    count('Pieces on the cloth', a.pieces.placed, b.pieces.placed),
    count('Findings that stop', stops(first), stops(second))
  ];
}

/** Ids of placements that are in both lays at different places, or in one of them only. */
export function placedDifferently(first: LayDocument, second: LayDocument): Set<string> {
  const before = new Map(first.placements.map((placement) => [placement.id, placement]));
  const marked = new Set(before.keys());
  for (const placement of second.placements) {
    const other = before.get(placement.id);
    if (
      other &&
      other.x === placement.x &&
      other.y === placement.y &&
      other.turn === placement.turn &&
      other.flip === placement.flip
    )
      marked.delete(placement.id);
    else marked.add(placement.id);
  }
  return marked;
}
