import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  area,
  boundingBox,
  centroid,
  contains,
  counterClockwise,
  isSimple,
  locate,
  perimeter,
  selfCrossings,
  side
} from '$lib/geometry/polygon';
import { placeOutline } from '$lib/geometry/placement';
import { box, points, starOutline } from './outlines';
import { runs } from '../../runs';

const square = box(0, 0, 10, 10);

describe('one outline', () => {
  it('has area, perimeter, centre and box', () => {
    expect(area(square)).toBe(100);
    expect(area(square.toReversed())).toBe(-100);
    expect(perimeter(square)).toBe(40);
    expect(centroid(square)).toEqual({ x: 5, y: 5 });
    expect(boundingBox(square)).toEqual({ minX: 0, minY: 0, maxX: 10, maxY: 10 });
    expect(area(points([1, 1], [2, 2]))).toBe(0);
    expect(centroid(points([0, 0], [4, 0], [2, 0]))).toEqual({ x: 2, y: 0 });
    expect(area(counterClockwise(square.toReversed()))).toBe(100);
    expect(Math.sign(side(0, 0, 10, 0, 5, 1))).toBe(1);
  });

  it('keeps its area digits far from the origin', () => {
    expect(area(square.map(({ x, y }) => ({ x: x + 1e6, y: y - 1e6 })))).toBe(100);
  });

  it('knows inside, edge and outside exactly, also level with corners', () => {
    expect(locate(square, { x: 5, y: 5 })).toBe('inside');
    expect(locate(square, { x: 10, y: 5 })).toBe('edge');
    expect(locate(square, { x: 0, y: 0 })).toBe('edge');
    expect(locate(square, { x: -1, y: 0 })).toBe('outside');
    expect(locate(square, { x: 11, y: 10 })).toBe('outside');
    expect(locate(square, { x: 10 + 1e-15 * 10, y: 5 })).toBe('outside');
    const diamond = points([0, -5], [5, 0], [0, 5], [-5, 0]);
    expect(locate(diamond, { x: -6, y: 0 })).toBe('outside');
    expect(locate(diamond, { x: 0, y: 0 })).toBe('inside');
    expect(locate(diamond.toReversed(), { x: 0, y: 0 })).toBe('inside');
    expect(locate(diamond, { x: 2.5, y: 2.5 })).toBe('edge');
    expect(contains(diamond, { x: 5, y: 0 })).toBe(true);
  });

  it('says where it crosses itself', () => {
    expect(selfCrossings(square)).toEqual([]);
    const bow = points([0, 0], [10, 10], [10, 0], [0, 10]);
    expect(selfCrossings(bow)).toEqual([{ at: { x: 5, y: 5 }, edges: [0, 2] }]);
    const spike = points([0, 0], [10, 0], [10, 10], [10, 20], [10, 10], [0, 10]);
    expect(selfCrossings(spike).length).toBeGreaterThan(0);
    const pinched = points([0, 0], [10, 0], [5, 5], [10, 10], [0, 10], [5, 5]);
    expect(selfCrossings(pinched)[0]!.at).toEqual({ x: 5, y: 5 });
    expect(isSimple(points([0, 0], [10, 0], [10, 0], [10, 10], [0, 0]))).toBe(true);
    expect(isSimple(points([0, 0], [10, 0], [5, 0]))).toBe(false);
    expect(isSimple(points([0, 0], [10, 0]))).toBe(false);
  });

  it('keeps area and containment when turned, flipped and moved', () => {
    fc.assert(
      fc.property(
        starOutline(),
        fc.integer({ min: 0, max: 3_599_999 }),
        fc.boolean(),
        fc.integer({ min: -1e6, max: 1e6 }),
        (outline, turn, flip, x) => {
          expect(isSimple(outline)).toBe(true);
          const placed = placeOutline(outline, { x, y: -x / 3, turn: turn / 10_000, flip });
          expect(area(placed)).toBeGreaterThan(0);
          expect(Math.abs(area(placed) / area(outline) - 1)).toBeLessThan(1e-9);
          expect(isSimple(placed)).toBe(true);
          expect(locate(placed, placed[0]!)).toBe('edge');
        }
      ),
      { seed: 21, numRuns: runs(200) }
    );
  });
});
