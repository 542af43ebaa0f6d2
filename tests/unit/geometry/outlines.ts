import fc from 'fast-check';
import type { Point } from '$lib/geometry/point';
import { snapPoint } from '$lib/geometry/point';

/* Outlines for the tests of this folder. */

export const points = (...pairs: [number, number][]): Point[] => pairs.map(([x, y]) => ({ x, y }));

export const box = (minX: number, minY: number, maxX: number, maxY: number): Point[] =>
  points([minX, minY], [maxX, minY], [maxX, maxY], [minX, maxY]);

/** A seeded generator of numbers in [0, 1). */
export function randomFrom(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t ^= t + Math.imul(t ^ (t >>> 7), 61 | t);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** A simple, counter-clockwise outline of `count` points round `centre`, on the 0.001 mm grid. */
export function star(
  count: number,
  radius: number,
  random: () => number,
  centre: Point = { x: 0, y: 0 }
): Point[] {
  return Array.from({ length: count }, (_, i) => {
    const angle = ((i + 0.8 * random()) / count) * 2 * Math.PI;
    const reach = radius * (0.3 + 0.7 * random());
    return snapPoint({ x: centre.x + Math.cos(angle) * reach, y: centre.y + Math.sin(angle) * reach });
  });
}

/** Simple outlines of 3 to `most` points, up to 200 mm across. */
export function starOutline(most = 40): fc.Arbitrary<Point[]> {
  return fc
    .record({
      count: fc.integer({ min: 5, max: most }),
      seed: fc.integer(),
      radius: fc.integer({ min: 10, max: 100 })
    })
    .map(({ count, seed, radius }) => star(count, radius, randomFrom(seed)));
}
