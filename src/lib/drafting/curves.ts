import { pathLength, type Path, type Segment } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';

/*
 * Fair curves: those of one sweep between two directions, and smooth ones through several points.
 */

const unit = ({ x, y }: Point): Point => {
  const size = Math.hypot(x, y);
  if (size < 1e-9) throw new RangeError('A direction needs a length');
  return { x: x / size, y: y / size };
};

/**
 * One sweep from `from`, leaving it along `leaving`, to `to`, arriving along `arriving`. Directions need no unit length. `fullness` is
 * the length of the handles as a share of the distance: a third gives an even curve, more a fuller one.
 */
export function sweep(
  from: Point,
  leaving: Point,
  to: Point,
  arriving: Point,
  fullness: number | readonly [number, number] = 1 / 3
): Path {
  const [a, b] = typeof fullness === 'number' ? [fullness, fullness] : fullness;
  const apart = Math.hypot(to.x - from.x, to.y - from.y);
  const out = unit(leaving);
  const into = unit(arriving);
  return {
    from,
    segments: [
      {
        kind: 'cubic',
        c1: { x: from.x + out.x * a * apart, y: from.y + out.y * a * apart },
        c2: { x: to.x - into.x * b * apart, y: to.y - into.y * b * apart },
        to
      }
    ]
  };
}

/**
 * A smooth curve through points: the cubic spline over their distances (tangent and curvature go on at every point), with given directions
 * at its ends, or without bend there where none is given.
 */
export function through(points: readonly Point[], leaving?: Point, arriving?: Point): Path {
  const n = points.length;
  if (n < 2) throw new RangeError(`A curve needs two points, got ${n}`);
  const steps = points.slice(1).map((p, i) => Math.hypot(p.x - points[i]!.x, p.y - points[i]!.y));
  if (steps.some((step) => step < 1e-6)) throw new RangeError('Two points of a curve lie on each other');
  const xs = slopes(
    points.map((p) => p.x),
    steps,
    leaving && unit(leaving).x,
    arriving && unit(arriving).x
  );
  const ys = slopes(
    points.map((p) => p.y),
    steps,
    leaving && unit(leaving).y,
    arriving && unit(arriving).y
  );
  return {
    from: points[0]!,
    segments: steps.map((step, i): Segment => {
      const a = points[i]!;
      const b = points[i + 1]!;
      return {
        kind: 'cubic',
        c1: { x: a.x + (xs[i]! * step) / 3, y: a.y + (ys[i]! * step) / 3 },
        c2: { x: b.x - (xs[i + 1]! * step) / 3, y: b.y - (ys[i + 1]! * step) / 3 },
        to: b
      };
    })
  };
}

/** First derivatives of the cubic spline at its knots; an end without a given slope is straight (second derivative 0). */
function slopes(values: readonly number[], steps: readonly number[], start?: number, end?: number): number[] {
  const n = values.length;
  const lower = new Array<number>(n).fill(0);
  const middle = new Array<number>(n).fill(1);
  const upper = new Array<number>(n).fill(0);
  const right = new Array<number>(n).fill(0);
  const chord = (i: number) => (values[i + 1]! - values[i]!) / steps[i]!;
  if (start !== undefined) right[0] = start;
  else {
    middle[0] = 2;
    upper[0] = 1;
    right[0] = 3 * chord(0);
  }
  for (let i = 1; i < n - 1; i++) {
    const before = steps[i - 1]!;
    const after = steps[i]!;
    lower[i] = after;
    middle[i] = 2 * (before + after);
    upper[i] = before;
    right[i] = 3 * (after * chord(i - 1) + before * chord(i));
  }
  if (end !== undefined) right[n - 1] = end;
  else {
    lower[n - 1] = 1;
    middle[n - 1] = 2;
    right[n - 1] = 3 * chord(n - 2);
  }
  for (let i = 1; i < n; i++) {
    const by = lower[i]! / middle[i - 1]!;
    middle[i]! -= by * upper[i - 1]!;
    right[i]! -= by * right[i - 1]!;
  }
  const found = new Array<number>(n).fill(0);
  found[n - 1] = right[n - 1]! / middle[n - 1]!;
  for (let i = n - 2; i >= 0; i--) found[i] = (right[i]! - upper[i]! * found[i + 1]!) / middle[i]!;
  return found;
}

/**
 * The value between `low` and `high` at which `measure` gives `wanted`, by halving to 1e-9; null when the ends lie on one side of it. For
 * curves that have to come to a length.
 */
export function solve(
  wanted: number,
  low: number,
  high: number,
  measure: (value: number) => number
): number | null {
  let a = low;
  let b = high;
  const atLow = measure(a) - wanted;
  const atHigh = measure(b) - wanted;
  if (atLow === 0) return a;
  if (atHigh === 0) return b;
  if (atLow * atHigh > 0) return null;
  for (let k = 0; k < 200 && Math.abs(b - a) > 1e-9; k++) {
    const middle = (a + b) / 2;
    if ((measure(middle) - wanted) * atLow > 0) a = middle;
    else b = middle;
  }
  return (a + b) / 2;
}

export const add = (a: Point, b: Point, times = 1): Point => ({ x: a.x + times * b.x, y: a.y + times * b.y });
export const minus = (a: Point, b: Point): Point => ({ x: a.x - b.x, y: a.y - b.y });
export const apart = (a: Point, b: Point): number => Math.hypot(a.x - b.x, a.y - b.y);
/** The point at share `t` of the way from a to b. */
export const between = (a: Point, b: Point, t: number): Point => ({
  x: a.x + (b.x - a.x) * t,
  y: a.y + (b.y - a.y) * t
});
/** The point at `distance` from a towards b. */
export const towards = (a: Point, b: Point, distance: number): Point => between(a, b, distance / apart(a, b));
/** `p` turned about `centre`, degrees; clockwise as one sees it on the paper, where y points down. */
export function turned(p: Point, centre: Point, degrees: number): Point {
  const angle = (degrees * Math.PI) / 180;
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  const { x, y } = minus(p, centre);
  return { x: centre.x + x * cos - y * sin, y: centre.y + x * sin + y * cos };
}
/** How long a path is; the name that formulas use. */
export const lengthOf = pathLength;
