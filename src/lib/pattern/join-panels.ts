import { endOf, endTangents, flatten, mapPath, pathLength, reversed, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { nearestOn, pathOf } from './edge-places';
import { accepted, freeId, refused, type Edited } from './edited';
import type { Panel } from './panel';
import { movedStretch, placedMarks, rebuilt, stretchesOf, traitsOf, type Stretch } from './panel-ring';

/** Two edges that are joined may leave each other by this much: 1/16 inch, to which patterns are held. */
export const JOIN_TOLERANCE = 1.6;

/** The turn and move that brings `from` onto `to` by their ends: a to a, directions alike. */
export function broughtOnto(
  from: readonly [Point, Point],
  to: readonly [Point, Point]
): (point: Point) => Point {
  const angle =
    Math.atan2(to[1].y - to[0].y, to[1].x - to[0].x) -
    Math.atan2(from[1].y - from[0].y, from[1].x - from[0].x);
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  return ({ x, y }) => {
    const [dx, dy] = [x - from[0].x, y - from[0].y];
    return { x: to[0].x + dx * cos - dy * sin, y: to[0].y + dx * sin + dy * cos };
  };
}

/** The largest distance of a place of `a` from `b`. */
function gapBetween(a: Path, b: Path): number {
  return flatten(a).reduce((most, point) => Math.max(most, nearestOn(b, point).away), 0);
}

/**
 * One panel of two, `b` laid to `a` along an edge of each; the seam and its allowances go. Grain, count and words are those of `a`. The two edges
 * must lie on each other within 1.6 mm.
 */
export function joinPanels(a: Panel, edgeA: string, b: Panel, edgeB: string): Edited {
  const [ofA, ofB] = [a.edges.find(({ id }) => id === edgeA), b.edges.find(({ id }) => id === edgeB)];
  if (!ofA || !ofB) return refused('Choose one edge of each panel.');
  if (a.fold === edgeA || b.fold === edgeB)
    return refused('An edge on the fold is no seam: open the panel first.');
  if (a.fold !== null && b.fold !== null)
    return refused('Both panels lie on the fold: open one of them first.');
  if (b.fold !== null)
    return refused(`${b.name} lies on the fold: join ${a.name} to it, not it to ${a.name}.`);
  if (a.drawn !== b.drawn) return refused('One panel is drawn as its sew line, the other as its cut line.');
  const [P, Q] = [ofA.from, endOf(pathOf(ofA))];
  const [R, S] = [ofB.from, endOf(pathOf(ofB))];
  if (Math.hypot(P.x - Q.x, P.y - Q.y) < 0.1 || Math.hypot(R.x - S.x, R.y - S.y) < 0.1)
    return refused('The edges have no length to join along.');
  const move = broughtOnto([S, R], [P, Q]);
  const laid = reversed(mapPath(pathOf(ofB), move));
  const off = Math.max(gapBetween(pathOf(ofA), laid), gapBetween(laid, pathOf(ofA)));
  if (off > JOIN_TOLERANCE)
    return refused(
      `The edges are ${pathLength(pathOf(ofA)).toFixed(1)} and ${pathLength(pathOf(ofB)).toFixed(1)} mm long and leave each other by ${off.toFixed(1)} mm: true the seam first.`
    );

  const restOf = (panel: Panel, edge: string): Stretch[] => {
    const i = panel.edges.findIndex(({ id }) => id === edge);
    return [...panel.edges.slice(i + 1), ...panel.edges.slice(0, i)].flatMap(stretchesOf);
  };
  const restA = restOf(a, edgeA);
  const movedB = restOf(b, edgeB).map((one) => movedStretch(one, move));
  if (restA.length === 0 || movedB.length === 0) return refused('A panel of one edge has nothing to join.');
  movedB[0] = { ...movedB[0]!, from: P };
  const last = movedB[movedB.length - 1]!;
  movedB[movedB.length - 1] = { ...last, segment: { ...last.segment, to: Q } };

  const traits = traitsOf(a);
  const names = new Map<string, string>();
  const nameOf = (id: string): string => {
    const known = names.get(id);
    if (known !== undefined) return known;
    const goesOn =
      (id === restA[restA.length - 1]!.edge &&
        straightOn(restA[restA.length - 1]!, movedB[0]!) &&
        id === movedB[0]!.edge) ||
      (id === restA[0]!.edge && straightOn(last, restA[0]!) && id === last.edge);
    const one = traitsOf(b).get(id)!;
    const own = traits.get(id);
    const alike = own && own.allowance === one.allowance && own.role === one.role;
    const name = goesOn && alike ? id : freeId(id, [...traits.keys(), ...names.values()]);
    names.set(id, name);
    if (!traits.has(name)) traits.set(name, one);
    return name;
  };
  const ring = [...restA, ...movedB.map((one) => ({ ...one, edge: nameOf(one.edge) }))];
  const { edges, corners, place } = rebuilt(ring, traits);
  const without = <Mark extends { edge: string }>(marks: readonly Mark[], edge: string): Mark[] =>
    marks.filter((mark) => mark.edge !== edge);
  const renamed = <Mark extends { id: string; edge: string; distance: number }>(
    marks: readonly Mark[],
    own: readonly Mark[]
  ): Mark[] => {
    const taken = own.map(({ id }) => id);
    return place(
      placedMarks(b, without(marks, edgeB), move).map((placed) => {
        const id = freeId(placed.mark.id, taken);
        taken.push(id);
        return { ...placed, mark: { ...placed.mark, id, edge: nameOf(placed.mark.edge) } };
      })
    );
  };
  const fresh = <Mark extends { id: string }>(marks: readonly Mark[], own: readonly Mark[]): Mark[] => {
    const taken = own.map(({ id }) => id);
    return marks.map((mark) => {
      const id = freeId(mark.id, taken);
      taken.push(id);
      return { ...mark, id };
    });
  };
  const copied = (path: Path) => {
    const moved = mapPath(path, move);
    return { from: moved.from, segments: [...moved.segments] };
  };
  return accepted(
    {
      ...a,
      edges,
      corners,
      notches: [...place(placedMarks(a, without(a.notches, edgeA))), ...renamed(b.notches, a.notches)],
      matchPoints: [
        ...place(placedMarks(a, without(a.matchPoints, edgeA))),
        ...renamed(b.matchPoints, a.matchPoints)
      ],
      cutOuts: [...a.cutOuts, ...b.cutOuts.map(copied)],
      drillHoles: [
        ...a.drillHoles,
        ...fresh(
          b.drillHoles.map((hole) => ({ ...hole, at: move(hole.at) })),
          a.drillHoles
        )
      ],
      internalLines: [
        ...a.internalLines,
        ...fresh(
          b.internalLines.map((line) => ({ ...line, path: copied(line.path) })),
          a.internalLines
        )
      ]
    },
    a
  );
}

/** Whether the outline runs on without a corner from one stretch to the next. */
function straightOn(before: Stretch, after: Stretch): boolean {
  const a = endTangents({ from: before.from, segments: [before.segment] }).end;
  const b = endTangents({ from: after.from, segments: [after.segment] }).start;
  return a.x * b.x + a.y * b.y > Math.cos((2 * Math.PI) / 180);
}
