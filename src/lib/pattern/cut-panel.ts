import { innermost } from '$lib/geometry/label';
import { endOf, flatten, pathLength, reversed, type Path } from '$lib/geometry/path';
import { snapPoint, type Point } from '$lib/geometry/point';
import { area, counterClockwise, locate, meetingPoint } from '$lib/geometry/polygon';
import type { Millimetres } from '$lib/units/measure';
import { nearestEdge, nearestOn, pathOf } from './edge-places';
import { accepted, freeId, refused, type Edited } from './edited';
import { flatEdges, outlineOfEdges } from './flat-edge';
import type { Panel } from './panel';
import { placedMarks, rebuilt, ringBetween, traitsOf, type EdgePlace, type Stretch } from './panel-ring';

export interface CutChoice {
  /** Seam allowance on both sides of the cut. */
  readonly allowance: Millimetres;
  /** Id and name of the second panel. */
  readonly id: string;
  readonly name: string;
}

/** A line of the panel may end this far off the outline and still cut it through. */
const NEARLY = 1;

/** Where the straight line through two places enters and leaves the outline around the middle between them. */
function throughBoth(panel: Panel, a: Point, b: Point): { from: EdgePlace; to: EdgePlace } | null {
  const length = Math.hypot(b.x - a.x, b.y - a.y);
  if (length < 0.1) return null;
  const way = { x: (b.x - a.x) / length, y: (b.y - a.y) / length };
  const far = 1e5;
  const [start, end] = [
    { x: a.x - way.x * far, y: a.y - way.y * far },
    { x: b.x + way.x * far, y: b.y + way.y * far }
  ];
  const hits: { t: number; point: Point }[] = [];
  for (const { points } of flatEdges(panel, (p) => p))
    for (let i = 1; i < points.length; i++) {
      const point = meetingPoint(start, end, points[i - 1]!, points[i]!);
      if (point) hits.push({ t: (point.x - a.x) * way.x + (point.y - a.y) * way.y, point });
    }
  const middle = length / 2;
  const before = hits.filter(({ t }) => t <= middle).sort((p, q) => q.t - p.t)[0];
  const after = hits.filter(({ t }) => t > middle).sort((p, q) => p.t - q.t)[0];
  if (!before || !after) return null;
  return { from: nearestEdge(panel, before.point), to: nearestEdge(panel, after.point) };
}

/** Cuts along the straight line through two places. */
export function cutStraight(panel: Panel, a: Point, b: Point, choice: CutChoice): Edited<[Panel, Panel]> {
  const places = throughBoth(panel, a, b);
  if (!places)
    return refused('The line does not cross the panel: choose two places whose line runs through it.');
  return cutBetween(panel, places.from, places.to, null, choice);
}

/** Cuts along an internal line that runs from edge to edge; the line itself becomes the two cut edges. */
export function cutAlongLine(panel: Panel, id: string, choice: CutChoice): Edited<[Panel, Panel]> {
  const line = panel.internalLines.find((one) => one.id === id);
  if (!line) return refused('There is no such line.');
  const [from, to] = [nearestEdge(panel, line.path.from), nearestEdge(panel, endOf(line.path))];
  const short = Math.max(from.away, to.away);
  if (short > NEARLY)
    return refused(
      `The line ends ${short.toFixed(1)} mm inside the outline: lengthen it to the edges first.`
    );
  const without = { ...panel, internalLines: panel.internalLines.filter((one) => one !== line) };
  return cutBetween(without, from, to, line.path, choice);
}

/**
 * Two panels of one, cut from one place of the outline to another along `via` (straight when null), with an allowance along the cut on both
 * sides. Edges keep their ids in both; the cut edges share one, so that they can be walked and joined again. A half that leaves the fold
 * becomes a pair.
 */
export function cutBetween(
  panel: Panel,
  from: EdgePlace,
  to: EdgePlace,
  via: Path | null,
  choice: CutChoice
): Edited<[Panel, Panel]> {
  const one = ringBetween(panel, from, to);
  const two = ringBetween(panel, to, from);
  if (!one || !two) return refused('A cut runs from one place of the outline to another one.');
  const [start, end] = [one[0]!.from, two[0]!.from];
  const cut: Path = via
    ? {
        from: start,
        segments: via.segments.map((segment, i) =>
          i === via.segments.length - 1 ? { ...segment, to: end } : segment
        )
      }
    : { from: start, segments: [{ kind: 'line', to: end }] };
  if (pathLength(cut) < 1) return refused('The cut has no length.');
  const cutId = freeId(
    'cut',
    panel.edges.map(({ id }) => id)
  );
  const cutEdge = (path: Path): Stretch[] =>
    path.segments.map((segment, k) => ({
      edge: cutId,
      from: k === 0 ? path.from : path.segments[k - 1]!.to,
      segment
    }));
  const parts = [
    part(panel, [...one, ...cutEdge(reversed(cut))], cutId, choice),
    part(panel, [...two, ...cutEdge(cut)], cutId, choice)
  ];
  if (
    panel.cutOuts.some(
      ({ from: place }, i) => !parts.some((half) => half.cutOuts.includes(panel.cutOuts[i]!) && place)
    )
  )
    return refused('The cut runs through a cut-out: cut beside it.');
  const keeps =
    parts[0]!.fold !== null ? 0 : parts[1]!.fold !== null ? 1 : Number(sizeOf(parts[1]!) > sizeOf(parts[0]!));
  const first = accepted(parts[keeps]!, panel);
  if (first.refused !== undefined) return first;
  const offFold = panel.fold !== null && parts[1 - keeps]!.fold === null;
  const other = { ...parts[1 - keeps]!, id: choice.id, name: choice.name };
  const second = accepted(
    offFold ? { ...other, paired: true, symmetric: false, howMany: panel.howMany * 2, fold: null } : other,
    panel
  );
  if (second.refused !== undefined) return second;
  return { made: [first.made, second.made] };
}

const ringPoints = (panel: Panel): Point[] => outlineOfEdges(flatEdges(panel, (p) => p));
const sizeOf = (panel: Panel): number => Math.abs(area(ringPoints(panel)));

function part(panel: Panel, ring: readonly Stretch[], cutId: string, choice: CutChoice): Panel {
  const traits = traitsOf(panel);
  traits.set(cutId, { allowance: choice.allowance, role: 'seam', treatment: 'mitred' });
  const { edges, corners, place } = rebuilt(ring, traits);
  const bare: Panel = {
    ...panel,
    edges,
    corners,
    fold: edges.some(({ id }) => id === panel.fold) ? panel.fold : null,
    notches: place(placedMarks(panel, panel.notches)),
    matchPoints: place(placedMarks(panel, panel.matchPoints))
  };
  const outline = ringPoints(bare);
  const inside = (point: Point): boolean => locate(outline, point) !== 'outside';
  const middle = (path: Path): Point => {
    const points = flatten(path);
    const half = nearestOn(path, points[Math.floor(points.length / 2)]!);
    return half.point;
  };
  return {
    ...bare,
    cutOuts: panel.cutOuts.filter((path) => flatten(path).every(inside)),
    drillHoles: panel.drillHoles.filter(({ at }) => inside(at)),
    internalLines: panel.internalLines.filter(({ path }) => inside(middle(path))),
    grain: grainInside(panel, outline)
  };
}

/** The grain line of the whole, moved well inside the part where it does not lie there already. */
function grainInside(panel: Panel, outline: readonly Point[]): Panel['grain'] {
  const { from, to, confirmed } = panel.grain;
  const simple = counterClockwise(outline);
  if (locate(simple, from) !== 'outside' && locate(simple, to) !== 'outside') return panel.grain;
  if (Math.abs(area(simple)) < 1) return panel.grain;
  const at = innermost(simple);
  const length = Math.hypot(to.x - from.x, to.y - from.y);
  if (length < 0.001) return panel.grain;
  const half = Math.max(0.5, Math.min(length / 2, at.clear * 0.9));
  const way = { x: ((to.x - from.x) / length) * half, y: ((to.y - from.y) / length) * half };
  return {
    from: snapPoint({ x: at.x - way.x, y: at.y - way.y }),
    to: snapPoint({ x: at.x + way.x, y: at.y + way.y }),
    confirmed
  };
}

/** Where an edge's own path is: for callers that name a place by a point. */
export function placeNear(panel: Panel, point: Point): EdgePlace {
  const { edge, distance } = nearestEdge(panel, point);
  const length = pathLength(pathOf(panel.edges.find(({ id }) => id === edge)!));
  return { edge, distance: Math.min(Math.max(0, distance), length) };
}
