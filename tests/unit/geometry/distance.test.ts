import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { boxDistance, clearBy, outlineDistance } from '$lib/geometry/distance';
import { BoxGrid, BoxIndex, neighbourPairs } from '$lib/geometry/neighbours';
import { overlapDepth } from '$lib/geometry/overlap';
import { placeOutline } from '$lib/geometry/placement';
import { boundingBox, locate } from '$lib/geometry/polygon';
import { holds, outlineOf, placePrepared, prepare } from '$lib/geometry/prepared';
import { denseDistance } from './brute-force';
import { box, points, randomFrom, starOutline } from './outlines';
import { runs } from '../../runs';

const at = (x: number, y: number, turn = 0, flip = false) => ({ x, y, turn, flip });
const square = prepare(box(0, 0, 100, 100));

describe('a prepared outline', () => {
  it('is placed to the very numbers of the one transform, and answers inside as the plain test does', () => {
    fc.assert(
      fc.property(
        starOutline(),
        fc.integer({ min: 0, max: 3_599_999 }),
        fc.boolean(),
        fc.array(
          fc.record({ x: fc.integer({ min: -100, max: 100 }), y: fc.integer({ min: -100, max: 100 }) })
        ),
        (outline, turn, flip, probes) => {
          const placement = at(12.345, -6.789, turn / 10_000, flip);
          const shape = prepare(outline);
          const expected = placeOutline(outline, placement);
          const placed = outlineOf(placePrepared(shape, placement));
          const start = expected.findIndex((p) => p.x === placed[0]!.x && p.y === placed[0]!.y);
          expect(placed).toEqual([...expected.slice(start), ...expected.slice(0, start)]);
          for (const { x, y } of [...probes, ...outline])
            expect(holds(shape, x, y)).toBe(locate(outline, { x, y }) === 'inside');
        }
      ),
      { seed: 41 }
    );
  });

  it('refuses what encloses nothing', () => {
    expect(() => prepare(points([0, 0], [0, 0], [1, 1]))).toThrow(RangeError);
  });
});

describe('distance of two outlines', () => {
  it('is measured between the nearest places', () => {
    expect(outlineDistance(square, placePrepared(square, at(103, 104)))).toEqual({
      distance: 5,
      from: { x: 100, y: 100 },
      to: { x: 103, y: 104 }
    });
    expect(outlineDistance(square, placePrepared(square, at(100, 50))).distance).toBe(0);
    expect(outlineDistance(square, placePrepared(square, at(50, 50))).distance).toBe(0);
    expect(outlineDistance(square, prepare(box(10, 10, 20, 20))).distance).toBe(0);
    expect(boxDistance(square.box, placePrepared(square, at(103, 104)).box)).toBe(5);
  });

  it('agrees with dense sampling, both ways round, and is reached between the places named', () => {
    fc.assert(
      fc.property(starOutline(20), starOutline(20), fc.integer({ min: 150, max: 260 }), (one, two, shift) => {
        const a = prepare(one);
        const b = placePrepared(prepare(two), at(shift, shift / 7));
        const { distance, from, to } = outlineDistance(a, b);
        expect(outlineDistance(b, a).distance).toBeCloseTo(distance, 9);
        if (distance === 0) return;
        expect(Math.hypot(from.x - to.x, from.y - to.y)).toBeCloseTo(distance, 9);
        const sampled = denseDistance(one, outlineOf(b), 0.05);
        expect(distance).toBeLessThanOrEqual(sampled + 1e-9);
        // Of two places one is a corner, hence a sample; it can only miss where corners are no samples.
        expect(distance).toBeGreaterThanOrEqual(sampled - 1e-6);
      }),
      { seed: 42, numRuns: runs(60) }
    );
  });

  it('answers the quick question as the measured one', () => {
    fc.assert(
      fc.property(
        starOutline(),
        starOutline(),
        fc.integer({ min: -260, max: 260 }),
        fc.constantFrom(0, 3, 5, 20),
        (one, two, shift, clearance) => {
          const a = prepare(one);
          const b = placePrepared(prepare(two), at(shift, shift / 2, 33.3, true));
          const expected =
            clearance === 0
              ? overlapDepth(a, b).depth <= 0.01
              : outlineDistance(a, b).distance >= clearance - 1e-6;
          expect(clearBy(a, b, clearance)).toBe(expected);
          expect(clearBy(b, a, clearance)).toBe(expected);
        }
      ),
      { seed: 43, numRuns: runs(500) }
    );
  });

  it('counts exactly the clearance as clear, whatever the last digits say', () => {
    for (let x = 0; x < 50; x++) {
      const left = placePrepared(square, at(x * 0.1, 0));
      const right = placePrepared(square, at(x * 0.1 + 103, 0));
      expect(clearBy(left, right, 3)).toBe(true);
      expect(clearBy(left, placePrepared(right, at(-0.001, 0)), 3)).toBe(false);
    }
    expect(clearBy(square, prepare(box(10, 10, 20, 20)), 3)).toBe(false);
  });
});

describe('neighbours', () => {
  it('are the same by index, by grid and by comparing all', () => {
    const random = randomFrom(7);
    const boxes = Array.from({ length: 200 }, () => {
      const [x, y] = [random() * 3000, random() * 1400];
      return boundingBox(box(x, y, x + random() * 300, y + random() * 300));
    });
    const grid = new BoxGrid<number>(150);
    boxes.forEach((each, i) => grid.set(i, { ...each, minX: each.minX - 900 }));
    boxes.forEach((each, i) => grid.set(i, each));
    grid.delete(13);
    const index = new BoxIndex(boxes);
    const near = (i: number, j: number) => {
      const [a, b] = [boxes[i]!, boxes[j]!];
      return a.minX - 5 <= b.maxX && b.minX <= a.maxX + 5 && a.minY - 5 <= b.maxY && b.minY <= a.maxY + 5;
    };
    const all = boxes.flatMap((_, i) => boxes.flatMap((_, j) => (j > i && near(i, j) ? [[i, j]] : [])));
    expect(neighbourPairs(boxes, 5)).toEqual(all);
    boxes.forEach((each, i) => {
      const expected = boxes.map((_, j) => j).filter((j) => near(i, j));
      expect(index.near(each, 5)).toEqual(expected);
      expect(grid.near(each, 5).sort((p, q) => p - q)).toEqual(expected.filter((j) => j !== 13));
    });
    expect(new BoxIndex([]).near(boxes[0]!)).toEqual([]);
  });
});
