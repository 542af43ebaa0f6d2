import type { Point } from '$lib/geometry/point';
import type { Path, Segment } from '$lib/pattern/panel';

/** An affine map: x' = a·x + c·y + e, y' = b·x + d·y + f (the order of SVG's `matrix()`). */
export type Matrix = readonly [a: number, b: number, c: number, d: number, e: number, f: number];

export const IDENTITY: Matrix = [1, 0, 0, 1, 0, 0];

/** The map that does `inner` first, then `outer`. */
export function multiply(outer: Matrix, inner: Matrix): Matrix {
  const [a, b, c, d, e, f] = outer;
  const [g, h, i, j, k, l] = inner;
  return [a * g + c * h, b * g + d * h, a * i + c * j, b * i + d * j, a * k + c * l + e, b * k + d * l + f];
}

export function translation(x: number, y: number): Matrix {
  return [1, 0, 0, 1, x, y];
}

export function scaling(x: number, y: number = x): Matrix {
  return [x, 0, 0, y, 0, 0];
}

/** A turn about the origin; multiples of 90° are exact. Degrees, from +x towards +y. */
export function rotation(degrees: number): Matrix {
  const turn = ((degrees % 360) + 360) % 360;
  if (turn === 0) return IDENTITY;
  if (turn === 90) return [0, 1, -1, 0, 0, 0];
  if (turn === 180) return [-1, 0, 0, -1, 0, 0];
  if (turn === 270) return [0, -1, 1, 0, 0, 0];
  const radians = (turn * Math.PI) / 180;
  const cos = Math.cos(radians);
  const sin = Math.sin(radians);
  return [cos, sin, -sin, cos, 0, 0];
}

/** How the map changes areas; negative when it mirrors. */
export function determinant([a, b, c, d]: Matrix): number {
  return a * d - b * c;
}

export function mapPoint([a, b, c, d, e, f]: Matrix, { x, y }: Point): Point {
  return { x: a * x + c * y + e, y: b * x + d * y + f };
}

/** `path` under the map. Lines and cubic curves stay what they are under any affine map. */
export function mapPath(matrix: Matrix, path: Path): Path {
  return {
    from: mapPoint(matrix, path.from),
    segments: path.segments.map((segment): Segment =>
      segment.kind === 'line'
        ? { kind: 'line', to: mapPoint(matrix, segment.to) }
        : {
            kind: 'cubic',
            c1: mapPoint(matrix, segment.c1),
            c2: mapPoint(matrix, segment.c2),
            to: mapPoint(matrix, segment.to)
          }
    )
  };
}
