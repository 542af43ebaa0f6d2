import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { overlapDepth, overlaps } from '$lib/geometry/overlap';
import { overlapRegion } from '$lib/geometry/overlap-region';
import { outlineOf, placePrepared, prepare, type PreparedOutline } from '$lib/geometry/prepared';
import { box, points, randomFrom, star, starOutline } from './outlines';
import { denseDepth } from './brute-force';
import { runs } from '../../runs';

const at = (x: number, y: number, turn = 0, flip = false) => ({ x, y, turn, flip });
const square = prepare(box(0, 0, 100, 100));

describe('depth of an overlap', () => {
  it('is nothing for outlines that are apart or touch', () => {
    expect(overlapDepth(square, placePrepared(square, at(100, 0)))).toEqual({ depth: 0, at: null });
    expect(overlapDepth(square, placePrepared(square, at(100, 100))).depth).toBe(0);
    expect(overlapDepth(square, placePrepared(square, at(300, 0))).depth).toBe(0);
  });

  it('is how far a corner runs in', () => {
    expect(overlapDepth(square, placePrepared(square, at(93, 40)))).toMatchObject({ depth: 7 });
    expect(overlapDepth(square, placePrepared(square, at(93, 0))).depth).toBe(7);
  });

  it('finds a cross of two strips, which has no corner inside', () => {
    const flat = prepare(box(0, 40, 100, 60), { x: 5, y: 50 });
    const tall = prepare(box(45, 0, 55, 100), { x: 50, y: 5 });
    // The middle of the flat strip's edges is 5 from both sides of the tall one.
    expect(overlapDepth(flat, tall).depth).toBeCloseTo(10, 6);
    expect(overlaps(flat, tall)).toBe(true);
  });

  it('convicts copies that lie exactly on top of each other', () => {
    expect(overlapDepth(square, square)).toEqual({ depth: 50, at: { x: 50, y: 50 } });
    const odd = prepare(star(60, 100, randomFrom(5)));
    expect(overlaps(odd, placePrepared(odd, at(0, 0)))).toBe(true);
  });

  it('finds a piece that lies wholly inside another', () => {
    const small = prepare(box(10, 10, 20, 20));
    expect(overlapDepth(square, small)).toMatchObject({ depth: 20, at: { x: 20, y: 20 } });
  });

  it('is not misled by pieces that interlock without touching', () => {
    const comb = prepare(points([0, 0], [90, 0], [90, 50], [60, 50], [60, 10], [30, 10], [30, 50], [0, 50]));
    const tooth = prepare(box(31, 11, 59, 80));
    expect(overlapDepth(comb, tooth).depth).toBe(0);
    expect(overlapDepth(comb, placePrepared(tooth, at(0, -1.5))).depth).toBeCloseTo(0.5, 9);
  });

  it('tells 0.009 mm from 0.011 mm at 1,000 random turns', () => {
    const random = randomFrom(2026);
    // Its own mirror image, so that the flip changes the order of the points and nothing else.
    const shape = prepare(box(0, -60, 350, 60));
    for (let k = 0; k < 1000; k++) {
      const turn = Math.floor(random() * 3_600_000) / 10_000;
      const [x, y] = [random() * 5000, random() * 1400];
      const radians = (turn * Math.PI) / 180;
      const still = placePrepared(shape, at(x, y, turn, random() < 0.5));
      const run = (depth: number) => {
        const reach = 350 - depth;
        return placePrepared(
          shape,
          at(x + Math.cos(radians) * reach, y + Math.sin(radians) * reach, turn, random() < 0.5)
        );
      };
      expect(overlaps(still, run(0.009))).toBe(false);
      expect(overlaps(still, run(0.011))).toBe(true);
    }
  });

  it('is symmetric and unchanged when both are turned, flipped and moved together', () => {
    fc.assert(
      fc.property(
        starOutline(),
        starOutline(),
        fc.integer({ min: -150, max: 150 }),
        fc.integer({ min: 0, max: 3_599_999 }),
        fc.boolean(),
        (one, two, shift, turn, flip) => {
          const a = prepare(one);
          const b = placePrepared(prepare(two), at(shift, shift / 3));
          const { depth } = overlapDepth(a, b);
          expect(overlapDepth(b, a).depth).toBeCloseTo(depth, 7);
          const placement = at(1234.567, -321.5, turn / 10_000, flip);
          const turned = overlapDepth(placePrepared(a, placement), placePrepared(b, placement)).depth;
          expect(turned).toBeCloseTo(depth, 6);
        }
      ),
      { seed: 31, numRuns: runs(200) }
    );
  });

  it('grows with the outlines', () => {
    fc.assert(
      fc.property(
        starOutline(),
        starOutline(),
        fc.integer({ min: -100, max: 100 }),
        fc.constantFrom(0.01, 0.5, 3, 100),
        (one, two, shift, scale) => {
          const sized = (outline: typeof one, by: number) =>
            outline.map(({ x, y }) => ({ x: x * by, y: y * by }));
          const depth = (by: number) => {
            const a = prepare(sized(one, by), { x: 0, y: 0 });
            const b = prepare(sized(two, by), { x: 0, y: 0 });
            return overlapDepth(a, placePrepared(b, at(shift * by, 0))).depth;
          };
          expect(Math.abs(depth(scale) / scale - depth(1))).toBeLessThan(1e-5);
        }
      ),
      { seed: 34, numRuns: runs(100) }
    );
  });

  it('agrees with dense sampling of both outlines', () => {
    fc.assert(
      fc.property(
        starOutline(20),
        starOutline(20),
        fc.integer({ min: -120, max: 120 }),
        (one, two, shift) => {
          const a = prepare(one);
          const b = placePrepared(prepare(two), at(shift, 7));
          const { depth } = overlapDepth(a, b);
          const sampled = denseDepth(a, b, 0.05);
          // A sample is at most half a step from the deepest place.
          expect(depth).toBeGreaterThanOrEqual(sampled - 1e-7);
          expect(depth).toBeLessThanOrEqual(sampled + 0.025 + 1e-7);
        }
      ),
      { seed: 32, numRuns: runs(40) }
    );
  });

  it('stops early with the same verdict', () => {
    fc.assert(
      fc.property(starOutline(), starOutline(), fc.integer({ min: -150, max: 150 }), (one, two, shift) => {
        const a = prepare(one);
        const b = placePrepared(prepare(two), at(shift, -shift));
        expect(overlaps(a, b)).toBe(overlapDepth(a, b).depth > 0.01);
      }),
      { seed: 33, numRuns: runs(200) }
    );
  });
});

describe('region of an overlap', () => {
  const region = (a: PreparedOutline, b: PreparedOutline) => overlapRegion(outlineOf(a), outlineOf(b));
  it('is measured and drawn', () => {
    const found = region(square, placePrepared(square, at(90, 95)));
    expect(found.area).toBeCloseTo(50, 9);
    expect(found.region).toHaveLength(1);
    expect(region(square, placePrepared(square, at(100, 0))).region).toEqual([]);
    expect(region(square, square).area).toBe(10_000);
  });
});
