import type { Point } from '$lib/geometry/point';
import type { Path, Segment } from '$lib/pattern/panel';
import type { Degrees, Millimetres } from '$lib/units/measure';
import { distance, flatten, pointOn, splitSegment } from './path-measure';

/** Edges part where the outline turns by more than this (common practice, no published source; the person corrects). */
export const CORNER_TURN: Degrees = 20;
/** How near a turn point of the file must be to a point of the outline. */
const TURN_POINT_WITHIN: Millimetres = 0.5;
/** No more corners than this are offered: the sharpest. */
const MOST_CORNERS = 120;

/**
 * A place on a closed path: the number of the segment and how far along it (its parameter), in one number. Whole
 * numbers are the points where segments meet; 2.5 is the middle of the third segment.
 */
export type Position = number;

/** One stretch of the outline from corner to corner. */
export interface OutlineEdge {
  /** The corner that it starts at. */
  at: Position;
  from: Point;
  segments: Segment[];
}

function direction(a: Point, b: Point): Point | null {
  const length = distance(a, b);
  return length < 1e-6 ? null : { x: (b.x - a.x) / length, y: (b.y - a.y) / length };
}

function starts(from: Point, segment: Segment): Point | null {
  return segment.kind === 'line'
    ? direction(from, segment.to)
    : (direction(from, segment.c1) ?? direction(from, segment.c2) ?? direction(from, segment.to));
}

function ends(from: Point, segment: Segment): Point | null {
  return segment.kind === 'line'
    ? direction(from, segment.to)
    : (direction(segment.c2, segment.to) ?? direction(segment.c1, segment.to) ?? direction(from, segment.to));
}

/** The point of a closed path at a position. */
export function pointAt(path: Path, position: Position): Point {
  const count = path.segments.length;
  const i = Math.min(count - 1, Math.floor(position));
  const from = i === 0 ? path.from : path.segments[i - 1]!.to;
  return pointOn(from, path.segments[i]!, Math.min(1, position - i));
}

/** The points where the segments of a closed path meet, by position 0, 1, 2 … */
export function nodesOf(path: Path): Point[] {
  return [path.from, ...path.segments.slice(0, -1).map((segment) => segment.to)];
}

/** How sharply a closed path turns at each of its nodes, 0 … 180°. */
export function turnsOf(path: Path): Degrees[] {
  const nodes = nodesOf(path);
  return nodes.map((node, i) => {
    const before = (i + nodes.length - 1) % nodes.length;
    const incoming = ends(nodes[before]!, path.segments[before]!);
    const outgoing = starts(node, path.segments[i]!);
    if (!incoming || !outgoing) return 0;
    const cross = incoming.x * outgoing.y - incoming.y * outgoing.x;
    const dot = incoming.x * outgoing.x + incoming.y * outgoing.y;
    return (Math.abs(Math.atan2(cross, dot)) * 180) / Math.PI;
  });
}

/**
 * Where a closed path has its corners: at the turn points that the file marks, else where it turns by more than 20°.
 * A path without corners gets one, at its start.
 */
export function cornersOf(path: Path, turnPoints: readonly Point[] = []): Position[] {
  const nodes = nodesOf(path);
  if (turnPoints.length > 0) {
    const marked = nodes.flatMap((node, i) =>
      turnPoints.some((point) => distance(point, node) <= TURN_POINT_WITHIN) ? [i] : []
    );
    if (marked.length > 0 && marked.length <= 400) return marked;
  }
  const turns = turnsOf(path);
  const corners = turns.flatMap((turn, i) => (turn > CORNER_TURN ? [i] : []));
  if (corners.length === 0) return [0];
  return corners
    .sort((a, b) => turns[b]! - turns[a]!)
    .slice(0, MOST_CORNERS)
    .sort((a, b) => a - b);
}

/** Positions within the path, each once, in order; a corner that fell on the end is the one at the start. */
export function tidyCorners(path: Path, corners: readonly Position[]): Position[] {
  const count = path.segments.length;
  const tidy = new Set<number>();
  for (const corner of corners) {
    if (!Number.isFinite(corner) || corner < 0 || corner > count) continue;
    const near = Math.round(corner);
    // Closer to a node than this a stretch would be too short to sew.
    const at = Math.abs(near - corner) < 1e-3 ? near : Math.round(corner * 1e6) / 1e6;
    tidy.add(at === count ? 0 : at);
  }
  return tidy.size === 0 ? [0] : [...tidy].sort((a, b) => a - b);
}

/** A closed path parted at its corners, in order around it; the first edge starts at the first corner. */
export function edgesAt(path: Path, corners: readonly Position[]): OutlineEdge[] {
  const cuts = tidyCorners(path, corners);
  const count = path.segments.length;
  return cuts.map((at, k) => {
    const next = cuts[(k + 1) % cuts.length]!;
    const end = next > at ? next : next + count;
    return { at, from: pointAt(path, at), segments: stretch(path, at, end) };
  });
}

/** The segments from one position to a later one; positions past the end go on from the start. */
function stretch(path: Path, start: Position, end: Position): Segment[] {
  const count = path.segments.length;
  const segments: Segment[] = [];
  for (let i = Math.floor(start); i < end; i += 1) {
    const segment = path.segments[i % count]!;
    const from = pointAt(path, i % count);
    const [a, b] = [Math.max(0, start - i), Math.min(1, end - i)];
    if (b - a < 1e-9) continue;
    const tail = a > 0 ? splitSegment(from, segment, a)[1] : segment;
    const tailFrom = a > 0 ? pointOn(from, segment, a) : from;
    segments.push(b < 1 ? splitSegment(tailFrom, tail, (b - a) / (1 - a))[0] : tail);
  }
  return segments;
}

/** Whether an edge is straight within `tolerance`, with its direction (0 … 180°) when it is. */
export function straightness(
  edge: { from: Point; segments: readonly Segment[] },
  tolerance: Millimetres = 0.1
): { angle: Degrees; length: Millimetres } | null {
  const to = edge.segments[edge.segments.length - 1]!.to;
  const length = distance(edge.from, to);
  if (length < 1) return null;
  const [ux, uy] = [(to.x - edge.from.x) / length, (to.y - edge.from.y) / length];
  for (const point of flatten({ from: edge.from, segments: [...edge.segments] }, tolerance / 2)) {
    const [dx, dy] = [point.x - edge.from.x, point.y - edge.from.y];
    const along = dx * ux + dy * uy;
    if (Math.abs(dx * uy - dy * ux) > tolerance || along < -tolerance || along > length + tolerance)
      return null;
  }
  return { angle: ((((Math.atan2(uy, ux) * 180) / Math.PI) % 180) + 180) % 180, length };
}

/** The smaller angle between two undirected lines, 0 … 90°. */
export function angleBetween(a: Degrees, b: Degrees): Degrees {
  const apart = (((a - b) % 180) + 180) % 180;
  return Math.min(apart, 180 - apart);
}
