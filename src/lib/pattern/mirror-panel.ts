import { endOf, mapPath, pathLength, reversed, type Path } from '$lib/geometry/path';
import { snapPoint, type Point } from '$lib/geometry/point';
import { nearestOn, pathOf } from './edge-places';
import { accepted, freeId, refused, type Edited } from './edited';
import type { Edge, Panel } from './panel';

/* Mirroring: a copy for the other hand, a half opened over its fold, and a whole panel put back on it. */

type Mirror = (point: Point) => Point;

/** The mirror image over the straight line through two places. */
export function over(a: Point, b: Point): Mirror {
  const [dx, dy] = [b.x - a.x, b.y - a.y];
  const square = dx * dx + dy * dy;
  return ({ x, y }) => {
    const t = ((x - a.x) * dx + (y - a.y) * dy) / square;
    return snapPoint({ x: 2 * (a.x + dx * t) - x, y: 2 * (a.y + dy * t) - y });
  };
}

const mutable = ({ from, segments }: Path) => ({ from, segments: [...segments] });

/** An edge mirrored: it runs the other way, so that the outline stays counter-clockwise. */
function imageOf(edge: Edge, mirror: Mirror): Edge {
  return { ...edge, ...mutable(reversed(mapPath(pathOf(edge), mirror))) };
}

/** A place along an edge that now runs the other way. */
function turnedMarks<Mark extends { edge: string; distance: number }>(
  panel: Panel,
  marks: readonly Mark[]
): Mark[] {
  const lengths = new Map(panel.edges.map((edge) => [edge.id, pathLength(pathOf(edge))]));
  return marks.map((mark) => ({ ...mark, distance: Math.max(0, lengths.get(mark.edge)! - mark.distance) }));
}

/** The panel mirrored, for the other hand: the same ids under a new panel id, its grain where it was. Mirrored twice it is the same. */
export function mirrorCopy(panel: Panel, id: string, name: string): Edited {
  const { from, to } = panel.grain;
  if (Math.hypot(to.x - from.x, to.y - from.y) < 0.001)
    return refused('A panel is mirrored over its grain line: draw that first.');
  const mirror = over(from, to);
  const n = panel.edges.length;
  const path = (one: Path) => mutable(mapPath(one, mirror));
  return accepted(
    {
      ...panel,
      id,
      name,
      hand: panel.hand === 'left' ? 'right' : 'left',
      edges: panel.edges.map((edge) => imageOf(edge, mirror)).toReversed(),
      // The corner where an edge starts is where its image ends.
      corners: panel.edges.map((_, i) => panel.corners[(n - i) % n]!),
      cutOuts: panel.cutOuts.map((one) => mutable(reversed(path(one)))),
      notches: turnedMarks(panel, panel.notches),
      matchPoints: turnedMarks(panel, panel.matchPoints),
      drillHoles: panel.drillHoles.map((hole) => ({ ...hole, at: mirror(hole.at) })),
      internalLines: panel.internalLines.map((line) => ({ ...line, path: path(line.path) }))
    },
    panel
  );
}

/** What the image of something is called: closing the panel again finds it by that. */
const imageName = (id: string, fold: string): string => `${id} over ${fold}`;

/** The whole panel that a half on the fold stands for; the fold edge goes, each other edge gets its image. */
export function openOverFold(panel: Panel): Edited {
  const index = panel.edges.findIndex(({ id }) => id === panel.fold);
  const fold = panel.edges[index];
  if (!fold) return refused('This panel does not lie on a fold.');
  const mirror = over(fold.from, endOf(pathOf(fold)));
  const half = [...panel.edges.slice(index + 1), ...panel.edges.slice(0, index)];
  const treatments = [...panel.corners.slice(index + 1), ...panel.corners.slice(0, index)];
  if (half.some(({ id }) => imageName(id, fold.id).length > 64))
    return refused('An edge has too long a name for its image: give it a shorter one.');
  const named = (id: string) => imageName(id, fold.id);
  const lengths = new Map(panel.edges.map((edge) => [edge.id, pathLength(pathOf(edge))]));
  const marks = <Mark extends { id: string; edge: string; distance: number }>(
    list: readonly Mark[]
  ): Mark[] => [
    ...list,
    ...list
      .filter(({ edge }) => edge !== fold.id)
      .map((mark) => ({
        ...mark,
        id: named(mark.id).slice(0, 64),
        edge: named(mark.edge),
        distance: Math.max(0, lengths.get(mark.edge)! - mark.distance)
      }))
  ];
  const off = (point: Point) => nearestOn(pathOf(fold), point).away > 0.01;
  const path = (one: Path) => mutable(mapPath(one, mirror));
  return accepted(
    {
      ...panel,
      fold: null,
      edges: [
        ...half,
        ...half.map((edge) => ({ ...imageOf(edge, mirror), id: named(edge.id) })).toReversed()
      ],
      corners: [
        ...treatments,
        // Both corners on the fold run into their images.
        ...treatments.map((_, i) => ({
          id: freeId(
            `over-${i}`,
            panel.corners.map(({ id }) => id)
          ),
          treatment: i === 0 ? ('mitred' as const) : treatments[treatments.length - i]!.treatment
        }))
      ],
      cutOuts: [...panel.cutOuts, ...panel.cutOuts.map((one) => mutable(reversed(path(one))))],
      notches: marks(panel.notches),
      matchPoints: marks(panel.matchPoints),
      drillHoles: [
        ...panel.drillHoles,
        ...panel.drillHoles
          .filter(({ at }) => off(at))
          .map((hole) => ({ ...hole, id: named(hole.id).slice(0, 64), at: mirror(hole.at) }))
      ],
      internalLines: [
        ...panel.internalLines,
        ...panel.internalLines
          .filter((line) => off(line.path.from) || off(endOf(line.path)))
          .map((line) => ({ ...line, id: named(line.id).slice(0, 64), path: path(line.path) }))
      ]
    },
    panel
  );
}

/** How far the halves of a panel may differ and still be one on the fold. */
const ALIKE = 0.5;

/**
 * Puts a whole panel on the fold along the line between two corners, named by the edges that start there. The half from the first corner
 * round to the second is kept; the other one must be its image within 0.5 mm.
 */
export function closeOnFold(panel: Panel, first: string, second: string): Edited {
  if (panel.fold !== null) return refused('This panel lies on a fold already.');
  const [i, k] = [first, second].map((id) => panel.edges.findIndex((edge) => edge.id === id)) as [
    number,
    number
  ];
  if (i < 0 || k < 0 || i === k) return refused('Choose the two corners that lie on the fold.');
  const n = panel.edges.length;
  const round = (start: number, end: number): number[] =>
    Array.from({ length: (end - start + n) % n }, (_, step) => (start + step) % n);
  const [kept, gone] = [round(i, k), round(k, i)];
  const [from, to] = [panel.edges[i]!.from, panel.edges[k]!.from];
  const mirror = over(from, to);
  const line = (edges: readonly number[]): Path => ({
    from: panel.edges[edges[0]!]!.from,
    segments: edges.flatMap((at) => panel.edges[at]!.segments)
  });
  const image = mapPath(line(gone), mirror);
  const off = Math.max(farthest(line(kept), image), farthest(image, line(kept)));
  if (off > ALIKE)
    return refused(
      `The halves are no mirror images: they leave each other by ${off.toFixed(1)} mm. Mend one half first.`
    );
  const spoken = / over (.+)$/.exec(panel.edges[gone[0]!]!.id)?.[1];
  const ids = kept.map((at) => panel.edges[at]!.id);
  const id = freeId(spoken ?? 'fold', ids);
  const stays = (mark: { edge: string }) => ids.includes(mark.edge);
  const onSide = (point: Point) =>
    (to.x - from.x) * (point.y - from.y) - (to.y - from.y) * (point.x - from.x) <=
    0.01 * Math.hypot(to.x - from.x, to.y - from.y);
  return accepted(
    {
      ...panel,
      fold: id,
      symmetric: true,
      paired: false,
      edges: [
        ...kept.map((at) => panel.edges[at]!),
        { id, from: to, segments: [{ kind: 'line', to: from }], allowance: 0, role: 'fold' }
      ],
      corners: [
        ...kept.map((at) => panel.corners[at]!),
        {
          id: freeId(
            'at-fold',
            kept.map((at) => panel.corners[at]!.id)
          ),
          treatment: 'mitred'
        }
      ],
      notches: panel.notches.filter(stays),
      matchPoints: panel.matchPoints.filter(stays),
      cutOuts: panel.cutOuts.filter((path) => onSide(path.from)),
      drillHoles: panel.drillHoles.filter(({ at }) => onSide(at)),
      internalLines: panel.internalLines.filter(({ path }) => onSide(path.from) && onSide(endOf(path)))
    },
    panel
  );
}

function farthest(a: Path, b: Path): number {
  let most = 0;
  const length = pathLength(a);
  for (let from = a.from, i = 0; i < a.segments.length; i++) {
    const segment = a.segments[i]!;
    for (const point of [from, middleOf(from, segment), segment.to])
      most = Math.max(most, nearestOn(b, point).away);
    from = segment.to;
  }
  return Math.max(most, Math.abs(length - pathLength(b)) / 2);
}

const middleOf = (from: Point, segment: Path['segments'][number]): Point =>
  segment.kind === 'line'
    ? { x: (from.x + segment.to.x) / 2, y: (from.y + segment.to.y) / 2 }
    : {
        x: (from.x + 3 * segment.c1.x + 3 * segment.c2.x + segment.to.x) / 8,
        y: (from.y + 3 * segment.c1.y + 3 * segment.c2.y + segment.to.y) / 8
      };
