import type { Millimetres } from '$lib/units/measure';
import type { Point } from './point';

/*
 * Paths of straight stretches and cubic Bézier curves: how long they are, where a distance along them falls, and the straight
 * polyline that stands for them within a tolerance. Seams are walked on these curves; everything laid is flattened.
 */

export type Segment =
  | { readonly kind: 'line'; readonly to: Point }
  | { readonly kind: 'cubic'; readonly c1: Point; readonly c2: Point; readonly to: Point };

export interface Path {
  readonly from: Point;
  readonly segments: readonly Segment[];
}

/** How far a flattened curve may leave the curve. */
export const FLATNESS: Millimetres = 0.05;

const between = (a: Point, b: Point, t: number): Point => ({
  x: a.x + (b.x - a.x) * t,
  y: a.y + (b.y - a.y) * t
});

function distanceToSegment(p: Point, a: Point, b: Point): number {
  const dx = b.x - a.x;
  const dy = b.y - a.y;
  const length = dx * dx + dy * dy;
  const t = length === 0 ? 0 : Math.min(1, Math.max(0, ((p.x - a.x) * dx + (p.y - a.y) * dy) / length));
  return Math.hypot(p.x - a.x - t * dx, p.y - a.y - t * dy);
}

/** A cubic from `from` cut at parameter t. */
function halves(from: Point, c1: Point, c2: Point, to: Point, t: number) {
  const a = between(from, c1, t);
  const b = between(c1, c2, t);
  const c = between(c2, to, t);
  const ab = between(a, b, t);
  const bc = between(b, c, t);
  const at = between(ab, bc, t);
  return { first: [a, ab, at] as const, second: [bc, c, to] as const, at };
}

function flattenCubic(
  from: Point,
  c1: Point,
  c2: Point,
  to: Point,
  tolerance: number,
  into: Point[],
  depth = 0
): void {
  // A curve is no farther from its chord than three quarters of what its handles are: the distance to the chord is convex, the
  // ends lie on it, and the handles' weights never exceed 3/4 together.
  const reach = 0.75 * Math.max(distanceToSegment(c1, from, to), distanceToSegment(c2, from, to));
  if (reach <= tolerance || depth >= 20) {
    into.push(to);
    return;
  }
  const { first, second, at } = halves(from, c1, c2, to, 0.5);
  flattenCubic(from, first[0], first[1], at, tolerance, into, depth + 1);
  flattenCubic(at, second[0], second[1], to, tolerance, into, depth + 1);
}

/** The polyline of `path` within `tolerance`, both ends included; straight stretches keep their ends and gain no point. */
export function flatten(path: Path, tolerance: Millimetres = FLATNESS): Point[] {
  if (!(tolerance > 0)) throw new RangeError(`A curve can't be flattened within ${tolerance} mm`);
  const points: Point[] = [path.from];
  let from = path.from;
  for (const segment of path.segments) {
    if (segment.kind === 'line') points.push(segment.to);
    else flattenCubic(from, segment.c1, segment.c2, segment.to, tolerance, points);
    from = segment.to;
  }
  return points;
}

/** Where the path ends. */
export function endOf(path: Path): Point {
  return path.segments[path.segments.length - 1]?.to ?? path.from;
}

/** The same path from its end to its start. */
export function reversed(path: Path): Path {
  const starts = [path.from, ...path.segments.map((segment) => segment.to)];
  const segments = path.segments.map((segment, i): Segment => {
    const to = starts[i]!;
    return segment.kind === 'line'
      ? { kind: 'line', to }
      : { kind: 'cubic', c1: segment.c2, c2: segment.c1, to };
  });
  return { from: endOf(path), segments: segments.toReversed() };
}

/** The path with every point, handles included, sent through `move`; exact for turns, moves and mirrors. */
export function mapPath(path: Path, move: (point: Point) => Point): Path {
  return {
    from: move(path.from),
    segments: path.segments.map((segment): Segment =>
      segment.kind === 'line'
        ? { kind: 'line', to: move(segment.to) }
        : { kind: 'cubic', c1: move(segment.c1), c2: move(segment.c2), to: move(segment.to) }
    )
  };
}

/** First derivative of a segment at t. */
function derivative(from: Point, segment: Segment, t: number): Point {
  if (segment.kind === 'line') return { x: segment.to.x - from.x, y: segment.to.y - from.y };
  const { c1, c2, to } = segment;
  const s = 1 - t;
  const part = (a: number, b: number, c: number, d: number) =>
    3 * (s * s * (b - a) + 2 * s * t * (c - b) + t * t * (d - c));
  return { x: part(from.x, c1.x, c2.x, to.x), y: part(from.y, c1.y, c2.y, to.y) };
}

// Gauss-Legendre, eight places and weights on −1 … 1 (Abramowitz & Stegun, table 25.4; from memory, proven by the tests).
const places = [0.1834346424956498, 0.525532409916329, 0.7966664774136267, 0.9602898564975363];
const weights = [0.362683783378362, 0.3137066458778873, 0.2223810344533745, 0.1012285362903763];

function gauss(from: Point, segment: Segment, t0: number, t1: number): number {
  const middle = (t0 + t1) / 2;
  const half = (t1 - t0) / 2;
  let sum = 0;
  places.forEach((place, i) => {
    const left = derivative(from, segment, middle - half * place);
    const right = derivative(from, segment, middle + half * place);
    sum += weights[i]! * (Math.hypot(left.x, left.y) + Math.hypot(right.x, right.y));
  });
  return sum * half;
}

/** Length of a segment between two parameters, halved until two rules agree within 1e-8 mm. */
function arcLength(from: Point, segment: Segment, t0: number, t1: number, depth = 0): number {
  if (segment.kind === 'line') return Math.hypot(segment.to.x - from.x, segment.to.y - from.y) * (t1 - t0);
  const whole = gauss(from, segment, t0, t1);
  const middle = (t0 + t1) / 2;
  const parts = gauss(from, segment, t0, middle) + gauss(from, segment, middle, t1);
  if (Math.abs(whole - parts) < 1e-8 || depth >= 20) return parts;
  return arcLength(from, segment, t0, middle, depth + 1) + arcLength(from, segment, middle, t1, depth + 1);
}

/** Length of the path, along its curves, within about 1e-7 mm. */
export function pathLength(path: Path): Millimetres {
  let from = path.from;
  let length = 0;
  for (const segment of path.segments) {
    length += arcLength(from, segment, 0, 1);
    from = segment.to;
  }
  return length;
}

interface Spot {
  readonly index: number;
  readonly from: Point;
  readonly t: number;
}

/** The segment and parameter at `distance` along the path. */
function spotAt(path: Path, distance: Millimetres): Spot {
  let rest = distance;
  let from = path.from;
  for (let index = 0; index < path.segments.length; index++) {
    const segment = path.segments[index]!;
    const length = arcLength(from, segment, 0, 1);
    const last = index === path.segments.length - 1;
    if (rest <= length || (last && rest <= length + 1e-6)) {
      return { index, from, t: parameterAt(from, segment, Math.min(rest, length), length) };
    }
    rest -= length;
    from = segment.to;
  }
  throw new RangeError(`The path is ${pathLength(path)} mm long; there is no place at ${distance} mm`);
}

function parameterAt(from: Point, segment: Segment, distance: number, length: number): number {
  if (length === 0 || distance <= 0) return 0;
  if (distance >= length) return 1;
  if (segment.kind === 'line') return distance / length;
  let low = 0;
  let high = 1;
  let t = distance / length;
  for (let step = 0; step < 60; step++) {
    const excess = arcLength(from, segment, 0, t) - distance;
    if (Math.abs(excess) < 1e-9) break;
    if (excess > 0) high = t;
    else low = t;
    const speed = derivative(from, segment, t);
    const next = t - excess / Math.hypot(speed.x, speed.y);
    // Newton's step where it stays between the brackets, else their middle.
    t = next > low && next < high ? next : (low + high) / 2;
  }
  return t;
}

function pointOf(from: Point, segment: Segment, t: number): Point {
  return segment.kind === 'line'
    ? between(from, segment.to, t)
    : halves(from, segment.c1, segment.c2, segment.to, t).at;
}

/** Unit tangent; where a handle lies on its end the speed is nought, and the direction a little farther on counts. */
function tangentOf(from: Point, segment: Segment, t: number): Point {
  for (const nudge of [0, 1e-6, 1e-4, 1e-2, 0.5]) {
    const { x, y } = derivative(from, segment, t < 0.5 ? t + nudge : t - nudge);
    const size = Math.hypot(x, y);
    if (size > 1e-9) return { x: x / size, y: y / size };
  }
  return { x: 1, y: 0 };
}

export interface PathPlace {
  readonly point: Point;
  /** Unit vector along the path. */
  readonly tangent: Point;
}

/**
 * The place at `distance` along the path and the direction there; at a joint, that of the stretch before it. Throws a
 * RangeError outside 0 … length.
 */
export function placeAt(path: Path, distance: Millimetres): PathPlace {
  if (!(distance >= 0)) throw new RangeError(`There is no place at ${distance} mm along a path`);
  const { index, from, t } = spotAt(path, distance);
  const segment = path.segments[index]!;
  return { point: pointOf(from, segment, t), tangent: tangentOf(from, segment, t) };
}

/** Unit tangents at the start and at the end of the path. */
export function endTangents(path: Path): { readonly start: Point; readonly end: Point } {
  const last = path.segments.length - 1;
  const lastFrom = last > 0 ? path.segments[last - 1]!.to : path.from;
  return {
    start: tangentOf(path.from, path.segments[0]!, 0),
    end: tangentOf(lastFrom, path.segments[last]!, 1)
  };
}

/** The path cut in two at `distance`; the curves stay what they are. Throws a RangeError unless 0 < distance < length. */
export function splitAt(path: Path, distance: Millimetres): [Path, Path] {
  const length = pathLength(path);
  if (!(distance > 0 && distance < length))
    throw new RangeError(`A path of ${length} mm can't be cut in two at ${distance} mm`);
  const { index, from, t } = spotAt(path, distance);
  const segment = path.segments[index]!;
  const before = path.segments.slice(0, index);
  const after = path.segments.slice(index + 1);
  if (t >= 1)
    return [
      { from: path.from, segments: [...before, segment] },
      { from: segment.to, segments: after }
    ];
  if (segment.kind === 'line') {
    const at = between(from, segment.to, t);
    return [
      { from: path.from, segments: [...before, { kind: 'line', to: at }] },
      { from: at, segments: [segment, ...after] }
    ];
  }
  const { first, second, at } = halves(from, segment.c1, segment.c2, segment.to, t);
  return [
    { from: path.from, segments: [...before, { kind: 'cubic', c1: first[0], c2: first[1], to: at }] },
    { from: at, segments: [{ kind: 'cubic', c1: second[0], c2: second[1], to: second[2] }, ...after] }
  ];
}

/** A straight path through `points`, at least two. */
export function straightPath(points: readonly Point[]): Path {
  if (points.length < 2) throw new RangeError(`A path needs two points, got ${points.length}`);
  return { from: points[0]!, segments: points.slice(1).map((to): Segment => ({ kind: 'line', to })) };
}

export interface EllipticArc {
  readonly centre: Point;
  /** Half axes; equal for a circle. */
  readonly rx: Millimetres;
  readonly ry: Millimetres;
  /** Turn of the first half axis against +x, radians counter-clockwise. */
  readonly turn?: number;
  /** Where it starts, as the angle of the ellipse's own parameter, radians. */
  readonly start: number;
  /** How far it goes, radians; counter-clockwise positive. */
  readonly sweep: number;
}

/**
 * An arc as a path of cubics that leaves it by no more than `tolerance`. Over an angle θ the usual handle length
 * 4/3·tan(θ/4) errs by at most 4/27·sin⁶(θ/4)/cos²(θ/4) of the radius (Goldapp 1991, from memory; proven by the tests).
 */
export function arcPath(arc: EllipticArc, tolerance: Millimetres = 1e-4): Path {
  const { centre, rx, ry, turn = 0, start, sweep } = arc;
  const radius = Math.max(Math.abs(rx), Math.abs(ry));
  const error = (angle: number) => ((4 / 27) * Math.sin(angle / 4) ** 6) / Math.cos(angle / 4) ** 2;
  let count = Math.max(1, Math.ceil(Math.abs(sweep) / (Math.PI / 2) - 1e-9));
  while (count < 1000 && radius * error(Math.abs(sweep) / count) > tolerance) count++;
  const step = sweep / count;
  const handle = (4 / 3) * Math.tan(step / 4);
  const cos = Math.cos(turn);
  const sin = Math.sin(turn);
  const at = (x: number, y: number): Point => ({
    x: centre.x + x * rx * cos - y * ry * sin,
    y: centre.y + x * rx * sin + y * ry * cos
  });
  const segments = Array.from({ length: count }, (_, i): Segment => {
    const [a, b] = [start + i * step, start + (i + 1) * step];
    const [ca, sa, cb, sb] = [Math.cos(a), Math.sin(a), Math.cos(b), Math.sin(b)];
    return {
      kind: 'cubic',
      c1: at(ca - handle * sa, sa + handle * ca),
      c2: at(cb + handle * sb, sb - handle * cb),
      to: at(cb, sb)
    };
  });
  return { from: at(Math.cos(start), Math.sin(start)), segments };
}
