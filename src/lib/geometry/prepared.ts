import { innermost } from './label';
import { cosSin, type Placement } from './placement';
import { counterClockwise, side, withoutRepeats } from './polygon';
import type { Box, Outline, Point } from './point';

/*
 * An outline made ready for being asked about often. Its edges stand in a binary tree of boxes in the order in which
 * they follow each other: neighbours along the outline are neighbours in space, so the tree needs no sorting and is
 * built anew in one pass whenever the piece is placed.
 */

/** Edges in one leaf of the tree. */
export const LEAF = 4;

export interface PreparedOutline {
  /** Number of points, and of edges. Edge i runs from point i to point i + 1. */
  readonly count: number;
  /** Coordinates, counter-clockwise; the first point is repeated at the end. */
  readonly xs: Float64Array;
  readonly ys: Float64Array;
  readonly box: Box;
  /** A place well inside: the label point. */
  readonly inner: Point;
  /** Node i has the children 2i and 2i + 1; node 1 is the root; leaf j stands at `leaves` + j. */
  readonly leaves: number;
  /** minX, minY, maxX, maxY of each node; inside out where the node is empty. */
  readonly boxes: Float64Array;
}

/** The tree over closed coordinates (first point repeated), counter-clockwise. */
export function index(xs: Float64Array, ys: Float64Array, inner: Point): PreparedOutline {
  const count = xs.length - 1;
  let leaves = 1;
  while (leaves * LEAF < count) leaves *= 2;
  const boxes = new Float64Array(leaves * 8);
  for (let leaf = 0; leaf < leaves; leaf++) {
    const first = leaf * LEAF;
    const last = Math.min(first + LEAF, count);
    let minX = Infinity;
    let minY = Infinity;
    let maxX = -Infinity;
    let maxY = -Infinity;
    if (first < last)
      for (let i = first; i <= last; i++) {
        const x = xs[i]!;
        const y = ys[i]!;
        if (x < minX) minX = x;
        if (x > maxX) maxX = x;
        if (y < minY) minY = y;
        if (y > maxY) maxY = y;
      }
    const at = (leaves + leaf) * 4;
    boxes[at] = minX;
    boxes[at + 1] = minY;
    boxes[at + 2] = maxX;
    boxes[at + 3] = maxY;
  }
  for (let node = leaves - 1; node >= 1; node--) {
    const at = node * 4;
    const a = node * 8;
    const b = a + 4;
    boxes[at] = Math.min(boxes[a]!, boxes[b]!);
    boxes[at + 1] = Math.min(boxes[a + 1]!, boxes[b + 1]!);
    boxes[at + 2] = Math.max(boxes[a + 2]!, boxes[b + 2]!);
    boxes[at + 3] = Math.max(boxes[a + 3]!, boxes[b + 3]!);
  }
  const box = { minX: boxes[4]!, minY: boxes[5]!, maxX: boxes[6]!, maxY: boxes[7]! };
  return { count, xs, ys, box, inner, leaves, boxes };
}

/**
 * `outline` made ready. It must be simple and have an area; either direction will do. `inner` is its label point; where
 * none is given, the innermost place is computed (slow beside all else here: prepare a shape once, place it often).
 * Throws a RangeError for fewer than three different points.
 */
export function prepare(outline: Outline, inner?: Point): PreparedOutline {
  const ring = counterClockwise(withoutRepeats(outline));
  if (ring.length < 3) throw new RangeError(`An outline needs three points, got ${ring.length}`);
  const xs = new Float64Array(ring.length + 1);
  const ys = new Float64Array(ring.length + 1);
  ring.forEach((point, i) => {
    xs[i] = point.x;
    ys[i] = point.y;
  });
  xs[ring.length] = xs[0]!;
  ys[ring.length] = ys[0]!;
  return index(xs, ys, inner ?? innermost(ring));
}

/** `shape` as it comes to lie: the same numbers, digit for digit, that `placeOutline` gives. */
export function placePrepared(shape: PreparedOutline, placement: Placement): PreparedOutline {
  const [cos, sin] = cosSin(placement.turn);
  const { x: dx, y: dy, flip } = placement;
  const { count } = shape;
  const xs = new Float64Array(count + 1);
  const ys = new Float64Array(count + 1);
  for (let i = 0; i <= count; i++) {
    // A flip turns the order round; running backwards keeps it counter-clockwise.
    const from = flip ? count - i : i;
    const x = shape.xs[from]!;
    const y = flip ? -shape.ys[from]! : shape.ys[from]!;
    xs[i] = x * cos - y * sin + dx;
    ys[i] = x * sin + y * cos + dy;
  }
  const iy = flip ? -shape.inner.y : shape.inner.y;
  const inner = { x: shape.inner.x * cos - iy * sin + dx, y: shape.inner.x * sin + iy * cos + dy };
  return index(xs, ys, inner);
}

/** `shape` moved by (dx, dy). */
export function movePrepared(shape: PreparedOutline, dx: number, dy: number): PreparedOutline {
  return placePrepared(shape, { x: dx, y: dy, turn: 0, flip: false });
}

/** The points of a prepared outline, counter-clockwise. */
export function outlineOf(shape: PreparedOutline): Point[] {
  return Array.from({ length: shape.count }, (_, i) => ({ x: shape.xs[i]!, y: shape.ys[i]! }));
}

/** Whether (x, y) lies inside the outline; exact. A point on an edge counts as outside. */
export function holds(shape: PreparedOutline, x: number, y: number): boolean {
  const { box } = shape;
  if (x <= box.minX || x >= box.maxX || y <= box.minY || y >= box.maxY) return false;
  const crossed = crossings(shape, 1, x, y);
  return crossed >= 0 && crossed % 2 === 1;
}

const ON_EDGE = -1;

/** How many edges under `node` a ray from (x, y) towards +x crosses; ON_EDGE where the point lies on one. */
function crossings(shape: PreparedOutline, node: number, x: number, y: number): number {
  const { boxes, leaves, xs, ys, count } = shape;
  const at = node * 4;
  if (y < boxes[at + 1]! || y > boxes[at + 3]! || x > boxes[at + 2]!) return 0;
  if (node < leaves) {
    const left = crossings(shape, node * 2, x, y);
    if (left === ON_EDGE) return ON_EDGE;
    const right = crossings(shape, node * 2 + 1, x, y);
    return right === ON_EDGE ? ON_EDGE : left + right;
  }
  let crossed = 0;
  const first = (node - leaves) * LEAF;
  const last = Math.min(first + LEAF, count);
  for (let i = first; i < last; i++) {
    const ax = xs[i]!;
    const ay = ys[i]!;
    const bx = xs[i + 1]!;
    const by = ys[i + 1]!;
    if (ay === by) {
      if (ay === y && x >= Math.min(ax, bx) && x <= Math.max(ax, bx)) return ON_EDGE;
      continue;
    }
    if (y < Math.min(ay, by) || y > Math.max(ay, by) || x > Math.max(ax, bx)) continue;
    const where = side(ax, ay, bx, by, x, y);
    if (where === 0) return ON_EDGE;
    // Half open: an edge owns its lower end, so that a ray through a corner counts once.
    if (ay > y !== by > y && where > 0 === by > ay) crossed++;
  }
  return crossed;
}
