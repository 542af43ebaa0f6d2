import type { Millimetres } from '$lib/units/measure';
import { overlapDepth } from './overlap';
import type { Box, Point } from './point';
import { holds, LEAF, type PreparedOutline } from './prepared';
import { nearestShare, pointSegmentSquared, segmentsCross, segmentSegmentSquared } from './segment';
import { NOISE, TOUCHING } from './tolerance';

/** How far apart two boxes are; 0 where they meet. */
export function boxDistance(a: Box, b: Box): Millimetres {
  const dx = Math.max(0, a.minX - b.maxX, b.minX - a.maxX);
  const dy = Math.max(0, a.minY - b.maxY, b.minY - a.maxY);
  return Math.hypot(dx, dy);
}

/** Square of the distance between two nodes of edge trees; not a number below any bound where one is empty. */
function nodeDistanceSquared(a: Float64Array, i: number, b: Float64Array, j: number): number {
  const dx = Math.max(0, a[i]! - b[j + 2]!, b[j]! - a[i + 2]!);
  const dy = Math.max(0, a[i + 1]! - b[j + 3]!, b[j + 1]! - a[i + 3]!);
  return dx * dx + dy * dy;
}

/**
 * Whether `a` and `b` lie at least `clearance` apart (Euclidean, between the outlines; equal within 1e-6 mm counts as
 * apart) and neither lies in the other. With clearance 0: whether they overlap by no more than TOUCHING. The fast question:
 * it stops at the first pair of edges that is too near.
 */
export function clearBy(a: PreparedOutline, b: PreparedOutline, clearance: Millimetres): boolean {
  const least = clearance - NOISE;
  if (least <= 0) return overlapDepth(a, b, TOUCHING).depth <= TOUCHING;
  const least2 = least * least;
  if (nodeDistanceSquared(a.boxes, 4, b.boxes, 4) >= least2) return true;
  return !nearer(a, 1, b, 1, least2) && !nested(a, b);
}

/** Whether one of two outlines whose edges do not meet lies in the other. */
function nested(a: PreparedOutline, b: PreparedOutline): boolean {
  return holds(a, b.xs[0]!, b.ys[0]!) || holds(b, a.xs[0]!, a.ys[0]!);
}

/** Whether an edge under node i of `a` lies nearer than √limit2 to one under node j of `b`. */
function nearer(a: PreparedOutline, i: number, b: PreparedOutline, j: number, limit2: number): boolean {
  if (nodeDistanceSquared(a.boxes, i * 4, b.boxes, j * 4) >= limit2) return false;
  const aLeaf = i >= a.leaves;
  const bLeaf = j >= b.leaves;
  if (aLeaf && bLeaf) return leavesNearer(a, i, b, j, limit2);
  // Split the node that spans more edges; both are halved alike, so the depth decides.
  if (bLeaf || (!aLeaf && i <= j))
    return nearer(a, i * 2, b, j, limit2) || nearer(a, i * 2 + 1, b, j, limit2);
  return nearer(a, i, b, j * 2, limit2) || nearer(a, i, b, j * 2 + 1, limit2);
}

function leavesNearer(a: PreparedOutline, i: number, b: PreparedOutline, j: number, limit2: number): boolean {
  const minX = b.boxes[j * 4]!;
  const minY = b.boxes[j * 4 + 1]!;
  const maxX = b.boxes[j * 4 + 2]!;
  const maxY = b.boxes[j * 4 + 3]!;
  const lastA = Math.min((i - a.leaves + 1) * LEAF, a.count);
  const firstB = (j - b.leaves) * LEAF;
  const lastB = Math.min(firstB + LEAF, b.count);
  for (let p = (i - a.leaves) * LEAF; p < lastA; p++) {
    const ax = a.xs[p]!;
    const ay = a.ys[p]!;
    const bx = a.xs[p + 1]!;
    const by = a.ys[p + 1]!;
    const dx = Math.max(0, (ax < bx ? ax : bx) - maxX, minX - (ax > bx ? ax : bx));
    const dy = Math.max(0, (ay < by ? ay : by) - maxY, minY - (ay > by ? ay : by));
    if (dx * dx + dy * dy >= limit2) continue;
    for (let q = firstB; q < lastB; q++)
      if (segmentSegmentSquared(ax, ay, bx, by, b.xs[q]!, b.ys[q]!, b.xs[q + 1]!, b.ys[q + 1]!) < limit2)
        return true;
  }
  return false;
}

export interface OutlineDistance {
  /** Euclidean distance between the outlines; 0 where they meet or one lies in the other. */
  readonly distance: Millimetres;
  /** The nearest place of the first outline, and of the second. */
  readonly from: Point;
  readonly to: Point;
}

interface Nearest {
  squared: number;
  edgeA: number;
  edgeB: number;
}

/** How far apart `a` and `b` are, and between which places. */
export function outlineDistance(a: PreparedOutline, b: PreparedOutline): OutlineDistance {
  const best: Nearest = { squared: Infinity, edgeA: 0, edgeB: 0 };
  approach(a, 1, b, 1, best);
  if (best.squared > 0) {
    const inner = holds(a, b.xs[0]!, b.ys[0]!) ? b : holds(b, a.xs[0]!, a.ys[0]!) ? a : null;
    if (inner) {
      const at = { x: inner.xs[0]!, y: inner.ys[0]! };
      return { distance: 0, from: at, to: at };
    }
  }
  return between(a, best.edgeA, b, best.edgeB);
}

function approach(a: PreparedOutline, i: number, b: PreparedOutline, j: number, best: Nearest): void {
  const aLeaf = i >= a.leaves;
  const bLeaf = j >= b.leaves;
  if (aLeaf && bLeaf) {
    const lastA = Math.min((i - a.leaves + 1) * LEAF, a.count);
    const firstB = (j - b.leaves) * LEAF;
    const lastB = Math.min(firstB + LEAF, b.count);
    for (let p = (i - a.leaves) * LEAF; p < lastA; p++)
      for (let q = firstB; q < lastB; q++) {
        const squared = segmentSegmentSquared(
          a.xs[p]!,
          a.ys[p]!,
          a.xs[p + 1]!,
          a.ys[p + 1]!,
          b.xs[q]!,
          b.ys[q]!,
          b.xs[q + 1]!,
          b.ys[q + 1]!
        );
        if (squared < best.squared) {
          best.squared = squared;
          best.edgeA = p;
          best.edgeB = q;
        }
      }
    return;
  }
  const splitA = bLeaf || (!aLeaf && i <= j);
  const i1 = splitA ? i * 2 : i;
  const j1 = splitA ? j : j * 2;
  const i2 = splitA ? i1 + 1 : i;
  const j2 = splitA ? j : j1 + 1;
  const first = nodeDistanceSquared(a.boxes, i1 * 4, b.boxes, j1 * 4);
  const second = nodeDistanceSquared(a.boxes, i2 * 4, b.boxes, j2 * 4);
  if (first <= second) {
    if (first < best.squared) approach(a, i1, b, j1, best);
    if (second < best.squared) approach(a, i2, b, j2, best);
  } else {
    if (second < best.squared) approach(a, i2, b, j2, best);
    if (first < best.squared) approach(a, i1, b, j1, best);
  }
}

/** The distance of edge p of `a` from edge q of `b`, with its places. */
function between(a: PreparedOutline, p: number, b: PreparedOutline, q: number): OutlineDistance {
  const [ax, ay, bx, by] = [a.xs[p]!, a.ys[p]!, a.xs[p + 1]!, a.ys[p + 1]!];
  const [cx, cy, dx, dy] = [b.xs[q]!, b.ys[q]!, b.xs[q + 1]!, b.ys[q + 1]!];
  const on = (x0: number, y0: number, x1: number, y1: number, t: number): Point => ({
    x: x0 + (x1 - x0) * t,
    y: y0 + (y1 - y0) * t
  });
  if (segmentsCross(ax, ay, bx, by, cx, cy, dx, dy)) {
    const sa = (dx - cx) * (ay - cy) - (dy - cy) * (ax - cx);
    const sb = (dx - cx) * (by - cy) - (dy - cy) * (bx - cx);
    const at = on(ax, ay, bx, by, sa / (sa - sb));
    return { distance: 0, from: at, to: at };
  }
  const options: { squared: number; from: Point; to: Point }[] = [];
  for (const [x, y] of [
    [ax, ay],
    [bx, by]
  ] as const)
    options.push({
      squared: pointSegmentSquared(x, y, cx, cy, dx, dy),
      from: { x, y },
      to: on(cx, cy, dx, dy, nearestShare(x, y, cx, cy, dx, dy))
    });
  for (const [x, y] of [
    [cx, cy],
    [dx, dy]
  ] as const)
    options.push({
      squared: pointSegmentSquared(x, y, ax, ay, bx, by),
      from: on(ax, ay, bx, by, nearestShare(x, y, ax, ay, bx, by)),
      to: { x, y }
    });
  const nearest = options.reduce((least, option) => (option.squared < least.squared ? option : least));
  return { distance: Math.sqrt(nearest.squared), from: nearest.from, to: nearest.to };
}
