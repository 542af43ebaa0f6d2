import { endTangents, pathLength } from '$lib/geometry/path';
import { snapPoint, type Point } from '$lib/geometry/point';
import { keepMarks, pathOf } from '$lib/pattern/edge-places';
import { accepted, refused, type Edited } from '$lib/pattern/edited';
import type { Edge, Panel } from '$lib/pattern/panel';
import type { Millimetres } from '$lib/units/measure';
import { solve } from './curves';
import { sideLength, walkSeam, type Seam, type SeamSide, type SeamWalk } from './seam-walk';

/*
 * Truing a seam: one edge or both are changed until they agree, ease included.
 */

export interface TrueChoice {
  /** Whose length gives way: a's, b's, or half of the difference each. */
  readonly change: 'a' | 'b' | 'share';
  /**
   * `run on`: the seam goes on or stops short in its own direction, the edge beside it follows. `along beside`: the corner slides along the
   * edge beside it. `bow`: the curve swells or flattens, its ends stay.
   */
  readonly how: 'run on' | 'along beside' | 'bow';
  /** Which end of the seam moves; nothing for `bow`. */
  readonly end: 'start' | 'end';
}

export interface Trued {
  readonly panels: readonly Panel[];
  readonly before: SeamWalk;
  readonly after: SeamWalk;
}

/** The panels with the seam trued, and its walk before and after; refused in words when it can't be done so. */
export function trueSeam(panels: readonly Panel[], seam: Seam, choice: TrueChoice): Edited<Trued> {
  const before = walkSeam(panels, seam);
  const { difference, lengthA, lengthB } = before;
  const wanted: [SeamSide, Millimetres][] =
    choice.change === 'a'
      ? [[seam.a, lengthA + difference]]
      : choice.change === 'b'
        ? [[seam.b, lengthB - difference]]
        : [
            [seam.a, lengthA + difference / 2],
            [seam.b, lengthB - difference / 2]
          ];
  let now = [...panels];
  for (const [side, length] of wanted) {
    const changed = toLength(now, side, length, choice);
    if (changed.refused !== undefined) return changed;
    now = now.map((panel) => (panel.id === changed.made.id ? changed.made : panel));
  }
  return { made: { panels: now, before, after: walkSeam(now, seam) } };
}

/** One side of a seam brought to a length. */
export function toLength(
  panels: readonly Panel[],
  side: SeamSide,
  length: Millimetres,
  { how, end }: Pick<TrueChoice, 'how' | 'end'>
): Edited {
  const panel = panels.find(({ id }) => id === side.panel);
  if (!panel) return refused('There is no such panel.');
  const whole = sideLength(panels, side);
  if (Math.abs(whole - length) < 1e-4) return { made: panel };
  const named = side.edges[end === 'start' ? 0 : side.edges.length - 1]!;
  const index = panel.edges.findIndex(({ id }) => id === named.edge);
  const edge = panel.edges[index]!;
  const target = pathLength(pathOf(edge)) + length - whole;
  if (target < 1) return refused(`Edge ${edge.id} is too short to give up the difference.`);
  if (how === 'bow') return bowed(panel, edge, target);
  // Which end of the edge as drawn it is.
  return endMoved(panel, index, (end === 'start') !== named.reversed ? 'start' : 'end', how, target);
}

/** The edge's curves swollen or flattened by their handles, its ends where they are. */
function bowed(panel: Panel, edge: Edge, target: Millimetres): Edited {
  if (edge.segments.every(({ kind }) => kind === 'line'))
    return refused(
      `Edge ${edge.id} is straight: between ends that stay it has no other length. Move its end instead.`
    );
  const scaled = (factor: number): Edge => {
    let from = edge.from;
    return {
      ...edge,
      segments: edge.segments.map((segment) => {
        const start = from;
        from = segment.to;
        if (segment.kind === 'line') return segment;
        const handle = (at: Point, hinge: Point): Point =>
          snapPoint({ x: hinge.x + (at.x - hinge.x) * factor, y: hinge.y + (at.y - hinge.y) * factor });
        return { ...segment, c1: handle(segment.c1, start), c2: handle(segment.c2, segment.to) };
      })
    };
  };
  // Twice the handles still runs fair; beyond that a curve begins to loop.
  const factor = solve(target, 0.05, 2, (k) => pathLength(pathOf(scaled(k))));
  if (factor === null)
    return refused(`Edge ${edge.id} can't take the difference by its curve alone: move its end instead.`);
  const now = scaled(factor);
  return accepted(
    keepMarks(panel, { ...panel, edges: panel.edges.map((one) => (one === edge ? now : one)) }),
    panel
  );
}

/** The corner at one end of an edge moved, in the edge's own direction or along the edge beside it. */
function endMoved(
  panel: Panel,
  index: number,
  end: 'start' | 'end',
  how: 'run on' | 'along beside',
  target: Millimetres
): Edited {
  const n = panel.edges.length;
  if (n < 2) return refused('There is no edge beside this one.');
  const edge = panel.edges[index]!;
  const beside = panel.edges[(index + (end === 'end' ? 1 : n - 1)) % n]!;
  const corner = end === 'end' ? beside.from : edge.from;
  const followed = how === 'run on' ? edge : beside;
  const tangents = endTangents(pathOf(followed));
  const way = (followed === edge) === (end === 'end') ? tangents.end : tangents.start;
  const at = (by: number): Point => snapPoint({ x: corner.x + way.x * by, y: corner.y + way.y * by });
  const trial = (by: number): Panel => cornerAt(panel, edge.id, beside.id, end, at(by));
  const measure = (by: number): number => pathLength(pathOf(trial(by).edges[index]!));
  const reach = Math.max(30, pathLength(pathOf(followed)) / 2);
  // The nearest place that gives the length, on either side.
  const best = [solve(target, 0, reach, measure), solve(target, 0, -reach, measure)]
    .filter((by) => by !== null)
    .toSorted((a, b) => Math.abs(a) - Math.abs(b))[0];
  if (best === undefined)
    return refused(
      how === 'run on'
        ? `Edge ${edge.id} can't take the difference at its ${end}: change the other end, or the other side.`
        : `Sliding its ${end} along ${beside.id} does not bring edge ${edge.id} to that length: let the seam run on instead.`
    );
  return accepted(trial(best), panel);
}

/** The corner between two edges elsewhere: its handles go along. */
function cornerAt(panel: Panel, edge: string, beside: string, end: 'start' | 'end', to: Point): Panel {
  const [arrives, leaves] = end === 'end' ? [edge, beside] : [beside, edge];
  const edges = panel.edges.map((one): Edge => {
    let now = one;
    if (one.id === arrives) {
      const last = now.segments[now.segments.length - 1]!;
      const by = { x: to.x - last.to.x, y: to.y - last.to.y };
      now = {
        ...now,
        segments: [
          ...now.segments.slice(0, -1),
          last.kind === 'line'
            ? { ...last, to }
            : { ...last, c2: { x: last.c2.x + by.x, y: last.c2.y + by.y }, to }
        ]
      };
    }
    if (one.id === leaves) {
      const first = now.segments[0]!;
      const by = { x: to.x - now.from.x, y: to.y - now.from.y };
      now = {
        ...now,
        from: to,
        segments: [
          first.kind === 'line' ? first : { ...first, c1: { x: first.c1.x + by.x, y: first.c1.y + by.y } },
          ...now.segments.slice(1)
        ]
      };
    }
    return now;
  });
  return keepMarks(panel, { ...panel, edges });
}

/** The seam between any two edges that a person picks, `b` walked against its direction unless said otherwise. */
export function pickedSeam(
  a: { readonly panel: string; readonly edge: string },
  b: { readonly panel: string; readonly edge: string; readonly sameWay: boolean },
  ease: Millimetres
): Seam {
  return {
    name: `${a.edge} to ${b.edge}`,
    a: { panel: a.panel, edges: [{ edge: a.edge, reversed: false }] },
    b: { panel: b.panel, edges: [{ edge: b.edge, reversed: !b.sameWay }] },
    ease,
    gathered: false,
    smooth: []
  };
}
