import type { Box, Outline, Point } from '$lib/geometry/point';
import { boundingBox, locate } from '$lib/geometry/polygon';
import type { Degrees } from '$lib/units/measure';

/*
 * Where the label of a piece stands: the largest block of the label's proportions that crosses no line of the piece.
 */

/** A block of words: `scale` times as large as asked, its centre, and whether it runs along or across the warp. */
export interface LabelPlace {
  readonly centre: Point;
  readonly turn: Degrees;
  readonly scale: number;
}

/** How many places along each side of the piece are tried. */
const TRIES = 11;

interface Line {
  readonly a: Point;
  readonly b: Point;
}

/**
 * The best place for a block of `width` × `height` inside `outline`, clear of `lines` (cut-outs, grain …). At most scale
 * 1; along the warp where it is as good. `first` (the piece's label point) is preferred when it serves in full.
 */
export function placeLabel(
  outline: Outline,
  lines: readonly (readonly Point[])[],
  first: Point,
  width: number,
  height: number
): LabelPlace {
  const obstacles = [...lines, [...outline, outline[0]!]].flatMap((points) =>
    points.slice(1).map((b, i): Line => ({ a: points[i]!, b }))
  );
  const box = boundingBox(outline);
  const ways = [
    { turn: 0, a: width / 2, b: height / 2 },
    { turn: 90, a: height / 2, b: width / 2 }
  ];
  let best: LabelPlace = { centre: first, turn: 0, scale: 0 };
  for (const { turn, a, b } of ways) {
    for (const centre of candidates(first, box, outline)) {
      // Only a clear gain is worth leaving the label point, or reading sideways.
      const bar = best.scale * (turn === 0 ? 1.05 : 1.3);
      const scale = largest(centre, a, b, obstacles, bar);
      if (scale > bar) best = { centre, turn, scale: Math.min(scale, 1) };
      if (best.scale >= 1) return best;
    }
  }
  return best;
}

function* candidates(first: Point, box: Box, outline: Outline): Generator<Point> {
  yield first;
  for (let i = 1; i <= TRIES; i++)
    for (let k = 1; k <= TRIES; k++) {
      const point = {
        x: box.minX + ((box.maxX - box.minX) * i) / (TRIES + 1),
        y: box.minY + ((box.maxY - box.minY) * k) / (TRIES + 1)
      };
      if (locate(outline, point) === 'inside') yield point;
    }
}

/** How large the block around `centre` may be before it meets a line; 0 as soon as that is not above `bar`. */
function largest(centre: Point, a: number, b: number, lines: readonly Line[], bar: number): number {
  let scale = Infinity;
  for (const line of lines) {
    scale = Math.min(
      scale,
      squareDistance(
        (line.a.x - centre.x) / a,
        (line.a.y - centre.y) / b,
        (line.b.x - centre.x) / a,
        (line.b.y - centre.y) / b
      )
    );
    if (scale <= bar) return 0;
  }
  return scale;
}

/** Distance from (0, 0) to a straight line, measured by the larger of |u| and |v|: half the side of the square that meets it. */
function squareDistance(u1: number, v1: number, u2: number, v2: number): number {
  const du = u2 - u1;
  const dv = v2 - v1;
  let least = Math.min(Math.max(Math.abs(u1), Math.abs(v1)), Math.max(Math.abs(u2), Math.abs(v2)));
  // The larger of two absolute values is least at an end, or where one is zero, or where the two are alike.
  for (const t of [-u1 / du, -v1 / dv, (v1 - u1) / (du - dv), -(u1 + v1) / (du + dv)])
    if (t > 0 && t < 1) least = Math.min(least, Math.max(Math.abs(u1 + t * du), Math.abs(v1 + t * dv)));
  return least;
}
