import type { Point } from '$lib/geometry/point';
import type { Path, Segment } from '$lib/pattern/panel';
import { arcCurves } from './arcs';
import { fromQuadratic } from './svg-path';

/**
 * A stretch of a polyline with a bulge: the tangent of a quarter of the arc's angle, positive counter-clockwise.
 * Ends exactly at `to`.
 */
export function bulgeSegments(from: Point, to: Point, bulge: number): Segment[] {
  const chord = Math.hypot(to.x - from.x, to.y - from.y);
  if (bulge === 0 || chord === 0 || Math.abs(bulge) < 1e-9) return [{ kind: 'line', to }];
  const angle = 4 * Math.atan(bulge);
  const radius = (chord * (1 + bulge * bulge)) / (4 * Math.abs(bulge));
  // The centre lies on the perpendicular of the chord, to its left for a small counter-clockwise arc.
  const offset = (chord * (1 - bulge * bulge)) / (4 * bulge);
  const [ux, uy] = [(to.x - from.x) / chord, (to.y - from.y) / chord];
  const centre = { x: (from.x + to.x) / 2 - uy * offset, y: (from.y + to.y) / 2 + ux * offset };
  const start = Math.atan2(from.y - centre.y, from.x - centre.x);
  const { segments } = arcCurves([radius, 0, 0, radius, centre.x, centre.y], start, angle, radius);
  segments[segments.length - 1] = { ...segments[segments.length - 1]!, to };
  return segments;
}

export interface Spline {
  degree: number;
  knots: readonly number[];
  controls: readonly Point[];
  /** Empty when all are alike. */
  weights: readonly number[];
}

/** How far an approximated curve may leave the given one, in units of the drawing's own size. */
const APPROXIMATE_WITHIN = 2e-6;

/**
 * A B-spline as lines and cubic curves. Degree 1 to 3 without weights is exact (knots are inserted until every span
 * stands alone: Böhm 1980); other degrees and weights are approximated by cubics with the curve's own tangents, and
 * `exact` is false. Null when knots and control points do not fit together.
 */
export function splinePath(spline: Spline): { path: Path; exact: boolean } | null {
  const { degree, controls, knots, weights } = spline;
  const fits =
    Number.isInteger(degree) &&
    degree >= 1 &&
    degree <= 11 &&
    controls.length > degree &&
    knots.length === controls.length + degree + 1 &&
    (weights.length === 0 || weights.length === controls.length) &&
    knots.every((knot, i) => Number.isFinite(knot) && (i === 0 || knot >= knots[i - 1]!)) &&
    knots[degree]! < knots[controls.length]! &&
    // A knot that comes more often than this would tear the curve apart.
    knots.every(
      (knot, i) => knot === knots[0] || knot === knots[knots.length - 1] || knots[i + degree] !== knot
    );
  if (!fits) return null;
  const plain = weights.every((weight) => weight === weights[0]);
  if (plain && degree <= 3) return { path: exactSpline(degree, [...knots], [...controls]), exact: true };
  if (!weights.every((weight) => Number.isFinite(weight) && weight > 0)) return null;
  return { path: approximateSpline(spline), exact: false };
}

/** Inserts a knot once (Böhm): the curve stays, one control point more. */
function insertKnot(degree: number, knots: number[], controls: Point[], at: number): void {
  const span = knots.findLastIndex((knot) => knot <= at);
  const times = knots.filter((knot) => knot === at).length;
  const moved: Point[] = [];
  for (let i = span - degree + 1; i <= span - times; i += 1) {
    const share = (at - knots[i]!) / (knots[i + degree]! - knots[i]!);
    const [a, b] = [controls[i - 1]!, controls[i]!];
    moved.push({ x: a.x + (b.x - a.x) * share, y: a.y + (b.y - a.y) * share });
  }
  controls.splice(span - degree + 1, degree - times - 1, ...moved);
  knots.splice(span + 1, 0, at);
}

function exactSpline(degree: number, knots: number[], controls: Point[]): Path {
  const [start, end] = [knots[degree]!, knots[controls.length]!];
  const inner = [...new Set(knots)].filter((knot) => knot >= start && knot <= end);
  for (const knot of inner) {
    // The ends need it too where the curve does not start at its first control point.
    for (let count = knots.filter((other) => other === knot).length; count < degree; count += 1)
      insertKnot(degree, knots, controls, knot);
  }
  // Every span now has its own control points; those of the first span start just before `start` is passed.
  const first = knots.lastIndexOf(start) - degree;
  const segments: Segment[] = [];
  const from = controls[first]!;
  let last = from;
  let i = first;
  for (const _ of inner.slice(1)) {
    const [a, b, c] = [controls[i + 1]!, controls[i + 2], controls[i + 3]];
    if (degree === 1) segments.push({ kind: 'line', to: a });
    else if (degree === 2) segments.push(fromQuadratic(last, a, b!));
    else segments.push({ kind: 'cubic', c1: a, c2: b!, to: c! });
    i += degree;
    last = controls[i]!;
  }
  return { from, segments };
}

/** The point of a B-spline at a parameter, and its derivative (de Boor on homogeneous coordinates). */
export function splineAt(spline: Spline, t: number): { at: Point; slope: Point } {
  const { degree, knots, controls, weights } = spline;
  let span = degree;
  while (span < controls.length - 1 && knots[span + 1]! <= t) span += 1;
  const d: [number, number, number][] = [];
  for (let j = 0; j <= degree; j += 1) {
    const control = controls[span - degree + j]!;
    const w = weights[span - degree + j] ?? 1;
    d.push([control.x * w, control.y * w, w]);
  }
  let [before, after] = [d[0]!, d[degree]!];
  for (let r = 1; r <= degree; r += 1) {
    if (r === degree) [before, after] = [d[degree - 1]!, d[degree]!];
    for (let j = degree; j >= r; j -= 1) {
      const low = knots[span - degree + j]!;
      const share = (t - low) / (knots[span + 1 + j - r]! - low);
      const [p, q] = [d[j - 1]!, d[j]!];
      d[j] = [p[0] + (q[0] - p[0]) * share, p[1] + (q[1] - p[1]) * share, p[2] + (q[2] - p[2]) * share];
    }
  }
  const [x, y, w] = d[degree]!;
  const rate = degree / (knots[span + 1]! - knots[span]!);
  const [dx, dy, dw] = [
    (after[0] - before[0]) * rate,
    (after[1] - before[1]) * rate,
    (after[2] - before[2]) * rate
  ];
  return {
    at: { x: x / w, y: y / w },
    slope: { x: (dx * w - x * dw) / (w * w), y: (dy * w - y * dw) / (w * w) }
  };
}

function approximateSpline(spline: Spline): Path {
  const { degree, knots, controls } = spline;
  const size = Math.max(
    ...controls.map(({ x, y }) => Math.hypot(x - controls[0]!.x, y - controls[0]!.y)),
    1e-9
  );
  const segments: Segment[] = [];
  const piece = (a: number, b: number, depth: number): void => {
    const [p, q] = [splineAt(spline, a), splineAt(spline, b)];
    const third = (b - a) / 3;
    const c1 = { x: p.at.x + p.slope.x * third, y: p.at.y + p.slope.y * third };
    const c2 = { x: q.at.x - q.slope.x * third, y: q.at.y - q.slope.y * third };
    const wrong = [0.25, 0.5, 0.75].some((t) => {
      const u = 1 - t;
      const { at } = splineAt(spline, a + (b - a) * t);
      const x = u * u * u * p.at.x + 3 * u * u * t * c1.x + 3 * u * t * t * c2.x + t * t * t * q.at.x;
      const y = u * u * u * p.at.y + 3 * u * u * t * c1.y + 3 * u * t * t * c2.y + t * t * t * q.at.y;
      return Math.hypot(at.x - x, at.y - y) > size * APPROXIMATE_WITHIN;
    });
    if (wrong && depth < 8) {
      piece(a, (a + b) / 2, depth + 1);
      piece((a + b) / 2, b, depth + 1);
    } else segments.push({ kind: 'cubic', c1, c2, to: q.at });
  };
  const inner = [...new Set(knots)].filter(
    (knot) => knot >= knots[degree]! && knot <= knots[controls.length]!
  );
  // A hair before the knot belongs to the span that ends there; the curve is continuous, its slope may not be.
  for (let i = 1; i < inner.length; i += 1) {
    const hair = (inner[i]! - inner[i - 1]!) * 1e-9;
    piece(inner[i - 1]!, inner[i]! - hair, 0);
  }
  return { from: splineAt(spline, inner[0]!).at, segments };
}
