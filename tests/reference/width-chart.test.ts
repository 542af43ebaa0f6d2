import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { estimatedLength } from '$lib/cloth/what-to-buy';
import { createSolver } from '$lib/settle/solver';
import { MM_PER } from '$lib/units/length';
import { runs } from '../runs';
import { piece, problem, rectangle } from '../unit/settle/made-up-problem';

/*
 * The width conversion chart of US extension leaflets (seen on two independent pages that agree; attributed to Rutgers
 * Cooperative Extension from memory). Yards, in columns by width in inches.
 *
 * The property tested: for each pair of widths the rows of the chart say between which ratios the lengths of one and the same
 * garment lie. What the product says for the same pieces on both widths, as an estimate and as settled lays of many small
 * rectangles, has to lie between them. Usable widths are the chart's less an inch, the leaflets' rule of thumb.
 */
const widths = [35.5, 39, 41.5, 44.5, 50, 53, 59, 66];
const rows = [
  [1.75, 1.5, 1.5, 1.375, 1.25, 1.125, 1, 0.875],
  [2, 1.75, 1.75, 1.625, 1.5, 1.375, 1.25, 1.125],
  [2.25, 2, 2, 1.75, 1.625, 1.5, 1.375, 1.25],
  [2.5, 2.25, 2.25, 2.125, 1.75, 1.75, 1.625, 1.5],
  [2.875, 2.5, 2.5, 2.25, 2, 1.875, 1.75, 1.625],
  [3.125, 2.75, 2.75, 2.5, 2.25, 2, 1.875, 1.75],
  [3.375, 3, 2.875, 2.75, 2.375, 2.25, 2, 1.875],
  [3.75, 3.25, 3.125, 2.875, 2.625, 2.375, 2.25, 2.125],
  [4.25, 3.5, 3.375, 3.125, 2.75, 2.625, 2.375, 2.25],
  [4.5, 3.75, 3.625, 3.375, 3, 2.75, 2.625, 2.5],
  [4.75, 4, 3.875, 3.625, 3.25, 2.875, 2.75, 2.625],
  [5, 4.25, 4.125, 3.875, 3.375, 3.125, 2.875, 2.75]
];

/** Entries are rounded up to eighths of a yard: each stands for any length down to an eighth less. */
const EIGHTH = 0.125;
const pairs = widths.flatMap((_, from) =>
  widths.slice(from + 1).map((__, k) => {
    const to = from + 1 + k;
    return {
      from,
      to,
      least: Math.min(...rows.map((row) => (row[to]! - EIGHTH) / row[from]!)),
      most: Math.max(...rows.map((row) => row[to]! / (row[from]! - EIGHTH)))
    };
  })
);
const usable = (column: number): number => (widths[column]! - 1) * MM_PER.in;

describe('the width conversion chart', () => {
  it('is in whole eighths of a yard and never longer on wider cloth', () => {
    for (const row of rows) {
      expect(row.every((yards) => Number.isInteger(yards * 8))).toBe(true);
      row.slice(1).forEach((yards, i) => expect(yards).toBeLessThanOrEqual(row[i]!));
    }
  });

  it('bounds what an estimate says of two widths', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 200_000, max: 5_000_000 }),
        fc.double({ min: 0.5, max: 0.9, noNaN: true }),
        fc.constantFrom(...pairs),
        (area, efficiency, { from, to, least, most }) => {
          const on = (column: number) =>
            estimatedLength({ area, width: usable(column), efficiency, matchingExtra: 0 });
          const ratio = on(to) / on(from);
          expect(ratio).toBeGreaterThanOrEqual(least);
          expect(ratio).toBeLessThanOrEqual(most);
        }
      ),
      { seed: 21, numRuns: runs(300) }
    );
  });

  it('bounds what settled lays of the same rectangles take on two widths', () => {
    const set = Array.from({ length: 14 }, (_, k) =>
      piece(`p${k}`, rectangle(140 + 23 * k, 90 + 17 * ((k * 5) % 14)), { copies: 3 })
    );
    const settled = [0, 3, 6].map((column) => {
      const solver = createSolver({ ...problem(set), width: usable(column) }, { seed: 1 });
      for (let k = 0; k < 10; k++) solver.step(6000, k / 10);
      return { column, length: solver.result().length, left: solver.result().leftOver };
    });
    for (const a of settled)
      for (const b of settled) {
        expect(a.left).toEqual([]);
        const pair = pairs.find(({ from, to }) => from === a.column && to === b.column);
        if (!pair) continue;
        const ratio = b.length / a.length;
        expect(ratio).toBeGreaterThanOrEqual(pair.least);
        expect(ratio).toBeLessThanOrEqual(pair.most);
      }
  });
});
