import type { Millimetres } from '$lib/units/measure';

/**
 * A place on the table in millimetres: x along the warp (length), y across it (weft), seen from above.
 */
export interface Point {
  readonly x: Millimetres;
  readonly y: Millimetres;
}

/**
 * A closed polygon without a repeated last point. Counter-clockwise outlines have a positive area.
 */
export type Outline = readonly Point[];

/** The smallest upright rectangle around something. */
export interface Box {
  readonly minX: Millimetres;
  readonly minY: Millimetres;
  readonly maxX: Millimetres;
  readonly maxY: Millimetres;
}

/** The grid on which cut lines and placements lie: a thousandth of a millimetre. */
export const QUANTUM: Millimetres = 0.001;

/** The number of the 0.001 mm grid nearest to `value`; never −0. */
export function snap(value: Millimetres): Millimetres {
  return Math.round(value * 1000) / 1000 + 0;
}

/** `point` on the 0.001 mm grid. */
export function snapPoint(point: Point): Point {
  return { x: snap(point.x), y: snap(point.y) };
}
