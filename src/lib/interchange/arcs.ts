import type { Point } from '$lib/geometry/point';
import type { Segment } from '$lib/pattern/panel';
import { mapPoint, type Matrix } from './matrix';

/** How far a cubic may leave the arc that it stands for, in drawing units (in mm unless the drawing is scaled). */
const ARC_WITHIN = 0.0005;

/** How many cubics an arc of `sweep` radians needs. A quarter of a circle is off by 2.7e-4 of its radius; the error
 * falls with the sixth power of the angle. */
function pieces(radius: number, sweep: number): number {
  const share = Math.pow(ARC_WITHIN / (2.73e-4 * Math.max(radius, 1e-9)), 1 / 6);
  const widest = Math.min(Math.PI / 4, (Math.PI / 2) * share);
  return Math.max(1, Math.min(720, Math.ceil(Math.abs(sweep) / widest - 1e-9)));
}

/**
 * Cubic curves for the arc of the unit circle from `start` over `sweep` radians, carried into place by `matrix`
 * (so that ellipses and turned arcs come from the same code). `radius` is the larger half axis, for the accuracy.
 */
export function arcCurves(
  matrix: Matrix,
  start: number,
  sweep: number,
  radius: number
): { from: Point; segments: Segment[] } {
  const count = pieces(radius, sweep);
  const step = sweep / count;
  const reach = (4 / 3) * Math.tan(step / 4);
  const on = (angle: number): Point => ({ x: Math.cos(angle), y: Math.sin(angle) });
  const segments: Segment[] = [];
  for (let i = 0; i < count; i += 1) {
    const a = start + i * step;
    const b = start + (i + 1) * step;
    const [p, q] = [on(a), on(b)];
    segments.push({
      kind: 'cubic',
      c1: mapPoint(matrix, { x: p.x - reach * p.y, y: p.y + reach * p.x }),
      c2: mapPoint(matrix, { x: q.x + reach * q.y, y: q.y - reach * q.x }),
      to: mapPoint(matrix, q)
    });
  }
  return { from: mapPoint(matrix, on(start)), segments };
}

/**
 * An SVG path arc from end points to curves, by the steps of SVG 2, implementation notes B.2.4 (conversion from
 * endpoint to center parameterization) and B.2.5 (correction of out-of-range radii). Ends exactly at `to`.
 */
export function endpointArc(
  from: Point,
  rx: number,
  ry: number,
  turn: number,
  large: boolean,
  sweep: boolean,
  to: Point
): Segment[] {
  if (from.x === to.x && from.y === to.y) return [];
  if (rx === 0 || ry === 0) return [{ kind: 'line', to }];
  const phi = (turn * Math.PI) / 180;
  const [cos, sin] = [Math.cos(phi), Math.sin(phi)];
  let [a, b] = [Math.abs(rx), Math.abs(ry)];
  const [hx, hy] = [(from.x - to.x) / 2, (from.y - to.y) / 2];
  const x1 = cos * hx + sin * hy;
  const y1 = -sin * hx + cos * hy;
  const stretch = (x1 * x1) / (a * a) + (y1 * y1) / (b * b);
  if (stretch > 1) {
    a *= Math.sqrt(stretch);
    b *= Math.sqrt(stretch);
  }
  const below = a * a * y1 * y1 + b * b * x1 * x1;
  const square = Math.max(0, (a * a * b * b - below) / below);
  const factor = (large === sweep ? -1 : 1) * Math.sqrt(square);
  const cx1 = (factor * a * y1) / b;
  const cy1 = (-factor * b * x1) / a;
  const start = Math.atan2((y1 - cy1) / b, (x1 - cx1) / a);
  const end = Math.atan2((-y1 - cy1) / b, (-x1 - cx1) / a);
  let angle = end - start;
  if (sweep && angle < 0) angle += 2 * Math.PI;
  if (!sweep && angle > 0) angle -= 2 * Math.PI;
  const centre = {
    x: cos * cx1 - sin * cy1 + (from.x + to.x) / 2,
    y: sin * cx1 + cos * cy1 + (from.y + to.y) / 2
  };
  const matrix: Matrix = [a * cos, a * sin, -b * sin, b * cos, centre.x, centre.y];
  const { segments } = arcCurves(matrix, start, angle, Math.max(a, b));
  const last = segments[segments.length - 1]!;
  segments[segments.length - 1] = { ...last, to };
  return segments;
}
