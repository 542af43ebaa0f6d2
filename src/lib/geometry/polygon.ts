import { orient2d } from 'robust-predicates';
import type { Millimetres, SquareMillimetres } from '$lib/units/measure';
import type { Box, Outline, Point } from './point';

/*
 * What can be said of one outline. An outline is a closed polygon without a repeated last point; counter-clockwise
 * is positive. Signs are exact (robust predicates), measures are floating point.
 */

/** Signed area: positive counter-clockwise, negative clockwise, 0 for fewer than three points. */
export function area(outline: Outline): SquareMillimetres {
  const origin = outline[0];
  if (!origin) return 0;
  // Measured from the first point, so that a piece far from the origin loses no digits.
  let twice = 0;
  for (let i = 1; i + 1 < outline.length; i++) {
    const a = outline[i]!;
    const b = outline[i + 1]!;
    twice += (a.x - origin.x) * (b.y - origin.y) - (b.x - origin.x) * (a.y - origin.y);
  }
  return twice / 2;
}

/** Length once round the outline. */
export function perimeter(outline: Outline): Millimetres {
  let length = 0;
  outline.forEach((a, i) => {
    const b = outline[(i + 1) % outline.length]!;
    length += Math.hypot(b.x - a.x, b.y - a.y);
  });
  return length;
}

/** Centre of gravity of the surface; the mean of the points where the outline has no area. Throws when empty. */
export function centroid(outline: Outline): Point {
  const origin = outline[0];
  if (!origin) throw new RangeError('An outline without points has no centre');
  let twice = 0;
  let x = 0;
  let y = 0;
  for (let i = 1; i + 1 < outline.length; i++) {
    const ax = outline[i]!.x - origin.x;
    const ay = outline[i]!.y - origin.y;
    const bx = outline[i + 1]!.x - origin.x;
    const by = outline[i + 1]!.y - origin.y;
    const cross = ax * by - bx * ay;
    twice += cross;
    x += (ax + bx) * cross;
    y += (ay + by) * cross;
  }
  if (twice === 0) {
    const n = outline.length;
    return {
      x: outline.reduce((sum, p) => sum + p.x, 0) / n,
      y: outline.reduce((sum, p) => sum + p.y, 0) / n
    };
  }
  return { x: origin.x + x / (3 * twice), y: origin.y + y / (3 * twice) };
}

/** The smallest upright rectangle around `points`; inside out (+∞ to −∞) when there are none. */
export function boundingBox(points: Iterable<Point>): Box {
  let minX = Infinity;
  let minY = Infinity;
  let maxX = -Infinity;
  let maxY = -Infinity;
  for (const { x, y } of points) {
    if (x < minX) minX = x;
    if (x > maxX) maxX = x;
    if (y < minY) minY = y;
    if (y > maxY) maxY = y;
  }
  return { minX, minY, maxX, maxY };
}

/** `box` with `margin` added all round. */
export function growBox(box: Box, margin: Millimetres): Box {
  return {
    minX: box.minX - margin,
    minY: box.minY - margin,
    maxX: box.maxX + margin,
    maxY: box.maxY + margin
  };
}

/** Whether two boxes share at least a point. */
export function boxesMeet(a: Box, b: Box): boolean {
  return a.minX <= b.maxX && b.minX <= a.maxX && a.minY <= b.maxY && b.minY <= a.maxY;
}

/** Exact sign of where `c` lies: positive left of a → b, negative right of it, 0 on the line. */
export function side(ax: number, ay: number, bx: number, by: number, cx: number, cy: number): number {
  // The library's sign is for y pointing down.
  return -orient2d(ax, ay, bx, by, cx, cy);
}

export type Whereabouts = 'inside' | 'edge' | 'outside';

/** Where `point` lies with respect to `outline` (either direction, even-odd where it crosses itself); exact. */
export function locate(outline: Outline, point: Point): Whereabouts {
  const { x, y } = point;
  let inside = false;
  for (let i = 0, j = outline.length - 1; i < outline.length; j = i++) {
    const a = outline[j]!;
    const b = outline[i]!;
    if (a.y === b.y) {
      if (a.y === y && x >= Math.min(a.x, b.x) && x <= Math.max(a.x, b.x)) return 'edge';
      continue;
    }
    if (y < Math.min(a.y, b.y) || y > Math.max(a.y, b.y)) continue;
    const where = side(a.x, a.y, b.x, b.y, x, y);
    if (where === 0) return 'edge';
    // Half open: an edge owns its lower end, so that a ray through a corner counts once.
    if (a.y > y !== b.y > y && where > 0 === b.y > a.y) inside = !inside;
  }
  return inside ? 'inside' : 'outside';
}

/** Whether `point` lies in `outline` or on it; exact. */
export function contains(outline: Outline, point: Point): boolean {
  return locate(outline, point) !== 'outside';
}

/** `outline` the way round that has a positive area. */
export function counterClockwise(outline: Outline): Outline {
  return area(outline) < 0 ? outline.toReversed() : outline;
}

/** `outline` without points that repeat the one before them, the closing one included. */
export function withoutRepeats(outline: Outline): Point[] {
  return outline.filter((point, i) => {
    const before = outline[(i + outline.length - 1) % outline.length]!;
    return outline.length === 1 || point.x !== before.x || point.y !== before.y;
  });
}

/** One place where the straight lines a → b and c → d meet, as segments; null when they do not. Exact in the yes or no. */
export function meetingPoint(a: Point, b: Point, c: Point, d: Point): Point | null {
  const sc = side(a.x, a.y, b.x, b.y, c.x, c.y);
  const sd = side(a.x, a.y, b.x, b.y, d.x, d.y);
  if ((sc > 0 && sd > 0) || (sc < 0 && sd < 0)) return null;
  const sa = side(c.x, c.y, d.x, d.y, a.x, a.y);
  const sb = side(c.x, c.y, d.x, d.y, b.x, b.y);
  if ((sa > 0 && sb > 0) || (sa < 0 && sb < 0)) return null;
  if (sc === 0 && sd === 0) {
    // On one line: they meet where the extents overlap.
    const minX = Math.max(Math.min(a.x, b.x), Math.min(c.x, d.x));
    const maxX = Math.min(Math.max(a.x, b.x), Math.max(c.x, d.x));
    const minY = Math.max(Math.min(a.y, b.y), Math.min(c.y, d.y));
    const maxY = Math.min(Math.max(a.y, b.y), Math.max(c.y, d.y));
    if (minX > maxX || minY > maxY) return null;
    return [a, b, c, d].find((p) => p.x >= minX && p.x <= maxX && p.y >= minY && p.y <= maxY) ?? null;
  }
  if (sc === 0) return c;
  if (sd === 0) return d;
  if (sa === 0) return a;
  if (sb === 0) return b;
  const t = sa / (sa - sb);
  return { x: a.x + (b.x - a.x) * t, y: a.y + (b.y - a.y) * t };
}

/** A place where an outline meets itself, and the two edges (numbered by their first point) that meet there. */
export interface SelfCrossing {
  readonly at: Point;
  readonly edges: readonly [number, number];
}

/**
 * Every pair of edges of `outline` that meets elsewhere than at a shared corner, or that folds back on itself there.
 * Repeated points are no crossing. At most `most` are looked for.
 */
export function selfCrossings(outline: Outline, most = Infinity): SelfCrossing[] {
  const n = outline.length;
  const real: number[] = [];
  for (let i = 0; i < n; i++) {
    const a = outline[i]!;
    const b = outline[(i + 1) % n]!;
    if (a.x !== b.x || a.y !== b.y) real.push(i);
  }
  const rank = new Map(real.map((edge, position) => [edge, position]));
  const start = (edge: number) => outline[edge]!;
  const end = (edge: number) => outline[(edge + 1) % n]!;
  const left = (edge: number) => Math.min(start(edge).x, end(edge).x);
  const right = (edge: number) => Math.max(start(edge).x, end(edge).x);
  const found: SelfCrossing[] = [];

  const meet = (first: number, second: number): Point | null => {
    const gap = rank.get(second)! - rank.get(first)!;
    const follows = gap === 1;
    const precedes = gap === real.length - 1;
    const [a, b, c, d] = [start(first), end(first), start(second), end(second)];
    if (follows || precedes) {
      // Neighbours share a corner; they may only fold back over each other there.
      const [before, corner, after] = follows ? [a, b, d] : [c, a, b];
      const straight = side(before.x, before.y, corner.x, corner.y, after.x, after.y) === 0;
      const forward =
        (corner.x - before.x) * (after.x - corner.x) + (corner.y - before.y) * (after.y - corner.y) > 0;
      return straight && !forward ? corner : null;
    }
    return meetingPoint(a, b, c, d);
  };

  let active: number[] = [];
  for (const edge of real.toSorted((p, q) => left(p) - left(q))) {
    active = active.filter((other) => right(other) >= left(edge));
    const low = Math.min(start(edge).y, end(edge).y);
    const high = Math.max(start(edge).y, end(edge).y);
    for (const other of active) {
      if (Math.max(start(other).y, end(other).y) < low || Math.min(start(other).y, end(other).y) > high)
        continue;
      const edges: [number, number] = edge < other ? [edge, other] : [other, edge];
      const at = meet(edges[0], edges[1]);
      if (!at) continue;
      found.push({ at, edges });
      if (found.length >= most) return found;
    }
    active.push(edge);
  }
  return found;
}

/** Whether `outline` encloses a surface and nowhere meets itself. */
export function isSimple(outline: Outline): boolean {
  return withoutRepeats(outline).length >= 3 && area(outline) !== 0 && selfCrossings(outline, 1).length === 0;
}
