import Flatbush from 'flatbush';
import { orient2d } from 'robust-predicates';
import type { Point } from '$lib/geometry/point';

/** How many pairs of lines an outline may need compared before it is called too tangled. */
const MOST_PAIRS = 3_000_000;

export type SelfContact =
  | { kind: 'clear' }
  /** It crosses itself; the first place. */
  | { kind: 'crosses'; at: Point }
  /** It touches itself without crossing: a border walked twice, or a corner on another edge. */
  | { kind: 'touches'; at: Point }
  | { kind: 'tangled' };

const side = (a: Point, b: Point, c: Point): number => Math.sign(-orient2d(a.x, a.y, b.x, b.y, c.x, c.y));

/** Whether c, known to be on the line a–b, lies between a and b. */
function between(a: Point, b: Point, c: Point): boolean {
  return (
    Math.min(a.x, b.x) <= c.x &&
    c.x <= Math.max(a.x, b.x) &&
    Math.min(a.y, b.y) <= c.y &&
    c.y <= Math.max(a.y, b.y)
  );
}

/** Whether two ways through one place cross there: their arms alternate around it. */
function passesThrough(at: Point, a: readonly [Point, Point], b: readonly [Point, Point]): boolean {
  const angle = (p: Point): number => Math.atan2(p.y - at.y, p.x - at.x);
  const base = angle(a[0]);
  const turn = (p: Point): number => (((angle(p) - base) % (2 * Math.PI)) + 2 * Math.PI) % (2 * Math.PI);
  const [end, c, d] = [turn(a[1]), turn(b[0]), turn(b[1])];
  const near = (x: number, y: number): boolean => Math.abs(x - y) < 1e-9;
  if ([c, d].some((x) => near(x, 0) || near(x, end) || near(x, 2 * Math.PI))) return false;
  return c < end !== d < end;
}

/**
 * Whether a closed polygon (no repeated last point) meets itself, with the first place found. Signs are exact.
 */
export function selfContact(polygon: readonly Point[]): SelfContact {
  const n = polygon.length;
  if (n < 4) return { kind: 'clear' };
  const at = (i: number): Point => polygon[((i % n) + n) % n]!;
  const index = new Flatbush(n);
  for (let i = 0; i < n; i += 1) {
    const [a, b] = [at(i), at(i + 1)];
    index.add(Math.min(a.x, b.x), Math.min(a.y, b.y), Math.max(a.x, b.x), Math.max(a.y, b.y));
  }
  index.finish();
  let pairs = 0;
  let touch: Point | null = null;
  for (let i = 0; i < n; i += 1) {
    const [a, b] = [at(i), at(i + 1)];
    const found = index.search(
      Math.min(a.x, b.x),
      Math.min(a.y, b.y),
      Math.max(a.x, b.x),
      Math.max(a.y, b.y),
      (j) => j > i
    );
    pairs += found.length;
    if (pairs > MOST_PAIRS) return { kind: 'tangled' };
    for (const j of found) {
      const [c, d] = [at(j), at(j + 1)];
      const next = j === i + 1;
      const last = i === 0 && j === n - 1;
      if (next || last) {
        // Neighbours share a corner; they meet further only where the outline turns straight back.
        const [p, q, r] = next ? [a, b, d] : [c, d, b];
        if (side(p, q, r) === 0 && (q.x - p.x) * (r.x - q.x) + (q.y - p.y) * (r.y - q.y) < 0) touch ??= q;
        continue;
      }
      const [s1, s2, s3, s4] = [side(a, b, c), side(a, b, d), side(c, d, a), side(c, d, b)];
      if (s1 * s2 < 0 && s3 * s4 < 0) {
        const share = crossingShare(a, b, c, d);
        return { kind: 'crosses', at: { x: a.x + (b.x - a.x) * share, y: a.y + (b.y - a.y) * share } };
      }
      const meeting = (
        [
          [s1, a, b, c],
          [s2, a, b, d],
          [s3, c, d, a],
          [s4, c, d, b]
        ] as const
      ).find(([s, p, q, r]) => s === 0 && between(p, q, r))?.[3];
      if (!meeting) continue;
      touch ??= meeting;
      if (passesThrough(meeting, arms(meeting, i, at), arms(meeting, j, at)))
        return { kind: 'crosses', at: meeting };
    }
  }
  return touch ? { kind: 'touches', at: touch } : { kind: 'clear' };
}

function crossingShare(a: Point, b: Point, c: Point, d: Point): number {
  const [rx, ry, sx, sy] = [b.x - a.x, b.y - a.y, d.x - c.x, d.y - c.y];
  return ((c.x - a.x) * sy - (c.y - a.y) * sx) / (rx * sy - ry * sx);
}

/** Where the line i of a polygon comes from and goes to, seen from a place on it. */
function arms(place: Point, i: number, at: (i: number) => Point): readonly [Point, Point] {
  const same = (p: Point): boolean => p.x === place.x && p.y === place.y;
  if (same(at(i))) return [at(i - 1), at(i + 1)];
  if (same(at(i + 1))) return [at(i), at(i + 2)];
  return [at(i), at(i + 1)];
}
