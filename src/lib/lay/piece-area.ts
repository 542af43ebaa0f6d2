import { area } from '$lib/geometry/polygon';
import type { PieceShape } from '$lib/pattern/piece-shape';
import type { SquareMillimetres } from '$lib/units/measure';

const known = new WeakMap<PieceShape, SquareMillimetres>();

/** What one piece covers: its cut outline less its cut-outs. Worked out once a shape. */
export function pieceArea(shape: PieceShape): SquareMillimetres {
  let covered = known.get(shape);
  if (covered === undefined) {
    covered = area(shape.cut) - shape.cutOuts.reduce((sum, hole) => sum + Math.abs(area(hole)), 0);
    known.set(shape, covered);
  }
  return covered;
}
