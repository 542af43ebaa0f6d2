import type { Box, Point } from '$lib/geometry/point';
import type { Path, Segment } from '$lib/pattern/panel';
import type { Millimetres, SquareMillimetres } from '$lib/units/measure';

/** How far a flattened outline may leave its curve while an import is judged. */
export const JUDGED_WITHIN: Millimetres = 0.05;

export function distance(a: Point, b: Point): Millimetres {
  return Math.hypot(a.x - b.x, a.y - b.y);
}

export function endOf(path: Path): Point {
  return path.segments[path.segments.length - 1]?.to ?? path.from;
}

/** The point of a stretch from `from` at the parameter 0 ≤ t ≤ 1. */
export function pointOn(from: Point, segment: Segment, t: number): Point {
  if (segment.kind === 'line')
    return { x: from.x + (segment.to.x - from.x) * t, y: from.y + (segment.to.y - from.y) * t };
  const u = 1 - t;
  const [a, b, c, d] = [u * u * u, 3 * u * u * t, 3 * u * t * t, t * t * t];
  return {
    x: a * from.x + b * segment.c1.x + c * segment.c2.x + d * segment.to.x,
    y: a * from.y + b * segment.c1.y + c * segment.c2.y + d * segment.to.y
  };
}

/** A stretch cut in two at the parameter t (de Casteljau: exact for curves). */
export function splitSegment(from: Point, segment: Segment, t: number): [Segment, Segment] {
  const middle = pointOn(from, segment, t);
  if (segment.kind === 'line')
    return [
      { kind: 'line', to: middle },
      { kind: 'line', to: segment.to }
    ];
  const mix = (a: Point, b: Point): Point => ({ x: a.x + (b.x - a.x) * t, y: a.y + (b.y - a.y) * t });
  const p = mix(from, segment.c1);
  const q = mix(segment.c1, segment.c2);
  const r = mix(segment.c2, segment.to);
  return [
    { kind: 'cubic', c1: p, c2: mix(p, q), to: middle },
    { kind: 'cubic', c1: mix(q, r), c2: r, to: segment.to }
  ];
}

/** The same path walked the other way. */
export function reversed(path: Path): Path {
  const starts = [path.from, ...path.segments.map((segment) => segment.to)];
  const segments = path.segments.map((segment, i): Segment =>
    segment.kind === 'line'
      ? { kind: 'line', to: starts[i]! }
      : { kind: 'cubic', c1: segment.c2, c2: segment.c1, to: starts[i]! }
  );
  return { from: endOf(path), segments: segments.reverse() };
}

/** How many straight steps keep a curve within `tolerance` of it (its second differences bound the error). */
function steps(from: Point, segment: Segment, tolerance: Millimetres): number {
  if (segment.kind === 'line') return 1;
  const bend = Math.max(
    Math.hypot(from.x - 2 * segment.c1.x + segment.c2.x, from.y - 2 * segment.c1.y + segment.c2.y),
    Math.hypot(segment.c1.x - 2 * segment.c2.x + segment.to.x, segment.c1.y - 2 * segment.c2.y + segment.to.y)
  );
  return Math.max(1, Math.min(256, Math.ceil(Math.sqrt((0.75 * bend) / tolerance))));
}

/** The points of a path, curves flattened within `tolerance` (at most 256 steps a curve); the last point included. */
export function flatten(path: Path, tolerance: Millimetres = JUDGED_WITHIN): Point[] {
  const points: Point[] = [path.from];
  let from: Point = path.from;
  for (const segment of path.segments) {
    const count = steps(from, segment, tolerance);
    for (let i = 1; i < count; i += 1) points.push(pointOn(from, segment, i / count));
    points.push(segment.to);
    from = segment.to;
  }
  return points;
}

/** The length along a path, curves by their flattened form. */
export function pathLength(path: Path): Millimetres {
  const points = flatten(path, 0.005);
  let length = 0;
  for (let i = 1; i < points.length; i += 1) length += distance(points[i - 1]!, points[i]!);
  return length;
}

/** Abscissae and weights of Gauss's rule of three points on 0 … 1: exact for the area under a cubic curve. */
const GAUSS = [
  [0.5 - Math.sqrt(0.15), 5 / 18],
  [0.5, 8 / 18],
  [0.5 + Math.sqrt(0.15), 5 / 18]
] as const;

/** The signed area of a closed path, curves exact; counter-clockwise is positive (y up). */
export function signedArea(path: Path): SquareMillimetres {
  // Measured from the first point, so that a shape far from the origin loses no digits.
  const origin = path.from;
  let twice = 0;
  let from: Point = origin;
  for (const segment of path.segments) {
    const [x0, y0] = [from.x - origin.x, from.y - origin.y];
    const [x3, y3] = [segment.to.x - origin.x, segment.to.y - origin.y];
    if (segment.kind === 'line') twice += x0 * y3 - x3 * y0;
    else {
      const [x1, y1] = [segment.c1.x - origin.x, segment.c1.y - origin.y];
      const [x2, y2] = [segment.c2.x - origin.x, segment.c2.y - origin.y];
      for (const [t, weight] of GAUSS) {
        const u = 1 - t;
        const [a, b, c, d] = [u * u * u, 3 * u * u * t, 3 * u * t * t, t * t * t];
        const [e, f, g] = [3 * u * u, 6 * u * t, 3 * t * t];
        const x = a * x0 + b * x1 + c * x2 + d * x3;
        const y = a * y0 + b * y1 + c * y2 + d * y3;
        const dx = e * (x1 - x0) + f * (x2 - x1) + g * (x3 - x2);
        const dy = e * (y1 - y0) + f * (y2 - y1) + g * (y3 - y2);
        twice += weight * (x * dy - y * dx);
      }
    }
    from = segment.to;
  }
  return twice / 2;
}

/** The box of some points; an empty list has the box of the origin. */
export function boxOf(points: readonly Point[]): Box {
  let [minX, minY, maxX, maxY] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const { x, y } of points) {
    if (x < minX) minX = x;
    if (x > maxX) maxX = x;
    if (y < minY) minY = y;
    if (y > maxY) maxY = y;
  }
  return points.length === 0 ? { minX: 0, minY: 0, maxX: 0, maxY: 0 } : { minX, minY, maxX, maxY };
}

/** Where a cubic turns back along one axis: the parameters between 0 and 1. */
function extremes(p0: number, p1: number, p2: number, p3: number): number[] {
  const a = -p0 + 3 * p1 - 3 * p2 + p3;
  const b = 2 * (p0 - 2 * p1 + p2);
  const c = p1 - p0;
  if (Math.abs(a) < 1e-12) return Math.abs(b) < 1e-12 ? [] : [-c / b].filter((t) => t > 0 && t < 1);
  const root = b * b - 4 * a * c;
  if (root < 0) return [];
  return [(-b + Math.sqrt(root)) / (2 * a), (-b - Math.sqrt(root)) / (2 * a)].filter((t) => t > 0 && t < 1);
}

/** The exact box of a path, curves by their extremes. */
export function pathBox(path: Path): Box {
  const points: Point[] = [path.from];
  let from: Point = path.from;
  for (const segment of path.segments) {
    if (segment.kind === 'cubic') {
      const { c1, c2, to } = segment;
      for (const t of [...extremes(from.x, c1.x, c2.x, to.x), ...extremes(from.y, c1.y, c2.y, to.y)])
        points.push(pointOn(from, segment, t));
    }
    points.push(segment.to);
    from = segment.to;
  }
  return boxOf(points);
}

/** Whether a point lies inside a polygon (even-odd; on the border either answer). */
export function isInside(point: Point, polygon: readonly Point[]): boolean {
  let inside = false;
  for (let i = 0, j = polygon.length - 1; i < polygon.length; j = i, i += 1) {
    const a = polygon[i]!;
    const b = polygon[j]!;
    if (a.y > point.y !== b.y > point.y && point.x < ((b.x - a.x) * (point.y - a.y)) / (b.y - a.y) + a.x)
      inside = !inside;
  }
  return inside;
}

/** The point of the straight line a–b nearest to `point`, and how far along it lies (0 … 1). */
export function nearestOnLine(point: Point, a: Point, b: Point): { at: Point; share: number } {
  const [dx, dy] = [b.x - a.x, b.y - a.y];
  const square = dx * dx + dy * dy;
  const share =
    square === 0 ? 0 : Math.min(1, Math.max(0, ((point.x - a.x) * dx + (point.y - a.y) * dy) / square));
  return { at: { x: a.x + share * dx, y: a.y + share * dy }, share };
}

/** How far `point` is from a polyline, and how far along the polyline its nearest point lies. */
export function nearestOnPolyline(
  point: Point,
  polyline: readonly Point[]
): { distance: Millimetres; along: Millimetres; at: Point } {
  let best = { distance: Infinity, along: 0, at: polyline[0] ?? point };
  let walked = 0;
  for (let i = 1; i < polyline.length; i += 1) {
    const [a, b] = [polyline[i - 1]!, polyline[i]!];
    const length = distance(a, b);
    const { at, share } = nearestOnLine(point, a, b);
    const away = distance(point, at);
    if (away < best.distance) best = { distance: away, along: walked + share * length, at };
    walked += length;
  }
  return best;
}
