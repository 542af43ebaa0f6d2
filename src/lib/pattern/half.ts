import { innermost } from '$lib/geometry/label';
import { snap, snapPoint, type Outline, type Point } from '$lib/geometry/point';
import { area, withoutRepeats } from '$lib/geometry/polygon';
import type { PieceShape } from './piece-shape';

/*
 * A piece that was opened over its fold, closed again: what is cut when it is laid with the fold edge on a fold of the cloth.
 */

/** A shape on whose fold line it is folded, with that line. */
export type FoldedShape = PieceShape & { readonly foldLine: NonNullable<PieceShape['foldLine']> };

const made = new WeakMap<PieceShape, Map<1 | -1, FoldedShape>>();

/**
 * The half of `shape` above its fold line (`side` 1, y ≥ fold) or below it (−1), in the coordinates of the whole; its fold edge lies on the
 * fold line. The same object comes back each time. Throws for a shape without a fold line.
 */
export function halfShape(shape: PieceShape, side: 1 | -1): FoldedShape {
  const fold = shape.foldLine;
  if (!fold) throw new RangeError(`${shape.name} has no fold line to be halved at`);
  let sides = made.get(shape);
  if (!sides) made.set(shape, (sides = new Map()));
  let half = sides.get(side);
  if (!half) sides.set(side, (half = cutInHalf(shape, fold, side)));
  return half;
}

function cutInHalf(shape: PieceShape, fold: FoldedShape['foldLine'], side: 1 | -1): FoldedShape {
  const { y } = fold.from;
  const beyond = ({ y: at }: Point): number => (at - y) * side;
  const here = (point: Point): boolean => beyond(point) >= -0.0015;
  const cut = clipped(shape.cut, y, side);
  const cutOuts = shape.cutOuts
    .filter((hole) => hole.some((point) => beyond(point) > 0.0015))
    .map((hole) => clipped(hole, y, side));
  const ends = cut.filter((point) => Math.abs(point.y - y) < 0.0015).map((point) => point.x);
  return {
    ...shape,
    cut,
    sew: clipped(shape.sew, y, side),
    cutOuts,
    notches: shape.notches.filter(({ from }) => here(from)),
    drillHoles: shape.drillHoles.filter(({ at }) => here(at)),
    internalLines: shape.internalLines.filter(({ points }) => points.every(here)),
    matchPoints: shape.matchPoints.filter(({ at }) => here(at)),
    // The grain line of the whole may lie on the other half.
    grain: here(shape.grain.from) ? shape.grain : mirrored(shape.grain, y),
    label: snapPoint(innermost(cut, cutOuts)),
    foldLine: { from: { x: Math.min(...ends), y }, to: { x: Math.max(...ends), y } }
  };
}

function mirrored({ from, to }: PieceShape['grain'], y: number): PieceShape['grain'] {
  const over = (point: Point): Point => ({ x: point.x, y: snap(2 * y - point.y) });
  return { from: over(from), to: over(to) };
}

/** The part of an outline on one side of a level line, which it crosses where the piece was opened. */
function clipped(outline: Outline, y: number, side: 1 | -1): Outline {
  const ring: Point[] = [];
  outline.forEach((a, i) => {
    const b = outline[(i + 1) % outline.length]!;
    const [from, to] = [(a.y - y) * side, (b.y - y) * side];
    if (from >= 0) ring.push(a);
    if ((from > 0 && to < 0) || (from < 0 && to > 0))
      ring.push({ x: snap(a.x + ((b.x - a.x) * from) / (from - to)), y });
  });
  const half = withoutRepeats(ring);
  return area(half) < 0 ? [...half].reverse() : half;
}
