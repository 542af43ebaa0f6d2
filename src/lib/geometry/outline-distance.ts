import type { Millimetres } from '$lib/units/measure';
import type { Outline, Point } from './point';
import { pointSegmentSquared } from './segment';

/** How far `point` is from the nearest place of `outline`, inside or outside; for the odd question: many are asked of a prepared one. */
export function distanceToOutline(outline: Outline, point: Point): Millimetres {
  let nearest = Infinity;
  outline.forEach((a, i) => {
    const b = outline[(i + 1) % outline.length]!;
    nearest = Math.min(nearest, pointSegmentSquared(point.x, point.y, a.x, a.y, b.x, b.y));
  });
  return Math.sqrt(nearest);
}
