import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { CornerJoin } from '$lib/geometry/offset-corner';
import { offsetOutline } from '$lib/geometry/offset';
import { outerRing } from '$lib/geometry/outer-ring';
import { arcPath, flatten } from '$lib/geometry/path';
import { area, boundingBox, isSimple, locate } from '$lib/geometry/polygon';
import type { Point } from '$lib/geometry/point';
import { box, points, randomFrom, starOutline } from './outlines';
import { distanceTo } from './brute-force';
import { runs } from '../../runs';

const mitred: CornerJoin = { kind: 'mitred' };

/** An outline of straight edges, each with its own distance and corner. */
function straight(
  outline: Point[],
  distances: number | number[],
  corners: CornerJoin | CornerJoin[] = mitred
) {
  return outline.map((point, i) => ({
    points: [point, outline[(i + 1) % outline.length]!],
    distance: Array.isArray(distances) ? distances[i]! : distances,
    corner: Array.isArray(corners) ? corners[i]! : corners
  }));
}

/** The same ring, wherever it starts. */
const sameRing = (found: Point[] | null, expected: Point[]) => {
  expect(found).not.toBeNull();
  const start = found!.findIndex((p) => Math.hypot(p.x - expected[0]!.x, p.y - expected[0]!.y) < 0.0011);
  expect(start, JSON.stringify(found)).toBeGreaterThanOrEqual(0);
  const turned = [...found!.slice(start), ...found!.slice(0, start)];
  expect(turned.length, JSON.stringify(turned)).toBe(expected.length);
  turned.forEach((p, i) => {
    expect(p.x, JSON.stringify(turned)).toBeCloseTo(expected[i]!.x, 2);
    expect(p.y, JSON.stringify(turned)).toBeCloseTo(expected[i]!.y, 2);
  });
};

describe('the outer ring of a line', () => {
  it('drops loops and turns', () => {
    expect(outerRing(box(0, 0, 10, 10))).toEqual(box(0, 0, 10, 10));
    expect(outerRing(box(0, 0, 10, 10).toReversed())).toBeNull();
    // A bow tie runs round its right half only.
    sameRing(
      outerRing(points([0, 0], [10, 10], [10, 0], [0, 10]).toReversed()),
      points([5, 5], [10, 0], [10, 10])
    );
    // A square run round twice is a square; with a spike, a square.
    sameRing(outerRing([...box(0, 0, 10, 10), ...box(0, 0, 10, 10)]), box(0, 0, 10, 10));
    sameRing(outerRing(points([0, 0], [10, 0], [20, 0], [10, 0], [10, 10], [0, 10])), box(0, 0, 10, 10));
    // Two squares that share a corner are two: the larger is kept.
    sameRing(
      outerRing(points([0, 0], [10, 0], [10, 10], [15, 10], [15, 15], [10, 15], [10, 10], [0, 10])),
      box(0, 0, 10, 10)
    );
  });
});

describe('a line beside an outline', () => {
  const rectangle = box(0, 0, 300, 200);

  it('adds each edge its own distance', () => {
    sameRing(offsetOutline(straight(rectangle, 10)), box(-10, -10, 310, 210));
    sameRing(offsetOutline(straight(rectangle, [40, 10, 0, 15])), box(-15, -40, 310, 200));
    for (const edge of ['before', 'after'] as const)
      for (const kind of ['square', 'mirrored'] as const)
        sameRing(
          offsetOutline(straight(rectangle, [40, 10, 5, 15], { kind, edge })),
          box(-15, -40, 310, 205)
        );
    sameRing(
      offsetOutline(straight(rectangle, 10, { kind: 'blunt' })),
      points([0, -10], [300, -10], [310, 0], [310, 200], [300, 210], [0, 210], [-10, 200], [-10, 0])
    );
    sameRing(offsetOutline(straight(rectangle, -10)), box(10, 10, 290, 190));
    expect(offsetOutline(straight(rectangle, -100))).toBeNull();
    sameRing(offsetOutline(straight(rectangle, 0)), rectangle);
  });

  it('mitres a sharp corner up to its reach, then cuts it off', () => {
    const wedge = points([0, 0], [400, -100], [400, 100]);
    const sharp = offsetOutline(straight(wedge, 10))!;
    // Half the corner is atan(1/4): the tip reaches 10 / sin(14.04°) = 41.2, more than four times the distance.
    expect(boundingBox(sharp).minX).toBeCloseTo(-40, 2);
    expect(sharp).toHaveLength(4);
    const blunter = offsetOutline(straight(points([0, 0], [300, -100], [300, 100]), 10))!;
    expect(boundingBox(blunter).minX).toBeCloseTo(-10 * Math.sqrt(10), 2);
  });

  it('runs a narrower line on to meet the wider one, also beside its edge', () => {
    // Corner of 135° between a wide and a narrow strip.
    const outline = points([0, 0], [200, 0], [300, 100], [0, 100]);
    const cut = offsetOutline(straight(outline, [40, 10, 10, 10]))!;
    expect(isSimple(cut)).toBe(true);
    // The line 10 beside the slope meets y = −40 at x = 200 + 14.14 − 40.
    expect(cut.some((p) => Math.abs(p.x - 174.142) < 0.01 && Math.abs(p.y + 40) < 0.01)).toBe(true);
  });

  it('makes a step where two distances meet on a straight line', () => {
    const outline = points([0, 0], [100, 0], [200, 0], [200, 100], [0, 100]);
    sameRing(
      offsetOutline(straight(outline, [10, 30, 10, 10, 10])),
      points([-10, -10], [100, -10], [100, -30], [210, -30], [210, 110], [-10, 110])
    );
  });

  it('squares the strip that is sewn first', () => {
    // Interior corner of 60° at (200, 0): edge before along +x, edge after back up to the left.
    const outline = points([0, 0], [200, 0], [100, 173.205]);
    const corners: CornerJoin[] = [mitred, { kind: 'square', edge: 'before' }, mitred];
    const cut = offsetOutline(straight(outline, 10, corners))!;
    const run = 10 / Math.sin((120 * Math.PI) / 180);
    // It ends square to the lower edge, where this edge runs on to the line beside the slope.
    expect(cut.some((p) => Math.abs(p.x - 200 - run) < 0.002 && Math.abs(p.y + 10) < 0.002)).toBe(true);
    expect(cut.some((p) => Math.abs(p.x - 200 - run) < 0.002 && Math.abs(p.y) < 0.002)).toBe(true);
    // On an obtuse corner an ear is added, so that the ends of the two strips are even once sewn.
    const blunt = points([0, 0], [200, 0], [300, 173.205], [0, 173.205]);
    const eared = offsetOutline(
      straight(blunt, 10, [mitred, { kind: 'square', edge: 'before' }, mitred, mitred])
    )!;
    expect(isSimple(eared)).toBe(true);
    const ear = 10 / Math.sin((60 * Math.PI) / 180);
    expect(eared.some((p) => Math.abs(p.x - 200 - ear) < 0.002 && Math.abs(p.y + 10) < 0.002)).toBe(true);
    expect(eared.some((p) => Math.abs(p.x - 200 - ear) < 0.002 && Math.abs(p.y) < 0.002)).toBe(true);
  });

  it('mirrors the side at a turned hem, whichever way the side leans', () => {
    for (const lean of [60, -60]) {
      // Hem along y = 0, sides that lean out (flared) or in (pegged) towards it.
      const outline = points([0, 0], [400, 0], [400 - lean, 300], [lean, 300]);
      const cut = offsetOutline(
        straight(
          outline,
          [40, 10, 10, 10],
          [{ kind: 'mirrored', edge: 'after' }, { kind: 'mirrored', edge: 'before' }, mitred, mitred]
        )
      )!;
      expect(isSimple(cut)).toBe(true);
      // Folded up over y = 0, the hem's allowance lies exactly on the piece: every point of it has its image on the line.
      const below = cut.filter((p) => p.y < -0.01);
      expect(below).toHaveLength(2);
      for (const p of below) {
        expect(p.y).toBeCloseTo(-40, 2);
        expect(distanceTo(cut, { x: p.x, y: -p.y })).toBeLessThan(0.003);
      }
    }
  });

  it('follows curves, outward and inward, and closes bays tighter than the distance', () => {
    const disc = flatten(arcPath({ centre: { x: 0, y: 0 }, rx: 80, ry: 80, start: 0, sweep: 2 * Math.PI }));
    const ring = offsetOutline([{ points: disc, distance: 15, corner: mitred }])!;
    for (const p of ring) expect(Math.abs(Math.hypot(p.x, p.y) - 95)).toBeLessThan(0.06);
    const inner = offsetOutline([{ points: disc, distance: -15, corner: mitred }])!;
    for (const p of inner) expect(Math.abs(Math.hypot(p.x, p.y) - 65)).toBeLessThan(0.06);
    // A notch with a round end of radius 6 in the top of a rectangle; the distance is 10.
    const bite = flatten(arcPath({ centre: { x: 50, y: 60 }, rx: 6, ry: 6, start: 0, sweep: -Math.PI }));
    const outline = [
      ...points([0, 0], [100, 0], [100, 100], [56, 100]),
      ...bite,
      ...points([44, 100], [0, 100])
    ];
    sameRing(offsetOutline(straight(outline, 10)), box(-10, -10, 110, 110));
    // Wider than the strips: the bay stays, its round end a strip's width higher.
    const wide = flatten(arcPath({ centre: { x: 50, y: 50 }, rx: 30, ry: 30, start: 0, sweep: -Math.PI }));
    const bay = offsetOutline(
      straight(
        [...points([0, 0], [100, 0], [100, 100], [80, 100]), ...wide, ...points([20, 100], [0, 100])],
        10
      )
    )!;
    expect(isSimple(bay)).toBe(true);
    expect(distanceTo(bay, { x: 50, y: 30 })).toBeLessThan(0.06);
  });

  it('is simple, holds the outline, and keeps every edge its distance, for any distances', () => {
    fc.assert(
      fc.property(
        starOutline(24),
        fc.integer(),
        fc.constantFrom<CornerJoin['kind']>('mitred', 'square', 'mirrored', 'blunt'),
        (outline, seed, kind) => {
          const random = randomFrom(seed);
          const distances = outline.map(() => [0, 5, 10, 15, 25, 40][Math.floor(random() * 6)]!);
          const corners = outline.map((): CornerJoin =>
            kind === 'mitred' || kind === 'blunt'
              ? { kind }
              : { kind, edge: random() < 0.5 ? 'before' : 'after' }
          );
          const cut = offsetOutline(straight(outline, distances, corners))!;
          expect(cut).not.toBeNull();
          expect(isSimple(cut)).toBe(true);
          expect(area(cut)).toBeGreaterThan(0);
          for (const p of outline)
            expect(locate(cut, p) !== 'outside' || distanceTo(cut, p) < 0.002).toBe(true);
          if (kind === 'mirrored' || kind === 'mitred') return;
          // No treatment that only adds takes anything of a strip.
          outline.forEach((a, i) => {
            const b = outline[(i + 1) % outline.length]!;
            const length = Math.hypot(b.x - a.x, b.y - a.y);
            const n = { x: (b.y - a.y) / length, y: (a.x - b.x) / length };
            for (const t of [0, 0.25, 0.5, 1]) {
              const p = {
                x: a.x + (b.x - a.x) * t + n.x * distances[i]!,
                y: a.y + (b.y - a.y) * t + n.y * distances[i]!
              };
              expect(locate(cut, p) !== 'outside' || distanceTo(cut, p) < 0.003).toBe(true);
            }
          });
        }
      ),
      { seed: 71, numRuns: runs(400) }
    );
  });

  it('never thins the wider allowance along a shallow corner between two different ones', () => {
    // 12° at the corner, 10 mm beside 5 mm: run on, the narrow line would meet the wide one 23 mm along its edge.
    const radians = (12 * Math.PI) / 180;
    const far = { x: 100 + 100 * Math.cos(radians), y: 100 * Math.sin(radians) };
    const outline = [...points([0, 0], [100, 0]), far, ...points([100, 200], [0, 200])];
    for (const kind of ['square', 'mitred', 'blunt'] as const)
      for (const edge of ['before', 'after'] as const) {
        const corner: CornerJoin = kind === 'square' ? { kind, edge } : { kind };
        const cut = offsetOutline(
          straight(
            outline,
            outline.map((_, i) => (i === 0 ? 10 : 5)),
            outline.map(() => corner)
          )
        )!;
        for (const x of [10, 50, 80, 95]) expect(locate(cut, { x, y: -9.999 })).toBe('inside');
      }
  });

  it('says the same of a flipped outline', () => {
    fc.assert(
      fc.property(starOutline(16), fc.constantFrom(5, 10, 15), (outline, distance) => {
        const plain = offsetOutline(straight(outline, distance))!;
        const flipped = offsetOutline(
          straight(outline.map(({ x, y }) => ({ x, y: -y })).reverse(), distance)
        )!;
        expect(area(flipped)).toBeCloseTo(area(plain), 0);
      }),
      { seed: 72, numRuns: runs(60) }
    );
  });
});
