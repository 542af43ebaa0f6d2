import { pathLength, splitAt } from '$lib/geometry/path';
import { snapPoint, type Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import { keepMarks, pathOf } from './edge-places';
import { accepted, freeId, refused, type Edited } from './edited';
import type { Edge, Panel, Segment } from './panel';

/*
 * Points and handles of an outline. A point is named by its edge and its number on it: 0 is the corner where the edge starts. Every
 * operation gives a panel that holds, or a refusal; ids of edges survive, marks stay where they stand.
 */

export interface PointName {
  readonly edge: string;
  /** 0: the corner at the start of the edge. */
  readonly at: number;
}

export interface OutlinePoint extends PointName {
  readonly point: Point;
  readonly corner: boolean;
}

/** All points of the outline, in order. */
export function outlinePoints(panel: Panel): OutlinePoint[] {
  return panel.edges.flatMap((edge) =>
    [edge.from, ...edge.segments.slice(0, -1).map(({ to }) => to)].map((point, at) => ({
      edge: edge.id,
      at,
      point,
      corner: at === 0
    }))
  );
}

const noPoint = ({ edge, at }: PointName) => refused(`There is no point ${at} on edge ${edge}.`);
const plus = (a: Point, b: Point): Point => ({ x: a.x + b.x, y: a.y + b.y });
const between = (a: Point, b: Point, t: number): Point => ({
  x: a.x + (b.x - a.x) * t,
  y: a.y + (b.y - a.y) * t
});
const apart = (a: Point, b: Point): number => Math.hypot(a.x - b.x, a.y - b.y);

/** Where segment `k` of an edge starts. */
const startOf = (edge: Edge, k: number): Point => (k === 0 ? edge.from : edge.segments[k - 1]!.to);

/** An edge with some of its segments replaced. */
function withSegments(edge: Edge, from: number, count: number, now: readonly Segment[]): Edge {
  return { ...edge, segments: edge.segments.toSpliced(from, count, ...now) };
}

function replaced(panel: Panel, ...edges: Edge[]): Panel {
  const now = new Map(edges.map((edge) => [edge.id, edge]));
  return { ...panel, edges: panel.edges.map((edge) => now.get(edge.id) ?? edge) };
}

/** The panel with a point elsewhere, its handles carried along, without asking whether it holds: for drawing while dragging. */
export function pointDragged(panel: Panel, { edge: id, at }: PointName, to: Point): Panel | null {
  const index = panel.edges.findIndex((edge) => edge.id === id);
  const edge = panel.edges[index];
  const was = edge && (at < edge.segments.length ? startOf(edge, at) : undefined);
  if (!edge || !was) return null;
  const place = snapPoint(to);
  const by = { x: place.x - was.x, y: place.y - was.y };
  const arriving = (segment: Segment): Segment =>
    segment.kind === 'line' ? { ...segment, to: place } : { ...segment, c2: plus(segment.c2, by), to: place };
  const leaving = (segment: Segment): Segment =>
    segment.kind === 'line' ? segment : { ...segment, c1: plus(segment.c1, by) };
  const edges = panel.edges.map((one) => one);
  edges[index] = withSegments(edge, at, 1, [leaving(edge.segments[at]!)]);
  if (at > 0) edges[index] = withSegments(edges[index]!, at - 1, 1, [arriving(edge.segments[at - 1]!)]);
  else {
    edges[index] = { ...edges[index]!, from: place };
    const before = (index + edges.length - 1) % edges.length;
    const last = edges[before]!.segments.length - 1;
    edges[before] = withSegments(edges[before]!, last, 1, [arriving(edges[before]!.segments[last]!)]);
  }
  return keepMarks(panel, { ...panel, edges });
}

/** Moves a point of the outline; the handles beside it go along. */
export function movePoint(panel: Panel, name: PointName, to: Point): Edited {
  const moved = pointDragged(panel, name, to);
  return moved ? accepted(moved, panel) : noPoint(name);
}

/** Puts a point on an edge, `distance` from its start; the line stays what it is. */
export function addPoint(panel: Panel, id: string, distance: Millimetres): Edited {
  const edge = panel.edges.find((one) => one.id === id);
  if (!edge) return refused(`There is no edge ${id}.`);
  const length = pathLength(pathOf(edge));
  if (!(distance > 0.01 && distance < length - 0.01))
    return refused(`Edge ${id} is ${length.toFixed(1)} mm long; a point goes between its ends.`);
  const [before, after] = splitAt(pathOf(edge), distance);
  return accepted(replaced(panel, { ...edge, segments: [...before.segments, ...after.segments] }), panel);
}

/** Takes a point off an edge; a curve goes on fairly over where it was. A corner is made one edge of two first. */
export function deletePoint(panel: Panel, name: PointName): Edited {
  const edge = panel.edges.find(({ id }) => id === name.edge);
  if (!edge || !(name.at >= 0 && name.at < edge.segments.length)) return noPoint(name);
  if (name.at === 0)
    return refused('This is a corner, where two edges meet: make one edge of the two first, then delete it.');
  const [a, b] = [edge.segments[name.at - 1]!, edge.segments[name.at]!];
  const from = startOf(edge, name.at - 1);
  let one: Segment = { kind: 'line', to: b.to };
  if (a.kind === 'cubic' || b.kind === 'cubic') {
    const curves = a.kind === 'cubic' && b.kind === 'cubic';
    const [la, lb] = curves
      ? [apart(a.c2, a.to), apart(a.to, b.c1)]
      : [pathLength({ from, segments: [a] }), pathLength({ from: a.to, segments: [b] })];
    // A curve cut at t has handles at the cut of t : 1 − t, and outer ones t and 1 − t of the whole's.
    const t = Math.min(0.95, Math.max(0.05, la / (la + lb || 1)));
    const c1 = a.kind === 'cubic' ? between(from, a.c1, 1 / t) : between(from, a.to, 1 / (3 * t));
    const c2 = b.kind === 'cubic' ? between(b.to, b.c2, 1 / (1 - t)) : between(b.to, a.to, 1 / (3 * (1 - t)));
    one = { kind: 'cubic', c1: snapPoint(c1), c2: snapPoint(c2), to: b.to };
  }
  return accepted(keepMarks(panel, replaced(panel, withSegments(edge, name.at - 1, 2, [one]))), panel);
}

/** Makes a stretch of an edge straight or a curve; a new curve lies on the line until its handles are moved. */
export function setStretch(panel: Panel, id: string, k: number, kind: Segment['kind']): Edited {
  const edge = panel.edges.find((one) => one.id === id);
  const segment = edge?.segments[k];
  if (!edge || !segment) return refused(`There is no stretch ${k + 1} on edge ${id}.`);
  if (segment.kind === kind) return { made: panel };
  const from = startOf(edge, k);
  const { to } = segment;
  const now: Segment =
    kind === 'line'
      ? { kind, to }
      : { kind, c1: snapPoint(between(from, to, 1 / 3)), c2: snapPoint(between(from, to, 2 / 3)), to };
  return accepted(keepMarks(panel, replaced(panel, withSegments(edge, k, 1, [now]))), panel);
}

export interface HandleName {
  readonly edge: string;
  readonly stretch: number;
  readonly handle: 'c1' | 'c2';
}

/** How far from straight through two handles count as one smooth line, as a sine. */
const SMOOTH = Math.sin(Math.PI / 180);

/** The panel with a handle elsewhere, unchecked: for drawing while dragging. The line stays smooth where it was. */
export function handleDragged(
  panel: Panel,
  { edge: id, stretch: k, handle }: HandleName,
  to: Point
): Panel | null {
  const edge = panel.edges.find((one) => one.id === id);
  const segment = edge?.segments[k];
  if (!edge || segment?.kind !== 'cubic') return null;
  const place = snapPoint(to);
  let now = withSegments(edge, k, 1, [{ ...segment, [handle]: place }]);
  const other = handle === 'c1' ? k - 1 : k + 1;
  const beside = edge.segments[other];
  const hinge = handle === 'c1' ? startOf(edge, k) : segment.to;
  if (beside?.kind === 'cubic') {
    const far = handle === 'c1' ? beside.c2 : beside.c1;
    const [near, length] = [segment[handle], apart(far, hinge)];
    const [a, b] = [apart(near, hinge), apart(place, hinge)];
    const cross = (near.x - hinge.x) * (far.y - hinge.y) - (near.y - hinge.y) * (far.x - hinge.x);
    const dot = (near.x - hinge.x) * (far.x - hinge.x) + (near.y - hinge.y) * (far.y - hinge.y);
    if (a > 0.01 && b > 0.01 && length > 0.01 && dot < 0 && Math.abs(cross) < SMOOTH * a * length) {
      const turned = snapPoint(between(hinge, place, -length / b));
      now = withSegments(now, other, 1, [{ ...beside, [handle === 'c1' ? 'c2' : 'c1']: turned }]);
    }
  }
  return keepMarks(panel, replaced(panel, now));
}

/** Moves a handle of a curve; where the line ran smoothly through the point it still does. */
export function moveHandle(panel: Panel, name: HandleName, to: Point): Edited {
  const moved = handleDragged(panel, name, to);
  return moved ? accepted(moved, panel) : refused('That stretch is straight: make it a curve first.');
}

/** Makes a corner of a point: from there on the edge is one of its own, with the same allowance. */
export function splitEdge(panel: Panel, { edge: id, at }: PointName): Edited {
  const index = panel.edges.findIndex((edge) => edge.id === id);
  const edge = panel.edges[index];
  if (!edge || !(at > 0 && at < edge.segments.length))
    return refused('A corner is made of a point inside an edge.');
  if (panel.fold === id) return refused('The edge on the fold stays one edge.');
  const first = { ...edge, segments: edge.segments.slice(0, at) };
  const length = pathLength(pathOf(first));
  const second = {
    ...edge,
    id: freeId(
      id,
      panel.edges.map((one) => one.id)
    ),
    from: startOf(edge, at),
    segments: edge.segments.slice(at)
  };
  const shift = <Mark extends { edge: string; distance: number }>(mark: Mark): Mark =>
    mark.edge === id && mark.distance > length
      ? { ...mark, edge: second.id, distance: mark.distance - length }
      : mark;
  return accepted(
    {
      ...panel,
      edges: panel.edges.toSpliced(index, 1, first, second),
      corners: panel.corners.toSpliced(index + 1, 0, {
        id: freeId(
          `at-${second.id}`,
          panel.corners.map((one) => one.id)
        ),
        treatment: 'mitred'
      }),
      notches: panel.notches.map(shift),
      matchPoints: panel.matchPoints.map(shift)
    },
    panel
  );
}

/** Makes one edge of two: the edge that starts at a corner becomes part of the one before it, with that one's allowance. */
export function mergeAtCorner(panel: Panel, id: string): Edited {
  const index = panel.edges.findIndex((edge) => edge.id === id);
  const edge = panel.edges[index];
  if (!edge) return refused(`There is no edge ${id}.`);
  if (panel.edges.length < 3) return refused('An outline keeps two edges at least.');
  const before = panel.edges[(index + panel.edges.length - 1) % panel.edges.length]!;
  if (panel.fold === id || panel.fold === before.id)
    return refused('The edge on the fold stays an edge of its own.');
  const length = pathLength(pathOf(before));
  const shift = <Mark extends { edge: string; distance: number }>(mark: Mark): Mark =>
    mark.edge === id ? { ...mark, edge: before.id, distance: mark.distance + length } : mark;
  const joined = { ...before, segments: [...before.segments, ...edge.segments] };
  return accepted(
    {
      ...panel,
      edges: panel.edges.filter((one) => one !== edge).map((one) => (one === before ? joined : one)),
      corners: panel.corners.toSpliced(index, 1),
      notches: panel.notches.map(shift),
      matchPoints: panel.matchPoints.map(shift)
    },
    panel
  );
}
