import { snapPoint, type Outline, type Point } from '$lib/geometry/point';
import type { PieceShape } from './piece-shape';

/** `shape` stretched by `along` in x (the grain) and by `across` in y, every coordinate on the 0.001 mm grid again. */
export function enlargedShape(shape: PieceShape, along: number, across: number): PieceShape {
  const to = ({ x, y }: Point): Point => snapPoint({ x: x * along, y: y * across });
  const all = (points: Outline): Point[] => points.map(to);
  const line = ({ from, to: end }: { from: Point; to: Point }) => ({ from: to(from), to: to(end) });
  return {
    ...shape,
    cut: all(shape.cut),
    sew: all(shape.sew),
    cutOuts: shape.cutOuts.map(all),
    notches: shape.notches.map((notch) => ({ ...notch, ...line(notch) })),
    drillHoles: shape.drillHoles.map((hole) => ({ ...hole, at: to(hole.at) })),
    internalLines: shape.internalLines.map((one) => ({ ...one, points: all(one.points) })),
    grain: line(shape.grain),
    matchPoints: shape.matchPoints.map((point) => ({ ...point, at: to(point.at) })),
    label: to(shape.label),
    foldLine: shape.foldLine && line(shape.foldLine)
  };
}
