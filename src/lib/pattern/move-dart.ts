import { mapPath, pathLength, type Path } from '$lib/geometry/path';
import { snapPoint, type Point } from '$lib/geometry/point';
import { nearestOn } from './edge-places';
import { outlinePoints, type PointName } from './edit-points';
import { accepted, refused, type Edited } from './edited';
import type { Panel } from './panel';
import {
  movedStretch,
  placedMarks,
  rebuilt,
  ringBetween,
  traitsOf,
  type EdgePlace,
  type Stretch
} from './panel-ring';

/*
 * Moving a dart: the old one is closed by turning one side about the point of the dart, which opens a new one where the outline was cut.
 * Nothing is stretched: what lies beside the darts keeps its length.
 */

export interface Dart {
  /** The point of the dart, inside the panel. */
  readonly tip: PointName;
  readonly legs: readonly [Point, Point];
  readonly at: Point;
  /** Of the dart, degrees. */
  readonly angle: number;
  /** Across its mouth. */
  readonly intake: number;
}

/** Legs that differ by no more than this are two sides of a dart: 1/16 inch. */
const LEG_TOLERANCE = 1.6;

/** Every dart that is cut out of the outline: a point that reaches inward between two straight legs of one length. */
export function dartsOf(panel: Panel): Dart[] {
  const points = outlinePoints(panel);
  const n = points.length;
  return points.flatMap((tip, i): Dart[] => {
    const [a, b] = [points[(i + n - 1) % n]!, points[(i + 1) % n]!];
    if (n < 5 || stretchFrom(panel, a)?.kind !== 'line' || stretchFrom(panel, tip)?.kind !== 'line')
      return [];
    const [u, v] = [minus(a.point, tip.point), minus(b.point, tip.point)];
    const [la, lb] = [Math.hypot(u.x, u.y), Math.hypot(v.x, v.y)];
    // Counter-clockwise, an inward point turns to the right; its mouth opens outward and is narrower than a right angle.
    const turn = u.x * v.y - u.y * v.x;
    const angle = (Math.atan2(turn, u.x * v.x + u.y * v.y) * 180) / Math.PI;
    if (Math.abs(la - lb) > LEG_TOLERANCE || la < 10 || !(angle > 0.2 && angle < 90)) return [];
    return [
      {
        tip: { edge: tip.edge, at: tip.at },
        legs: [a.point, b.point],
        at: tip.point,
        angle,
        intake: Math.hypot(a.point.x - b.point.x, a.point.y - b.point.y)
      }
    ];
  });
}

const minus = (a: Point, b: Point): Point => ({ x: a.x - b.x, y: a.y - b.y });

function stretchFrom(panel: Panel, { edge, at }: PointName) {
  return panel.edges.find(({ id }) => id === edge)?.segments[at];
}

function placeOf(panel: Panel, { edge: id, at }: PointName): EdgePlace {
  const edge = panel.edges.find((one) => one.id === id)!;
  return {
    edge: id,
    distance: at === 0 ? 0 : pathLength({ from: edge.from, segments: edge.segments.slice(0, at) })
  };
}

/** Closes the dart with its point at `tip` and opens it at `opening`, from the same point of the dart. */
export function moveDart(panel: Panel, tip: PointName, opening: EdgePlace): Edited {
  const dart = dartsOf(panel).find((one) => one.tip.edge === tip.edge && one.tip.at === tip.at);
  if (!dart)
    return refused(
      'There is no dart here: a dart is a point inward between two straight legs of one length.'
    );
  const points = outlinePoints(panel);
  const i = points.findIndex((one) => one.edge === tip.edge && one.at === tip.at);
  const [a, b] = [points[(i + points.length - 1) % points.length]!, points[(i + 1) % points.length]!];
  // Round the outline: second leg's end → opening → first leg's end.
  const onward = ringBetween(panel, placeOf(panel, b), opening);
  const back = ringBetween(panel, opening, placeOf(panel, a));
  const round = ringBetween(panel, placeOf(panel, b), placeOf(panel, a));
  if (!onward || !back || !round || onward.length + back.length > round.length + 2)
    return refused('The new dart opens on the outline, away from the legs of the old one.');
  const start = back[0]!.from;
  const reach = Math.hypot(start.x - dart.at.x, start.y - dart.at.y);
  if (reach < 10) return refused('The new dart would be shorter than 10 mm.');
  const hasFold = onward.some(({ edge }) => edge === panel.fold);
  // The part with the fold stays where it is, so that the fold stays on grain; else the one that starts the outline anew.
  const turnOnward = !hasFold;
  const angle = ((turnOnward ? -1 : 1) * dart.angle * Math.PI) / 180;
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  const turned = (point: Point): Point => {
    const d = minus(point, dart.at);
    return { x: dart.at.x + d.x * cos - d.y * sin, y: dart.at.y + d.x * sin + d.y * cos };
  };
  const swing = (part: readonly Stretch[]) => part.map((one) => movedStretch(one, turned));
  const [first, second] = turnOnward ? [swing(onward), [...back]] : [[...onward], swing(back)];
  // The closed legs meet in one point; legs within tolerance are drawn to it.
  const shut = turnOnward ? a.point : b.point;
  if (turnOnward) first[0] = { ...first[0]!, from: shut };
  else {
    const last = second[second.length - 1]!;
    second[second.length - 1] = { ...last, segment: { ...last.segment, to: shut } };
  }
  const mouth = first[first.length - 1]!.segment.to;
  // Legs that were edges of their own stay so; legs inside an edge become part of the one they open in.
  const ids = a.edge === tip.edge ? [opening.edge, opening.edge] : [a.edge, tip.edge];
  const ring: Stretch[] = [
    ...first,
    { edge: ids[0]!, from: mouth, segment: { kind: 'line', to: dart.at } },
    { edge: ids[1]!, from: dart.at, segment: { kind: 'line', to: second[0]!.from } },
    ...second
  ];
  const { edges, corners, place } = rebuilt(ring, traitsOf(panel));
  const moving = turnOnward ? onward : back;
  const marks = <Mark extends EdgePlace>(list: readonly Mark[]): Mark[] =>
    list.flatMap((mark) => {
      const [placed] = placedMarks(panel, [mark]);
      const goes = moving.some((one) => one.edge === mark.edge && awayFrom(one, placed!.point) < 0.05);
      return place(goes ? placedMarks(panel, [mark], turned) : [placed!]);
    });
  const beside = turnOnward ? inSector(dart.at, b.point, start) : inSector(dart.at, start, a.point);
  const carry = (point: Point): Point => snapPoint(turned(point));
  const carriedPath = (path: Path) => {
    const { from, segments } = mapPath(path, carry);
    return { from, segments: [...segments] };
  };
  return accepted(
    {
      ...panel,
      edges,
      corners,
      notches: marks(panel.notches),
      matchPoints: marks(panel.matchPoints),
      cutOuts: panel.cutOuts.map((path) => (beside(path.from) ? carriedPath(path) : path)),
      drillHoles: panel.drillHoles.map((hole) => (beside(hole.at) ? { ...hole, at: carry(hole.at) } : hole)),
      internalLines: panel.internalLines.map((line) =>
        beside(line.path.from) ? { ...line, path: carriedPath(line.path) } : line
      )
    },
    panel
  );
}

const awayFrom = ({ from, segment }: Stretch, point: Point): number =>
  nearestOn({ from, segments: [segment] }, point).away;

/** Whether a place lies, seen from `tip`, on the way counter-clockwise from `start` to `end`. */
function inSector(tip: Point, start: Point, end: Point): (point: Point) => boolean {
  const of = (p: Point) => Math.atan2(p.y - tip.y, p.x - tip.x);
  const full = 2 * Math.PI;
  const round = (p: Point) => (((of(p) - of(start)) % full) + full) % full;
  const sweep = round(end);
  return (point) => round(point) <= sweep;
}
