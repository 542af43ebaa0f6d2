import fc from 'fast-check';
import { expect, it } from 'vitest';
import type { Box, Outline } from '$lib/geometry/point';
import { emptyRectangles } from '$lib/lay/empty-rectangles';
import { runs } from '../../runs';

const box = (x: number, y: number, w: number, h: number): Outline => [
  { x, y },
  { x: x + w, y },
  { x: x + w, y: y + h },
  { x, y: y + h }
];
const area = ({ minX, minY, maxX, maxY }: Box) => (maxX - minX) * (maxY - minY);

it('finds what is left beside a piece, the largest first', () => {
  const found = emptyRectangles([box(0, 0, 600, 500)], 1000, 1400);
  expect(found[0]).toEqual({ minX: 0, minY: 500, maxX: 1000, maxY: 1400 });
  expect(found[1]).toEqual({ minX: 600, minY: 0, maxX: 1000, maxY: 500 });
  expect(found).toHaveLength(2);
});

it('proposes nothing smaller than the smallest remnant, either way round', () => {
  expect(emptyRectangles([box(0, 0, 1000, 1200)], 1000, 1390)).toEqual([]);
  expect(emptyRectangles([box(0, 0, 1000, 1200)], 1000, 1400)).toHaveLength(1);
  expect(emptyRectangles([box(0, 0, 800, 1400)], 1000, 1400)).toHaveLength(1);
});

it('is as large as any rectangle of the grid, and touches no piece', () => {
  const piece = fc.tuple(
    fc.nat(9),
    fc.nat(9),
    fc.integer({ min: 1, max: 4 }),
    fc.integer({ min: 1, max: 4 })
  );
  fc.assert(
    fc.property(fc.array(piece, { maxLength: 8 }), (pieces) => {
      const taken = new Set<string>();
      for (const [x, y, w, h] of pieces)
        for (let i = x; i < Math.min(10, x + w); i++)
          for (let j = y; j < Math.min(10, y + h); j++) taken.add(`${i} ${j}`);
      let most = 0;
      for (let a = 0; a < 10; a++)
        for (let b = 0; b < 10; b++)
          for (let c = a + 1; c <= 10; c++)
            for (let d = b + 1; d <= 10; d++) {
              let free = true;
              for (let i = a; i < c && free; i++)
                for (let j = b; j < d && free; j++) free = !taken.has(`${i} ${j}`);
              if (free && ((c - a >= 3 && d - b >= 2) || (c - a >= 2 && d - b >= 3)))
                most = Math.max(most, (c - a) * (d - b));
            }
      const found = emptyRectangles(
        pieces.map(([x, y, w, h]) => box(x * 10, y * 10, w * 10, h * 10)),
        100,
        100,
        { least: { length: 30, width: 20 }, most: 1, cell: 10 }
      );
      expect(found[0] ? area(found[0]) / 100 : 0).toBe(most);
    }),
    { seed: 4, numRuns: runs(200) }
  );
});
