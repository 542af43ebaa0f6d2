import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  arcPath,
  endOf,
  endTangents,
  flatten,
  mapPath,
  pathLength,
  placeAt,
  reversed,
  splitAt,
  straightPath,
  type Path
} from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { points } from './outlines';
import { runs } from '../../runs';

const coordinate = fc.integer({ min: -500, max: 500 });
const point = fc.record({ x: coordinate, y: coordinate });
const paths: fc.Arbitrary<Path> = fc.record({
  from: point,
  segments: fc.array(
    fc.oneof(
      fc.record({ kind: fc.constant('line' as const), to: point }),
      fc.record({ kind: fc.constant('cubic' as const), c1: point, c2: point, to: point })
    ),
    { minLength: 1, maxLength: 4 }
  )
});

/** A curve's place straight from its definition. */
function bezier(from: Point, c1: Point, c2: Point, to: Point, t: number): Point {
  const s = 1 - t;
  const mix = (a: number, b: number, c: number, d: number) =>
    s * s * s * a + 3 * s * s * t * b + 3 * s * t * t * c + t * t * t * d;
  return { x: mix(from.x, c1.x, c2.x, to.x), y: mix(from.y, c1.y, c2.y, to.y) };
}

function polylineDistance(line: Point[], { x, y }: Point): number {
  return Math.min(
    ...line.slice(1).map((b, i) => {
      const a = line[i]!;
      const [dx, dy] = [b.x - a.x, b.y - a.y];
      const length = dx * dx + dy * dy;
      const t = length === 0 ? 0 : Math.min(1, Math.max(0, ((x - a.x) * dx + (y - a.y) * dy) / length));
      return Math.hypot(x - a.x - t * dx, y - a.y - t * dy);
    })
  );
}

describe('paths', () => {
  it('are flattened within the tolerance, with their ends kept', () => {
    fc.assert(
      fc.property(paths, fc.constantFrom(0.05, 1), (path, tolerance) => {
        const line = flatten(path, tolerance);
        expect(line[0]).toEqual(path.from);
        expect(line[line.length - 1]).toEqual(endOf(path));
        let from = path.from;
        for (const segment of path.segments) {
          for (let k = 0; k <= 40; k++) {
            const at =
              segment.kind === 'line' ? segment.to : bezier(from, segment.c1, segment.c2, segment.to, k / 40);
            expect(polylineDistance(line, at)).toBeLessThanOrEqual(tolerance + 1e-9);
          }
          from = segment.to;
        }
      }),
      { seed: 61, numRuns: runs(60) }
    );
  });

  it('are as long as their finest polyline, both ways', () => {
    fc.assert(
      fc.property(paths, (path) => {
        const line = flatten(path, 1e-5);
        const sum = line
          .slice(1)
          .reduce((total, b, i) => total + Math.hypot(b.x - line[i]!.x, b.y - line[i]!.y), 0);
        const length = pathLength(path);
        expect(length).toBeGreaterThanOrEqual(sum - 1e-6);
        expect(length).toBeLessThan(sum + 0.01);
        expect(pathLength(reversed(path))).toBeCloseTo(length, 6);
        expect(reversed(reversed(path))).toEqual(path);
      }),
      { seed: 62, numRuns: runs(60) }
    );
  });

  it('are walked and cut at a distance', () => {
    fc.assert(
      fc.property(paths, fc.double({ min: 0.01, max: 0.99, noNaN: true }), (path, share) => {
        const length = pathLength(path);
        if (length < 1) return;
        const distance = length * share;
        const [head, tail] = splitAt(path, distance);
        expect(pathLength(head)).toBeCloseTo(distance, 5);
        expect(pathLength(tail)).toBeCloseTo(length - distance, 5);
        const { point: at, tangent } = placeAt(path, distance);
        expect(endOf(head).x).toBeCloseTo(at.x, 6);
        expect(endOf(head).y).toBeCloseTo(at.y, 6);
        expect(Math.hypot(tangent.x, tangent.y)).toBeCloseTo(1, 9);
      }),
      { seed: 63, numRuns: runs(100) }
    );
  });

  it('say where and which way', () => {
    const path = straightPath(points([0, 0], [100, 0], [100, 50]));
    expect(pathLength(path)).toBe(150);
    expect(placeAt(path, 120)).toEqual({ point: { x: 100, y: 20 }, tangent: { x: 0, y: 1 } });
    expect(placeAt(path, 100)).toEqual({ point: { x: 100, y: 0 }, tangent: { x: 1, y: 0 } });
    expect(endTangents(path)).toEqual({ start: { x: 1, y: 0 }, end: { x: 0, y: 1 } });
    expect(() => placeAt(path, 150.1)).toThrow('150 mm long');
    expect(() => placeAt(path, -1)).toThrow(RangeError);
    expect(() => splitAt(path, 0)).toThrow(RangeError);
    const moved = mapPath(path, ({ x, y }) => ({ x: -y, y: x }));
    expect(endOf(moved)).toEqual({ x: -50, y: 100 });
  });

  it('have a direction where a handle lies on its end', () => {
    const path: Path = {
      from: { x: 0, y: 0 },
      segments: [{ kind: 'cubic', c1: { x: 0, y: 0 }, c2: { x: 50, y: 50 }, to: { x: 50, y: 50 } }]
    };
    expect(placeAt(path, 0).tangent.x).toBeCloseTo(Math.SQRT1_2, 6);
    expect(pathLength(path)).toBeCloseTo(Math.hypot(50, 50), 6);
  });

  it('stand for an arc within the tolerance', () => {
    for (const sweep of [0.1, Math.PI / 2, -Math.PI, 2 * Math.PI, 5]) {
      const path = arcPath({ centre: { x: 10, y: -20 }, rx: 500, ry: 500, start: 1, sweep }, 0.001);
      for (const { x, y } of flatten(path, 1e-4))
        expect(Math.abs(Math.hypot(x - 10, y + 20) - 500)).toBeLessThan(0.0011);
      expect(pathLength(path)).toBeCloseTo(500 * Math.abs(sweep), 2);
    }
    const ellipse = arcPath({
      centre: { x: 0, y: 0 },
      rx: 30,
      ry: 10,
      turn: Math.PI / 2,
      start: 0,
      sweep: Math.PI
    });
    expect(ellipse.from.x).toBeCloseTo(0, 9);
    expect(ellipse.from.y).toBeCloseTo(30, 9);
    expect(endOf(ellipse).y).toBeCloseTo(-30, 9);
    // Half the perimeter of an ellipse 30 by 10, by Ramanujan's second formula (from memory), good to 1e-3 here.
    const h = (20 / 40) ** 2;
    expect(pathLength(ellipse)).toBeCloseTo(
      ((Math.PI * 40) / 2) * (1 + (3 * h) / (10 + Math.sqrt(4 - 3 * h))),
      2
    );
  });
});
