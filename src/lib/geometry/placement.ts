import type { Degrees, Millimetres } from '$lib/units/measure';
import { snap, type Outline, type Point } from './point';

/**
 * Where a piece lies: flip first (y → −y), then turn counter-clockwise, then move.
 * x and y are multiples of 0.001 mm, turn of 0.0001°, 0 ≤ turn < 360.
 */
export interface Placement {
  readonly x: Millimetres;
  readonly y: Millimetres;
  readonly turn: Degrees;
  readonly flip: boolean;
}

/** `turn` in 0 ≤ turn < 360 on the grid of 0.0001°. */
export function snapTurn(turn: Degrees): Degrees {
  const whole = Math.round((((turn % 360) + 360) % 360) * 10_000) % 3_600_000;
  return whole / 10_000;
}

/** `placement` with every number on its grid. */
export function snapPlacement(placement: Placement): Placement {
  return {
    x: snap(placement.x),
    y: snap(placement.y),
    turn: snapTurn(placement.turn),
    flip: placement.flip
  };
}

/** Cosine and sine of a turn; multiples of 90° are exact. */
export function cosSin(turn: Degrees): readonly [number, number] {
  switch (snapTurn(turn)) {
    case 0:
      return [1, 0];
    case 90:
      return [0, 1];
    case 180:
      return [-1, 0];
    case 270:
      return [0, -1];
    default: {
      const radians = (turn * Math.PI) / 180;
      return [Math.cos(radians), Math.sin(radians)];
    }
  }
}

/** Where `point` of a piece comes to lie. The one transform of the product: table, check, settle and guide use it. */
export function place(point: Point, placement: Placement): Point {
  const [cos, sin] = cosSin(placement.turn);
  const y = placement.flip ? -point.y : point.y;
  return {
    x: point.x * cos - y * sin + placement.x,
    y: point.x * sin + y * cos + placement.y
  };
}

/**
 * `outline` as it comes to lie, still counter-clockwise: a flip turns the order round, so it is reversed again.
 */
export function placeOutline(outline: Outline, placement: Placement): Point[] {
  const [cos, sin] = cosSin(placement.turn);
  const placed = outline.map((point) => {
    const y = placement.flip ? -point.y : point.y;
    return { x: point.x * cos - y * sin + placement.x, y: point.x * sin + y * cos + placement.y };
  });
  return placement.flip ? placed.reverse() : placed;
}

/** The place on the piece that comes to lie at `point`: the inverse of `place`. */
export function unplace(point: Point, placement: Placement): Point {
  const [cos, sin] = cosSin(placement.turn);
  const dx = point.x - placement.x;
  const dy = point.y - placement.y;
  const y = -dx * sin + dy * cos;
  return { x: dx * cos + dy * sin, y: placement.flip ? -y : y };
}
