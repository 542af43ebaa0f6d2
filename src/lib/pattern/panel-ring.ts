import { mapPath, pathLength, placeAt, splitAt } from '$lib/geometry/path';
import { snapPoint, type Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import { nearestOn, pathOf } from './edge-places';
import { freeId } from './edited';
import type { Corner, Edge, Panel, Segment } from './panel';

/*
 * An outline taken apart into its stretches and put together again: what cutting, joining and moving a dart have in common. Each
 * stretch knows the edge it is of; stretches of one edge that follow each other become that edge again, under its own id.
 */

export interface Stretch {
  readonly edge: string;
  readonly from: Point;
  readonly segment: Segment;
}

/** A place on the outline. */
export interface EdgePlace {
  readonly edge: string;
  readonly distance: Millimetres;
}

type EdgeTraits = Pick<Edge, 'allowance' | 'role'> & { readonly treatment: Corner['treatment'] };

/** Allowance, role and corner treatment of every edge. */
export function traitsOf(panel: Panel): Map<string, EdgeTraits> {
  return new Map(
    panel.edges.map(({ id, allowance, role }, i) => [
      id,
      { allowance, role, treatment: panel.corners[i]!.treatment }
    ])
  );
}

export function stretchesOf(edge: Edge): Stretch[] {
  return edge.segments.map((segment, k) => ({
    edge: edge.id,
    from: k === 0 ? edge.from : edge.segments[k - 1]!.to,
    segment
  }));
}

export function movedStretch({ edge, from, segment }: Stretch, move: (point: Point) => Point): Stretch {
  const path = mapPath({ from, segments: [segment] }, (point) => snapPoint(move(point)));
  return { edge, from: path.from, segment: path.segments[0]! };
}

/** A place nearer to a corner or a point than this is that point. */
const AT_POINT: Millimetres = 0.02;

/**
 * The outline from `start` round to `end`; null where the edge or the place is not there. Whole points are kept where a place falls on one.
 */
export function ringBetween(panel: Panel, start: EdgePlace, end: EdgePlace): Stretch[] | null {
  const ring: (Stretch & { opens: boolean; closes: boolean })[] = [];
  let found = 0;
  /** Places at the end of their edge: the start of the next one. */
  const pending = new Set<'opens' | 'closes'>();
  for (const edge of panel.edges) {
    const length = pathLength(pathOf(edge));
    const cuts = (
      [
        ['opens', start],
        ['closes', end]
      ] as const
    )
      .filter(([, place]) => place.edge === edge.id)
      .filter(([, { distance }]) => distance >= -AT_POINT && distance <= length + AT_POINT)
      .map(([what, { distance }]) => ({ what, distance }))
      .toSorted((a, b) => a.distance - b.distance);
    found += cuts.length;
    let rest = pathOf(edge);
    let gone = 0;
    let flags = { opens: false, closes: false };
    const put = (path: typeof rest) => {
      for (const stretch of stretchesOf({ ...edge, from: path.from, segments: [...path.segments] })) {
        ring.push({ ...stretch, ...flags });
        flags = { opens: false, closes: false };
      }
    };
    for (const { what, distance } of cuts) {
      const at = distance - gone;
      if (at > AT_POINT && distance < length - AT_POINT) {
        const [before, after] = splitAt(rest, at);
        const joint = snapPoint(after.from);
        const last = before.segments[before.segments.length - 1]!;
        put({ from: before.from, segments: [...before.segments.slice(0, -1), { ...last, to: joint }] });
        rest = { from: joint, segments: withoutSpeck(joint, after.segments) };
        gone = distance;
        flags[what] = true;
      } else if (distance >= length - AT_POINT) {
        // The corner at its end is the start of the next edge.
        put(rest);
        rest = { from: rest.from, segments: [] };
        pending.add(what);
      } else flags[what] = true;
    }
    if (rest.segments.length > 0) put(rest);
  }
  if (found < 2) return null;
  for (const what of pending) {
    const edge = what === 'opens' ? start.edge : end.edge;
    const last = ring.findLastIndex((one) => one.edge === edge);
    ring[(last + 1) % ring.length]![what] = true;
  }
  const first = ring.findIndex(({ opens }) => opens);
  if (first < 0) return null;
  const turned = [...ring.slice(first), ...ring.slice(0, first)];
  const stop = turned.findIndex(({ closes }) => closes);
  if (stop < 1) return null;
  return turned.slice(0, stop).map(({ edge, from, segment }) => ({ edge, from, segment }));
}

/** Segments after a cut without one that the cut left no length. */
function withoutSpeck(from: Point, segments: readonly Segment[]): Segment[] {
  const [first, ...others] = segments;
  if (!first || others.length === 0) return [...segments];
  return pathLength({ from, segments: [first] }) < AT_POINT ? [...others] : [...segments];
}

/** A mark on an edge with its place on the paper. */
export interface PlacedMark<Mark> {
  readonly mark: Mark;
  readonly point: Point;
  /** Length of the edge it stood on. */
  readonly length: Millimetres;
}

export function placedMarks<Mark extends EdgePlace>(
  panel: Panel,
  marks: readonly Mark[],
  move: (point: Point) => Point = (point) => point
): PlacedMark<Mark>[] {
  return marks.map((mark) => {
    const path = pathOf(panel.edges.find(({ id }) => id === mark.edge)!);
    const length = pathLength(path);
    return { mark, point: move(placeAt(path, Math.min(mark.distance, length)).point), length };
  });
}

export interface RebuiltOutline {
  readonly edges: Edge[];
  readonly corners: Corner[];
  /** Puts marks onto the edges that came of theirs; those whose edge went elsewhere are left out. */
  readonly place: <Mark extends EdgePlace>(marks: readonly PlacedMark<Mark>[]) => Mark[];
}

/** Puts stretches together into edges and corners. */
export function rebuilt(ring: readonly Stretch[], traits: ReadonlyMap<string, EdgeTraits>): RebuiltOutline {
  const n = ring.length;
  const begin = ring.findIndex((one, i) => one.edge !== ring[(i + n - 1) % n]!.edge);
  const turned = begin > 0 ? [...ring.slice(begin), ...ring.slice(0, begin)] : ring;
  const edges: Edge[] = [];
  const corners: Corner[] = [];
  const origins = new Map<string, string>();
  let current: string | null = null;
  for (const { edge: origin, from, segment } of turned) {
    const last = edges[edges.length - 1];
    if (last && current === origin) {
      last.segments.push(segment);
      continue;
    }
    current = origin;
    const id = freeId(
      origin,
      edges.map((edge) => edge.id)
    );
    const { allowance, role, treatment } = traits.get(origin)!;
    edges.push({ id, from, segments: [segment], allowance, role });
    corners.push({
      id: freeId(
        `at-${id}`,
        corners.map((corner) => corner.id)
      ),
      treatment
    });
    origins.set(id, origin);
  }
  const place = <Mark extends EdgePlace>(marks: readonly PlacedMark<Mark>[]): Mark[] =>
    marks.flatMap(({ mark, point, length }) => {
      const candidates = edges.filter(({ id }) => origins.get(id) === mark.edge);
      for (const edge of candidates) {
        const near = nearestOn(pathOf(edge), point);
        if (near.away > 0.05) continue;
        const unchanged = Math.abs(pathLength(pathOf(edge)) - length) < 0.002;
        const distance = unchanged
          ? Math.min(mark.distance, length)
          : Math.round(near.distance * 1000) / 1000;
        return [{ ...mark, edge: edge.id, distance }];
      }
      return [];
    });
  return { edges, corners, place };
}
