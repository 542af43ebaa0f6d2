import type { Millimetres } from '$lib/units/measure';
import type { Point } from './point';

/** How the strips beside two edges meet at an outward corner. `before` is the edge that ends there, `after` the one that starts. */
export type CornerJoin =
  /** Both lines run on straight until they meet. */
  | { readonly kind: 'mitred' }
  /** The strip of one edge runs on along its own straight and ends square where its edge, run on, meets the other line. */
  | { readonly kind: 'square'; readonly edge: 'before' | 'after' }
  /** The strip of one edge is turned back over it: its end follows the mirror image of the other edge's line. */
  | { readonly kind: 'mirrored'; readonly edge: 'before' | 'after' }
  /** Straight across, from the end of one line to the start of the other. */
  | { readonly kind: 'blunt' };

/** The line beside one edge. Joining corners shortens it at its ends. */
export interface Chain {
  readonly from: Point;
  readonly to: Point;
  /** Unit directions of the edge at its ends. */
  readonly start: Point;
  readonly end: Point;
  readonly distance: Millimetres;
  line: Point[];
}

/** Where lines run on to meet, they reach no farther from the corner than this many times the larger distance. */
export const REACH = 4;

const cross = (a: Point, b: Point): number => a.x * b.y - a.y * b.x;
const dot = (a: Point, b: Point): number => a.x * b.x + a.y * b.y;
const along = (p: Point, d: Point, t: number): Point => ({ x: p.x + d.x * t, y: p.y + d.y * t });
const less = (a: Point, b: Point): Point => ({ x: a.x - b.x, y: a.y - b.y });
const outward = (d: Point): Point => ({ x: d.y, y: -d.x });
const back = (d: Point): Point => ({ x: -d.x, y: -d.y });

/** Where segment a → b and segment c → d meet, as shares of both; null when they do not, or run alike. */
function meet(a: Point, b: Point, c: Point, d: Point): { at: Point; first: number; second: number } | null {
  const one = less(b, a);
  const two = less(d, c);
  const turn = cross(one, two);
  if (Math.abs(turn) < 1e-12) return null;
  const between = less(c, a);
  const first = cross(between, two) / turn;
  const second = cross(between, one) / turn;
  if (first < 0 || first > 1 || second < 0 || second > 1) return null;
  return { at: along(a, one, first), first, second };
}

/** Cuts the end off `line` where a ray first meets it, walking back from the end; whether it did. */
function cutEnd(line: Point[], from: Point, to: Point): boolean {
  for (let i = line.length - 1; i > 0; i--) {
    const hit = meet(line[i]!, line[i - 1]!, from, to);
    if (hit) {
      line.splice(i, line.length - i, hit.at);
      return true;
    }
  }
  return false;
}

/** Cuts the beginning off `line` where a ray first meets it; whether it did. */
function cutStart(line: Point[], from: Point, to: Point): boolean {
  const turned = line.toReversed();
  if (!cutEnd(turned, from, to)) return false;
  line.splice(0, line.length, ...turned.reverse());
  return true;
}

/** The points to walk between the chain `a` and the chain `b` that follows it, both of which may lose their ends here. */
export function joinCorner(a: Chain, b: Chain, join: CornerJoin): Point[] {
  const corner = b.from;
  const [wa, wb] = [a.distance, b.distance];
  if (wa === 0 && wb === 0) return [];
  const turn = Math.atan2(cross(a.end, b.start), dot(a.end, b.start));
  const bend = wa + wb > 0 ? turn : -turn;
  // Straight on: a step where the distances differ, nothing where they agree.
  if (Math.abs(turn) < 1e-4) return [];
  if (bend < 0) return inward(a, b, corner);
  switch (join.kind) {
    case 'blunt':
      return [];
    case 'square':
      return square(a, b, corner, join.edge === 'before') ?? mitred(a, b, corner, 0);
    case 'mirrored':
      return mirrored(a, b, corner, join.edge === 'before') ?? mitred(a, b, corner, 0);
    case 'mitred':
      return mitred(a, b, corner, Math.max(Math.abs(wa), Math.abs(wb)));
  }
}

/**
 * The strips overlap. They are walked through the corner itself, which is always right; where the bend is no sharper than square and the
 * lines cross early, the crossing is put in at once, to the last digit.
 */
function inward(a: Chain, b: Chain, corner: Point): Point[] {
  const [c, d] = [a.line[a.line.length - 2], a.line[a.line.length - 1]!];
  const [e, f] = [b.line[0]!, b.line[1]];
  const mild = dot(a.end, b.start) > -0.01 && a !== b;
  const hit = mild && c && f ? meet(c, d, e, f) : null;
  if (!hit || hit.first < 0.5 || hit.second > 0.5) return [corner];
  // The end of each strip must lie within the other one: a short edge beside a wide strip does not cover it.
  const sine = Math.abs(cross(a.end, b.start));
  const covers = (p: Point, q: Point, width: Millimetres) =>
    Math.hypot(q.x - p.x, q.y - p.y) >= Math.abs(width) * sine;
  if (!covers(c!, d, b.distance) || !covers(e, f!, a.distance)) return [corner];
  setEnd(a, hit.at);
  setStart(b, hit.at);
  return [];
}

const setEnd = (chain: Chain, to: Point): void => void (chain.line[chain.line.length - 1] = to);
const setStart = (chain: Chain, to: Point): void => void (chain.line[0] = to);

/**
 * Both lines run on until they meet. Where the narrower one meets the wider one beside its own edge, that takes the end of the
 * wider strip: `takes` is how much of its length may go. Beyond that there is a step, so that a shallow corner between two
 * different allowances never thins the wider one along its edge.
 */
function mitred(a: Chain, b: Chain, corner: Point, takes: Millimetres): Point[] {
  const [wa, wb] = [a.distance, b.distance];
  const most = REACH * Math.max(Math.abs(wa), Math.abs(wb));
  const sine = cross(a.end, b.start);
  const cosine = dot(a.end, b.start);
  // The meeting place lies `ahead` past the end of a's strip, and `behind` before the start of b's.
  const ahead = (wb - wa * cosine) / sine;
  const behind = (wa - wb * cosine) / sine;
  const endOfA = along(corner, outward(a.end), wa);
  const startOfB = along(corner, outward(b.start), wb);
  const tip = along(endOfA, a.end, ahead);
  const reach = Math.hypot(tip.x - corner.x, tip.y - corner.y);
  if (ahead >= 0 && behind >= 0 && Number.isFinite(reach)) {
    if (reach > most) return cutTip(a, b, corner, most);
    setEnd(a, tip);
    setStart(b, tip);
    return [];
  }
  if (reach <= most && Math.max(-ahead, -behind) <= takes) {
    // The narrower line, run on, meets the wider one beside its own edge.
    if (ahead < 0 && cutEnd(a.line, startOfB, along(startOfB, b.start, -most))) return [];
    if (behind < 0 && cutStart(b.line, endOfA, along(endOfA, a.end, most))) return [];
  }
  // Too far away or too costly: the wider strip ends square to its own edge, and the narrower one runs up to it.
  return Math.abs(wa) > Math.abs(wb)
    ? [along(corner, outward(a.end), wb / cosine)]
    : [along(corner, outward(b.start), wa / cosine)];
}

/** A sharp corner, cut off square to its middle. */
function cutTip(a: Chain, b: Chain, corner: Point, most: Millimetres): Point[] {
  const [na, nb] = [outward(a.end), outward(b.start)];
  const sign = a.distance + b.distance > 0 ? 1 : -1;
  // Between the two runs on; for a needle the normals cancel and this stays well defined.
  const middle = less(a.end, b.start);
  const size = Math.hypot(middle.x, middle.y);
  const u = { x: middle.x / size, y: middle.y / size };
  const first = along(corner, na, a.distance);
  const second = along(corner, nb, b.distance);
  const way = (from: Point, d: Point) =>
    Math.max(0, (most - dot(less(from, corner), u)) / (dot(d, u) || sign));
  setEnd(a, along(first, a.end, way(first, a.end)));
  setStart(b, along(second, b.start, -way(second, back(b.start))));
  return [];
}

/** One strip (of `a` when `first`) runs on and ends square; null where that would be too far away. */
function square(a: Chain, b: Chain, corner: Point, first: boolean): Point[] | null {
  const squared = first ? a : b;
  const other = first ? b : a;
  const sine = cross(a.end, b.start);
  const most = REACH * Math.max(Math.abs(a.distance), Math.abs(b.distance));
  const run = other.distance / sine;
  if (!(Math.abs(run) <= most)) return null;
  const onward = first ? a.end : back(b.start);
  const normal = first ? outward(a.end) : outward(b.start);
  const foot = along(corner, onward, run);
  const end = along(foot, normal, squared.distance);
  // Where the foot lies beside the other edge, the corner keeps both strips whole; the loop is taken away later.
  const beside = dot(less(foot, corner), first ? b.start : back(a.end)) > 1e-9;
  if (first) {
    setEnd(a, end);
    if (beside) return [foot, corner];
    setStart(b, foot);
    return [];
  }
  setStart(b, end);
  if (beside) return [corner, foot];
  setEnd(a, foot);
  return [];
}

/** One strip (of `a` when `first`) is turned back over its edge; null where the other line gives no image long enough. */
function mirrored(a: Chain, b: Chain, corner: Point, first: boolean): Point[] | null {
  const [hem, other] = first ? [a, b] : [b, a];
  const depth = hem.distance;
  if (depth <= 0) return null;
  // Everything is seen from the corner: the hem goes away along `hemWay`, the side along its line.
  const hemWay = first ? back(a.end) : b.start;
  const normal = first ? outward(a.end) : outward(b.start);
  const sideWay = first ? b.start : back(a.end);
  const sideFar = first ? b.end : back(a.start);
  const sideLine = first ? b.line : a.line.toReversed();
  const hemLine = first ? a.line.toReversed() : b.line;
  const height = (p: Point) => dot(less(p, corner), normal);
  const image = (p: Point) => along(p, normal, -2 * height(p));

  // Where the side's line, run on or cut back, meets the hem's edge, run on; and the line from there away from the corner.
  const nearest = sideLine[0]!;
  const passed = height(nearest) > 0;
  const next = sideLine.findIndex((point) => height(point) <= 0);
  const climb = -dot(sideWay, normal);
  if (passed ? next < 1 : climb < 1e-6) return null;
  const above = sideLine[next - 1]!;
  const from = passed
    ? along(above, less(sideLine[next]!, above), height(above) / (height(above) - height(sideLine[next]!)))
    : along(nearest, sideWay, height(nearest) / climb);
  const most = REACH * Math.max(depth, Math.abs(other.distance));
  if (Math.hypot(from.x - corner.x, from.y - corner.y) > most) return null;
  const rest = passed ? sideLine.slice(next) : sideLine.slice(1);
  // Long enough to reach the hem's line, even one that bends away.
  const last = rest[rest.length - 1] ?? nearest;
  const images = [...rest, along(last, sideFar, 3 * depth)].map(image);

  const start = hemLine[0]!;
  const ray = along(start, hemWay, -REACH * most);
  const path: Point[] = [];
  let at = from;
  let joined: Point[] | null = null;
  for (const to of images) {
    if (height(at) > 4 * depth) return null;
    const before = meet(at, to, ray, start);
    if (before) joined = [before.at, ...hemLine.slice(1)];
    for (let i = 1; i < hemLine.length && !joined; i++) {
      const hit = meet(at, to, hemLine[i - 1]!, hemLine[i]!);
      if (hit) joined = [hit.at, ...hemLine.slice(i)];
    }
    if (joined) break;
    path.push(to);
    at = to;
  }
  if (!joined) return null;
  hem.line.splice(0, hem.line.length, ...(first ? joined.reverse() : joined));
  if (passed) path.unshift(corner, from);
  else if (first) setStart(other, from);
  else setEnd(other, from);
  return first ? path.reverse() : path;
}
