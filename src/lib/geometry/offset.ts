import type { Millimetres } from '$lib/units/measure';
import { joinCorner, type Chain, type CornerJoin } from './offset-corner';
import { outerRing } from './outer-ring';
import { distanceToOutline } from './outline-distance';
import { contains } from './polygon';
import type { Outline, Point } from './point';

/*
 * A line round an outline at a distance that may differ from edge to edge: the cut line round a sew line.
 *
 * Each edge carries a strip as wide as its distance, each corner between them a patch that its treatment gives. The outline with all
 * strips and patches is what is wanted; its border is found by walking the raw line and taking the loops away. Where strips overlap
 * (inward corners, curves tighter than the distance) the raw line goes through the corner itself, so that every strip and patch is run
 * round the same way and the loops can be told from the border by their winding number.
 */

export interface OffsetEdge {
  /** The edge from corner to corner, both ends included, counter-clockwise round the outline. */
  readonly points: readonly Point[];
  /** How far outside the new line runs; negative for inside. All edges of an outline have one sign, 0 goes with both. */
  readonly distance: Millimetres;
  /** How the strips meet at the corner where this edge starts. */
  readonly corner: CornerJoin;
}

/**
 * The outline at each edge's own distance: simple, counter-clockwise, on the 0.001 mm grid. null when an inside line leaves
 * nothing. Bays that the strips close off are filled. Throws a RangeError for edges without length.
 */
export function offsetOutline(edges: readonly OffsetEdge[]): Point[] | null {
  const found = joinAndClear(edges);
  if (!found || edges.some(({ distance }) => distance < 0) || surrounds(found, edges)) return found;
  // A mirror image or a line run on may cut deep into an edge that bends away sharply: such corners are made plainer.
  const mitred = edges.map((edge): OffsetEdge =>
    edge.corner.kind === 'mirrored' ? { ...edge, corner: { kind: 'mitred' } } : edge
  );
  const plainer = joinAndClear(mitred);
  if (plainer && surrounds(plainer, edges)) return plainer;
  return joinAndClear(edges.map((edge): OffsetEdge => ({ ...edge, corner: { kind: 'blunt' } })));
}

function joinAndClear(edges: readonly OffsetEdge[]): Point[] | null {
  const chains = edges.map(chainOf);
  const middles = edges.map((edge, i) => {
    const before = chains[(i + chains.length - 1) % chains.length]!;
    return joinCorner(before, chains[i]!, edge.corner);
  });
  return outerRing(chains.flatMap((chain, i) => [...middles[i]!, ...chain.line]));
}

/** Whether every point of the edges lies in `outline` or, for the rounding to the grid, on it. */
function surrounds(outline: Outline, edges: readonly OffsetEdge[]): boolean {
  return edges.every(({ points }) =>
    points.every((point) => contains(outline, point) || distanceToOutline(outline, point) < 0.003)
  );
}

/** The line beside one edge, not yet joined to its neighbours. */
function chainOf({ points: given, distance }: OffsetEdge): Chain {
  const points = given.filter((p, i) => i === 0 || p.x !== given[i - 1]!.x || p.y !== given[i - 1]!.y);
  const directions = points.slice(1).map((b, i) => {
    const a = points[i]!;
    const length = Math.hypot(b.x - a.x, b.y - a.y);
    return { x: (b.x - a.x) / length, y: (b.y - a.y) / length, length };
  });
  if (directions.length === 0) {
    const at = given[0];
    throw new RangeError(at ? `An edge at (${at.x}, ${at.y}) has no length` : 'An edge has no points');
  }
  const beside = (p: Point, d: Point): Point => ({ x: p.x + d.y * distance, y: p.y - d.x * distance });
  const start = directions[0]!;
  const end = directions[directions.length - 1]!;
  const line: Point[] = [beside(points[0]!, start)];
  // How much of the segments on both sides the join at each inner point takes; negative where it adds.
  const takes = points.map((_, i) => {
    if (i === 0 || i === points.length - 1) return 0;
    const [a, b] = [directions[i - 1]!, directions[i]!];
    const cross = a.x * b.y - a.y * b.x;
    const dot = a.x * b.x + a.y * b.y;
    return (-distance * cross) / (1 + Math.max(dot, -0.999999));
  });
  for (let i = 1; i < points.length - 1; i++) {
    const [a, b] = [directions[i - 1]!, directions[i]!];
    const p = points[i]!;
    const fits = a.length - takes[i - 1]! - takes[i]! > 0 && b.length - takes[i]! - takes[i + 1]! > 0;
    const opening = takes[i]! <= 0;
    // Where the new line bends outward by at most a right angle, or inward with room, the two straight lines meet.
    if (a.x * b.x + a.y * b.y >= 0 && (opening || fits)) {
      const side = beside(p, a);
      line.push({ x: side.x - a.x * takes[i]!, y: side.y - a.y * takes[i]! });
    } else if (opening) {
      line.push(...joinInner(p, a, b, distance));
    } else {
      line.push(beside(p, a), p, beside(p, b));
    }
  }
  line.push(beside(points[points.length - 1]!, end));
  return { from: points[0]!, to: points[points.length - 1]!, start, end, distance, line };
}

/** A sharp outward bend within one edge: mitred like a corner. */
function joinInner(at: Point, a: Point, b: Point, distance: Millimetres): Point[] {
  const beside = (d: Point): Point => ({ x: at.x + d.y * distance, y: at.y - d.x * distance });
  const before: Chain = { from: at, to: at, start: a, end: a, distance, line: [beside(a)] };
  const after: Chain = { from: at, to: at, start: b, end: b, distance, line: [beside(b)] };
  const middle = joinCorner(before, after, { kind: 'mitred' });
  return [...before.line, ...middle, ...after.line];
}
