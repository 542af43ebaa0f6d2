import type { Millimetres } from '$lib/units/measure';
import { side } from './polygon';
import type { Point } from './point';
import { holds, LEAF, type PreparedOutline } from './prepared';
import { nearestShare, pointSegmentSquared } from './segment';
import { TOUCHING } from './tolerance';

/*
 * How deep two outlines run into each other: the largest distance, to the other outline, of a point of one outline (or its
 * label point) that lies inside the other. Corners alone would miss a cross of two strips, outlines alone two copies that lie
 * exactly on top of each other.
 *
 * Each edge of one outline is cut where it meets the other outline (exactly decided), which leaves stretches that lie inside
 * or outside as a whole. Along a stretch the distance to one edge of the other outline is convex, so it is greatest at an end;
 * the distance to the outline, their least, is greatest at an end or where two of them cross. That is searched exactly.
 */

export interface Depth {
  readonly depth: Millimetres;
  /** The deepest place; null when the outlines do not overlap. */
  readonly at: Point | null;
}

/** The result of a search is this near to the true depth. */
const EXACT = 1e-8;

/** A stretch that comes this near to the other outline everywhere is of no interest. */
const SHALLOW = 1e-7;

interface Deepest {
  depth: number;
  x: number;
  y: number;
  found: boolean;
}

/**
 * How deep `a` and `b` run into each other; 0 when they are apart. Symmetric. The search stops as soon as a place deeper than
 * `enough` is found: give TOUCHING to ask only whether.
 */
export function overlapDepth(a: PreparedOutline, b: PreparedOutline, enough: Millimetres = Infinity): Depth {
  const best: Deepest = { depth: 0, x: 0, y: 0, found: false };
  if (
    a.box.minX < b.box.maxX &&
    b.box.minX < a.box.maxX &&
    a.box.minY < b.box.maxY &&
    b.box.minY < a.box.maxY
  ) {
    sinkInner(a, b, best);
    sinkInner(b, a, best);
    if (best.depth <= enough) sinkOutline(a, b, best, enough);
    if (best.depth <= enough) sinkOutline(b, a, best, enough);
  }
  return { depth: best.depth, at: best.found ? { x: best.x, y: best.y } : null };
}

/** Whether `a` and `b` overlap by more than touching. */
export function overlaps(a: PreparedOutline, b: PreparedOutline): boolean {
  return overlapDepth(a, b, TOUCHING).depth > TOUCHING;
}

function deepen(best: Deepest, depth: number, x: number, y: number): void {
  if (depth <= best.depth) return;
  best.depth = depth;
  best.x = x;
  best.y = y;
  best.found = true;
}

/** Takes the label point of `a` into account. */
function sinkInner(a: PreparedOutline, b: PreparedOutline, best: Deepest): void {
  const { x, y } = a.inner;
  if (holds(b, x, y)) deepen(best, Math.sqrt(squaredTo(b, nearestEdge(b, x, y), x, y)), x, y);
}

/** Takes the points of the outline of `a` into account. */
function sinkOutline(a: PreparedOutline, b: PreparedOutline, best: Deepest, enough: number): void {
  const cuts: number[] = [];
  // Whether the start of the edge lies inside; null while it may lie on the outline.
  let inside: boolean | null = null;
  for (let i = 0; i < a.count; i++) {
    const ax = a.xs[i]!;
    const ay = a.ys[i]!;
    const bx = a.xs[i + 1]!;
    const by = a.ys[i + 1]!;
    if (
      Math.max(ax, bx) < b.box.minX ||
      Math.min(ax, bx) > b.box.maxX ||
      Math.max(ay, by) < b.box.minY ||
      Math.min(ay, by) > b.box.maxY
    ) {
      inside = false;
      continue;
    }
    cuts.length = 0;
    collectCuts(b, 1, ax, ay, bx, by, cuts);
    if (cuts.length === 0) {
      inside ??= holds(b, ax, ay);
      if (inside) sinkStretch(b, ax, ay, bx, by, 0, 1, true, best);
    } else {
      cuts.push(0, 1);
      cuts.sort((p, q) => p - q);
      const length = Math.hypot(bx - ax, by - ay);
      for (let k = 1; k < cuts.length; k++) {
        const from = cuts[k - 1]!;
        const to = cuts[k]!;
        if ((to - from) * length > SHALLOW) sinkStretch(b, ax, ay, bx, by, from, to, false, best);
      }
      inside = null;
    }
    if (best.depth > enough) return;
  }
}

/** Collects where, as shares of it, the edge a → b meets the outline: every meeting, touches included. */
function collectCuts(
  shape: PreparedOutline,
  node: number,
  ax: number,
  ay: number,
  bx: number,
  by: number,
  cuts: number[]
): void {
  const { boxes, leaves, xs, ys, count } = shape;
  const at = node * 4;
  const minX = ax < bx ? ax : bx;
  const maxX = ax < bx ? bx : ax;
  const minY = ay < by ? ay : by;
  const maxY = ay < by ? by : ay;
  if (boxes[at]! > maxX || boxes[at + 2]! < minX || boxes[at + 1]! > maxY || boxes[at + 3]! < minY) return;
  if (node < leaves) {
    collectCuts(shape, node * 2, ax, ay, bx, by, cuts);
    collectCuts(shape, node * 2 + 1, ax, ay, bx, by, cuts);
    return;
  }
  const first = (node - leaves) * LEAF;
  const last = Math.min(first + LEAF, count);
  for (let i = first; i < last; i++) {
    const cx = xs[i]!;
    const cy = ys[i]!;
    const dx = xs[i + 1]!;
    const dy = ys[i + 1]!;
    if (Math.max(cx, dx) < minX || Math.min(cx, dx) > maxX) continue;
    if (Math.max(cy, dy) < minY || Math.min(cy, dy) > maxY) continue;
    const sc = side(ax, ay, bx, by, cx, cy);
    const sd = side(ax, ay, bx, by, dx, dy);
    if ((sc > 0 && sd > 0) || (sc < 0 && sd < 0)) continue;
    if (sc === 0 && sd === 0) {
      // Along one line: the stretch that both share is cut out.
      cuts.push(nearestShare(cx, cy, ax, ay, bx, by), nearestShare(dx, dy, ax, ay, bx, by));
      continue;
    }
    const sa = side(cx, cy, dx, dy, ax, ay);
    const sb = side(cx, cy, dx, dy, bx, by);
    if ((sa > 0 && sb > 0) || (sa < 0 && sb < 0)) continue;
    cuts.push(Math.min(1, Math.max(0, sa / (sa - sb))));
  }
}

/** Takes the stretch from share `t0` to `t1` of an edge into account; `inside` when it is known to lie inside. */
function sinkStretch(
  shape: PreparedOutline,
  ax: number,
  ay: number,
  bx: number,
  by: number,
  t0: number,
  t1: number,
  inside: boolean,
  best: Deepest
): void {
  const ux = bx - ax;
  const uy = by - ay;
  // A place of its own, so that a stretch outside can be dropped afterwards.
  const deepest: Deepest = { depth: Math.max(best.depth, SHALLOW), x: 0, y: 0, found: false };
  const e0 = nearestEdge(shape, ax + ux * t0, ay + uy * t0);
  const e1 = nearestEdge(shape, ax + ux * t1, ay + uy * t1);
  searchStretch({ shape, ax, ay, ux, uy, length: Math.hypot(ux, uy), deepest }, t0, e0, t1, e1);
  if (deepest.found && (inside || holds(shape, deepest.x, deepest.y)))
    deepen(best, deepest.depth, deepest.x, deepest.y);
}

interface Stretch {
  readonly shape: PreparedOutline;
  readonly ax: number;
  readonly ay: number;
  readonly ux: number;
  readonly uy: number;
  readonly length: number;
  readonly deepest: Deepest;
}

/** Distance of the place at share t from one edge. */
function gap(stretch: Stretch, t: number, edge: number): number {
  const { shape, ax, ay, ux, uy } = stretch;
  return Math.sqrt(squaredTo(shape, edge, ax + ux * t, ay + uy * t));
}

/** Finds the greatest distance to the outline between t0 and t1, whose nearest edges are e0 and e1. */
function searchStretch(stretch: Stretch, t0: number, e0: number, t1: number, e1: number): void {
  const { shape, ax, ay, ux, uy, length, deepest } = stretch;
  const d0 = gap(stretch, t0, e0);
  const d1 = gap(stretch, t1, e1);
  deepen(deepest, d0, ax + ux * t0, ay + uy * t0);
  deepen(deepest, d1, ax + ux * t1, ay + uy * t1);
  // Distance to one edge is convex along the stretch: no greater inside than at the worse end.
  const far0 = gap(stretch, t1, e0);
  const far1 = gap(stretch, t0, e1);
  const ceiling = Math.min(Math.max(d0, far0), Math.max(d1, far1), (d0 + d1 + (t1 - t0) * length) / 2);
  if (e0 === e1 || ceiling <= deepest.depth + EXACT) return;
  if ((t1 - t0) * length <= EXACT) return;
  // Where the edges are equally far, found by halving: up to there e0 bounds the distance, from there on e1.
  let low = t0;
  let high = t1;
  for (let step = 0; step < 50 && (high - low) * length > EXACT / 10; step++) {
    const middle = (low + high) / 2;
    if (gap(stretch, middle, e0) <= gap(stretch, middle, e1)) low = middle;
    else high = middle;
  }
  const t = (low + high) / 2;
  const bound = Math.max(gap(stretch, t, e0), gap(stretch, t, e1));
  if (bound <= deepest.depth + EXACT) return;
  const x = ax + ux * t;
  const y = ay + uy * t;
  const edge = nearestEdge(shape, x, y);
  const depth = gap(stretch, t, edge);
  deepen(deepest, depth, x, y);
  if (depth >= bound - EXACT) return;
  searchStretch(stretch, t0, e0, t, edge);
  searchStretch(stretch, t, edge, t1, e1);
}

function squaredTo(shape: PreparedOutline, edge: number, x: number, y: number): number {
  const { xs, ys } = shape;
  return pointSegmentSquared(x, y, xs[edge]!, ys[edge]!, xs[edge + 1]!, ys[edge + 1]!);
}

interface Search {
  squared: number;
  edge: number;
}

/** The edge of the outline nearest to (x, y). */
export function nearestEdge(shape: PreparedOutline, x: number, y: number): number {
  const search: Search = { squared: Infinity, edge: 0 };
  seek(shape, 1, x, y, search);
  return search.edge;
}

function boxSquared(boxes: Float64Array, at: number, x: number, y: number): number {
  const dx = Math.max(0, boxes[at]! - x, x - boxes[at + 2]!);
  const dy = Math.max(0, boxes[at + 1]! - y, y - boxes[at + 3]!);
  return dx * dx + dy * dy;
}

function seek(shape: PreparedOutline, node: number, x: number, y: number, search: Search): void {
  const { boxes, leaves, count } = shape;
  if (node < leaves) {
    const left = boxSquared(boxes, node * 8, x, y);
    const right = boxSquared(boxes, node * 8 + 4, x, y);
    const first = left <= right ? node * 2 : node * 2 + 1;
    if (Math.min(left, right) < search.squared) seek(shape, first, x, y, search);
    if (Math.max(left, right) < search.squared) seek(shape, first ^ 1, x, y, search);
    return;
  }
  const start = (node - leaves) * LEAF;
  const end = Math.min(start + LEAF, count);
  for (let i = start; i < end; i++) {
    const squared = squaredTo(shape, i, x, y);
    if (squared < search.squared) {
      search.squared = squared;
      search.edge = i;
    }
  }
}
