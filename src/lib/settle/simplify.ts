import type { Outline, Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';

/**
 * An outline of fewer corners that contains `outline`: a reflex corner is cut off, or an edge between two convex
 * corners is replaced by the corner in which its neighbours meet, the cheapest first, as long as no step
 * reaches farther than `tolerance`. Gives the outline back if the result would cross itself.
 */
export function outerSimplified(outline: Outline, tolerance: Millimetres): Outline {
  const points = outline.slice();
  for (;;) {
    let best = Infinity;
    let at = -1;
    let corner: Point | null = null;
    for (let i = 0; i < points.length && points.length > 4; i++) {
      const cut = reflexCut(points, i, tolerance);
      if (cut < best) {
        best = cut;
        at = i;
        corner = null;
      }
      const met = edgeMeeting(points, i, tolerance);
      if (met && met.cost < best) {
        best = met.cost;
        at = i;
        corner = met.point;
      }
    }
    if (at < 0) break;
    if (corner === null) points.splice(at, 1);
    else if (at + 1 < points.length) points.splice(at, 2, corner);
    else {
      points.splice(at, 1);
      points[0] = corner;
    }
  }
  return points.length < outline.length && isSimple(points) ? points : outline;
}

const cross = (o: Point, a: Point, b: Point) => (a.x - o.x) * (b.y - o.y) - (a.y - o.y) * (b.x - o.x);

/** The area that cutting off corner i adds; Infinity if it is convex or too deep. */
function reflexCut(points: readonly Point[], i: number, tolerance: number): number {
  const n = points.length;
  const p = points[(i + n - 1) % n]!;
  const q = points[(i + 1) % n]!;
  const turn = cross(p, points[i]!, q);
  if (turn > 0) return Infinity;
  const chord = Math.sqrt((q.x - p.x) ** 2 + (q.y - p.y) ** 2);
  return -turn <= tolerance * chord ? -turn / 2 : Infinity;
}

/** Where the neighbours of the edge after corner i meet outside it, and the area that adds. */
function edgeMeeting(
  points: readonly Point[],
  i: number,
  tolerance: number
): { point: Point; cost: number } | null {
  const n = points.length;
  const p = points[(i + n - 1) % n]!;
  const a = points[i]!;
  const b = points[(i + 1) % n]!;
  const q = points[(i + 2) % n]!;
  if (cross(p, a, b) <= 0 || cross(a, b, q) <= 0) return null;
  const ux = a.x - p.x;
  const uy = a.y - p.y;
  const vx = b.x - q.x;
  const vy = b.y - q.y;
  const across = ux * vy - uy * vx;
  // The lines must meet ahead of both: the two corners together turn by less than 180°.
  if (across >= 0) return null;
  const t = ((b.x - a.x) * vy - (b.y - a.y) * vx) / across;
  const point = { x: a.x + t * ux, y: a.y + t * uy };
  const twice = -cross(a, b, point);
  const length = Math.sqrt((b.x - a.x) ** 2 + (b.y - a.y) ** 2);
  return t > 0 && twice >= 0 && twice <= tolerance * length ? { point, cost: twice / 2 } : null;
}

/** Whether no two edges that are not neighbours meet. */
function isSimple(points: readonly Point[]): boolean {
  const n = points.length;
  for (let i = 0; i < n; i++) {
    const a = points[i]!;
    const b = points[(i + 1) % n]!;
    for (let j = i + 2; j < n; j++) {
      if (i === 0 && j === n - 1) continue;
      const c = points[j]!;
      const d = points[(j + 1) % n]!;
      if (cross(a, b, c) * cross(a, b, d) <= 0 && cross(c, d, a) * cross(c, d, b) <= 0) return false;
    }
  }
  return true;
}
