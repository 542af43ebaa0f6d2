import type { Millimetres } from '$lib/units/measure';
import { clearBy, outlineDistance } from './distance';
import { overlapDepth } from './overlap';
import { snapPoint, type Box, type Point } from './point';
import { index, LEAF, movePrepared, type PreparedOutline } from './prepared';
import { nearestShare } from './segment';
import { NOISE, TOUCHING } from './tolerance';

/*
 * How far a piece may be pushed one way until it meets another. Two outlines first come as near as the clearance where a corner
 * of one reaches the strip with round ends that lies that far about an edge of the other; so every corner is sent along the
 * direction against every edge, both ways, and the earliest arrival is the contact. Trees of boxes leave out almost all pairs.
 */

/**
 * How far `moving` may go along `direction` (a unit vector) before it comes nearer than `clearance` to one of `fixed`, at most
 * `most`; Infinity when nothing is in the way and `most` is not given. Rounded down to 0.001 mm, so that the check
 * finds at least the clearance (equal within 1e-6 mm) and no overlap; along an axis the result is exact on the grid.
 *
 * Starting in contact, a piece may slide along and away. One that starts nearer than the clearance may do the same and come no
 * nearer than it starts. One that starts more than half of TOUCHING deep in another does not move: 0.
 *
 * Throws a RangeError when `direction` is not of length 1.
 */
export function travel(
  moving: PreparedOutline,
  fixed: readonly PreparedOutline[],
  direction: Point,
  clearance: Millimetres,
  most: Millimetres = Infinity
): Millimetres {
  if (Math.abs(Math.hypot(direction.x, direction.y) - 1) > 1e-9)
    throw new RangeError(`A direction has length 1, got (${direction.x}, ${direction.y})`);
  const ways = fixed
    .map((other) => ({ other, from: meetingSpan(moving.box, other.box, direction, clearance)[0] }))
    .filter(({ from }) => from < most)
    .sort((a, b) => a.from - b.from);
  const run: Run = { dx: direction.x, dy: direction.y, reach: 0, best: Math.max(0, most) };
  for (const { other, from } of ways) {
    if (from >= run.best) break;
    const start = startOf(moving, other, clearance);
    if (!start) return 0;
    run.reach = start.reach;
    advance(start.moving, 1, other, 1, run);
    if (run.best <= 0) return 0;
  }
  return run.best === Infinity ? Infinity : Math.floor(run.best * 1000) / 1000;
}

/**
 * The same as a move on the 0.001 mm grid, for directions along no axis: backs off until the moved piece is clear of every
 * outline that it was clear of before; (0, 0) when there is no such place. `most` is finite.
 */
export function travelOnGrid(
  moving: PreparedOutline,
  fixed: readonly PreparedOutline[],
  direction: Point,
  clearance: Millimetres,
  most: Millimetres
): Point {
  const way = travel(moving, fixed, direction, clearance, most);
  if (direction.x === 0 || direction.y === 0)
    return snapPoint({ x: direction.x * way, y: direction.y * way });
  const watched = fixed.filter((other) => clearBy(moving, other, clearance));
  for (let back = 0; back <= 10 && way - back * 0.001 > 0; back++) {
    const length = way - back * 0.001;
    const move = snapPoint({ x: direction.x * length, y: direction.y * length });
    const moved = movePrepared(moving, move.x, move.y);
    if (watched.every((other) => clearBy(moved, other, clearance))) return move;
  }
  return { x: 0, y: 0 };
}

interface Run {
  readonly dx: number;
  readonly dy: number;
  /** How near a corner may come to an edge. */
  reach: number;
  /** The earliest contact so far. */
  best: number;
}

/**
 * The outline to push and how near it may come, so that what holds at the start is no contact; null when it overlaps. Outlines
 * that touch are parted by pulling the edges of the moving one in by as much as they overlap and a little more: then touching,
 * too, is a distance.
 */
function startOf(
  moving: PreparedOutline,
  other: PreparedOutline,
  clearance: Millimetres
): { moving: PreparedOutline; reach: Millimetres } | null {
  if (clearance > 2 * NOISE) {
    if (clearBy(moving, other, clearance)) return { moving, reach: clearance - NOISE };
    const { distance } = outlineDistance(moving, other);
    if (distance > 2 * NOISE) return { moving, reach: distance - NOISE };
  }
  const { depth } = overlapDepth(moving, other, TOUCHING);
  if (depth > TOUCHING / 2 - 2 * NOISE) return null;
  const pulledIn = pullIn(moving, depth + 2 * NOISE);
  if (depth > NOISE && outlineDistance(pulledIn, other).distance < NOISE) return null;
  return { moving: pulledIn, reach: NOISE };
}

/** `shape` with every edge moved in by `by`, a few hundredths at most; sharp corners are not drawn back by more than twice. */
function pullIn(shape: PreparedOutline, by: Millimetres): PreparedOutline {
  const { count, xs, ys } = shape;
  const longest = Math.max(2 * by, 0.001);
  const movedX = new Float64Array(count + 1);
  const movedY = new Float64Array(count + 1);
  for (let i = 0; i < count; i++) {
    const before = i === 0 ? count - 1 : i - 1;
    const inX = xs[i]! - xs[before]!;
    const inY = ys[i]! - ys[before]!;
    const outX = xs[i + 1]! - xs[i]!;
    const outY = ys[i + 1]! - ys[i]!;
    const inLength = Math.hypot(inX, inY);
    const outLength = Math.hypot(outX, outY);
    // Left of both edges is inside; the sum of the normals points along the bisector.
    let nx = -inY / inLength - outY / outLength;
    let ny = inX / inLength + outX / outLength;
    const size = Math.hypot(nx, ny);
    if (size < 1e-9) {
      // The edges fold back: straight along them.
      nx = -inX / inLength;
      ny = -inY / inLength;
    } else {
      nx /= size;
      ny /= size;
    }
    const sine = (-inY * nx + inX * ny) / inLength;
    const way = Math.min(longest, by / Math.max(sine, 1e-9));
    movedX[i] = xs[i]! + nx * way;
    movedY[i] = ys[i]! + ny * way;
  }
  movedX[count] = movedX[0]!;
  movedY[count] = movedY[0]!;
  return index(movedX, movedY, shape.inner);
}

/** From when to when along the direction box `a` is within `reach` of box `b` along both axes; [∞, −∞] when never. */
function meetingSpan(a: Box, b: Box, direction: Point, reach: Millimetres): [number, number] {
  return span(
    a.minX,
    a.minY,
    a.maxX,
    a.maxY,
    b.minX - reach,
    b.minY - reach,
    b.maxX + reach,
    b.maxY + reach,
    direction.x,
    direction.y
  );
}

function span(
  aMinX: number,
  aMinY: number,
  aMaxX: number,
  aMaxY: number,
  bMinX: number,
  bMinY: number,
  bMaxX: number,
  bMaxY: number,
  dx: number,
  dy: number
): [number, number] {
  let enter = 0;
  let leave = Infinity;
  if (dx === 0) {
    if (aMinX > bMaxX || bMinX > aMaxX) return [Infinity, -Infinity];
  } else {
    const near = ((dx > 0 ? bMinX : bMaxX) - (dx > 0 ? aMaxX : aMinX)) / dx;
    const far = ((dx > 0 ? bMaxX : bMinX) - (dx > 0 ? aMinX : aMaxX)) / dx;
    if (near > enter) enter = near;
    if (far < leave) leave = far;
  }
  if (dy === 0) {
    if (aMinY > bMaxY || bMinY > aMaxY) return [Infinity, -Infinity];
  } else {
    const near = ((dy > 0 ? bMinY : bMaxY) - (dy > 0 ? aMaxY : aMinY)) / dy;
    const far = ((dy > 0 ? bMaxY : bMinY) - (dy > 0 ? aMinY : aMaxY)) / dy;
    if (near > enter) enter = near;
    if (far < leave) leave = far;
  }
  return enter > leave ? [Infinity, -Infinity] : [enter, leave];
}

/** When node i of `a` first meets node j of `b`, each grown by the reach; Infinity when never. */
function nodesMeet(a: PreparedOutline, i: number, b: PreparedOutline, j: number, run: Run): number {
  const p = i * 4;
  const q = j * 4;
  const { reach } = run;
  if (a.boxes[p]! > a.boxes[p + 2]! || b.boxes[q]! > b.boxes[q + 2]!) return Infinity;
  return span(
    a.boxes[p]!,
    a.boxes[p + 1]!,
    a.boxes[p + 2]!,
    a.boxes[p + 3]!,
    b.boxes[q]! - reach,
    b.boxes[q + 1]! - reach,
    b.boxes[q + 2]! + reach,
    b.boxes[q + 3]! + reach,
    run.dx,
    run.dy
  )[0];
}

/** Lowers `run.best` to the first contact of an edge under node i of `a`, moving, with one under node j of `b`. */
function advance(a: PreparedOutline, i: number, b: PreparedOutline, j: number, run: Run): void {
  const aLeaf = i >= a.leaves;
  const bLeaf = j >= b.leaves;
  if (aLeaf && bLeaf) {
    const lastA = Math.min((i - a.leaves + 1) * LEAF, a.count);
    const firstB = (j - b.leaves) * LEAF;
    const lastB = Math.min(firstB + LEAF, b.count);
    const { dx, dy, reach } = run;
    for (let p = (i - a.leaves) * LEAF; p < lastA; p++)
      for (let q = firstB; q < lastB; q++) {
        const [ax, ay, bx, by] = [a.xs[p]!, a.ys[p]!, a.xs[p + 1]!, a.ys[p + 1]!];
        const [cx, cy, ex, ey] = [b.xs[q]!, b.ys[q]!, b.xs[q + 1]!, b.ys[q + 1]!];
        run.best = Math.min(
          run.best,
          arrival(ax, ay, cx, cy, ex, ey, dx, dy, reach),
          arrival(cx, cy, ax, ay, bx, by, -dx, -dy, reach)
        );
      }
    return;
  }
  const splitA = bLeaf || (!aLeaf && i <= j);
  const i1 = splitA ? i * 2 : i;
  const j1 = splitA ? j : j * 2;
  const i2 = splitA ? i1 + 1 : i;
  const j2 = splitA ? j : j1 + 1;
  const first = nodesMeet(a, i1, b, j1, run);
  const second = nodesMeet(a, i2, b, j2, run);
  if (first <= second) {
    if (first < run.best) advance(a, i1, b, j1, run);
    if (second < run.best) advance(a, i2, b, j2, run);
  } else {
    if (second < run.best) advance(a, i2, b, j2, run);
    if (first < run.best) advance(a, i1, b, j1, run);
  }
}

/** When the point (px, py), going along (dx, dy), first comes as near as `reach` to the segment a → b; Infinity when never. */
function arrival(
  px: number,
  py: number,
  ax: number,
  ay: number,
  bx: number,
  by: number,
  dx: number,
  dy: number,
  reach: number
): number {
  const share = nearestShare(px, py, ax, ay, bx, by);
  const gapX = px - ax - share * (bx - ax);
  const gapY = py - ay - share * (by - ay);
  const approaching = gapX * dx + gapY * dy < 0;
  // Once outside or on its way out of a convex strip it never comes in again.
  if (gapX * gapX + gapY * gapY < reach * reach) return approaching ? 0 : Infinity;
  if (!approaching) return Infinity;
  let first = Math.min(disc(px - ax, py - ay, dx, dy, reach), disc(px - bx, py - by, dx, dy, reach));
  const length = Math.hypot(bx - ax, by - ay);
  const wx = (bx - ax) / length;
  const wy = (by - ay) / length;
  const height = (py - ay) * wx - (px - ax) * wy;
  const sinking = dy * wx - dx * wy;
  if (height > 0 ? sinking < 0 : sinking > 0) {
    const time = (Math.abs(height) - reach) / Math.abs(sinking);
    const along = (px - ax) * wx + (py - ay) * wy + time * (dx * wx + dy * wy);
    if (time >= 0 && along >= 0 && along <= length && time < first) first = time;
  }
  return first;
}

/** When a point at (mx, my) from a centre, going along (dx, dy), enters the circle of radius `reach` around it. */
function disc(mx: number, my: number, dx: number, dy: number, reach: number): number {
  const along = mx * dx + my * dy;
  if (along >= 0) return Infinity;
  const beside = mx * dy - my * dx;
  const inside = reach * reach - beside * beside;
  return inside < 0 ? Infinity : Math.max(0, -along - Math.sqrt(inside));
}
