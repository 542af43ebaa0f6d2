import { pathLength, type Path } from '$lib/geometry/path';
import { snapPoint, type Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import { pathOf } from './edge-places';
import { accepted, freeId, refused, type Edited } from './edited';
import type { Corner, Edge, Panel } from './panel';

/* What a panel carries besides its outline: allowances, corners, notches, drill holes, lines, match points, grain and words. */

/** Role and allowance of an edge; the fold keeps its own. */
export function setEdge(
  panel: Panel,
  id: string,
  change: { readonly allowance?: Millimetres; readonly role?: Exclude<Edge['role'], 'fold'> }
): Edited {
  if (!panel.edges.some((edge) => edge.id === id)) return refused(`There is no edge ${id}.`);
  if (panel.fold === id) return refused('The edge on the fold takes no allowance.');
  return accepted(
    { ...panel, edges: panel.edges.map((edge) => (edge.id === id ? { ...edge, ...change } : edge)) },
    panel
  );
}

/** How the allowances meet at the corner where an edge starts. */
export function setCorner(panel: Panel, edge: string, treatment: Corner['treatment']): Edited {
  const index = panel.edges.findIndex(({ id }) => id === edge);
  if (index < 0) return refused(`There is no edge ${edge}.`);
  return accepted(
    { ...panel, corners: panel.corners.map((one, i) => (i === index ? { ...one, treatment } : one)) },
    panel
  );
}

/** The distance on an edge, or why there is no such place. */
function placeOn(panel: Panel, id: string, distance: Millimetres): string | null {
  const edge = panel.edges.find((one) => one.id === id);
  if (!edge) return `There is no edge ${id}.`;
  const length = pathLength(pathOf(edge));
  return distance >= 0 && distance <= length
    ? null
    : `Edge ${id} is ${length.toFixed(1)} mm long; ${distance.toFixed(1)} mm is no place on it.`;
}

const idsOf = (list: readonly { readonly id: string }[]): string[] => list.map(({ id }) => id);

export function addNotch(panel: Panel, edge: string, distance: Millimetres, count = 1): Edited {
  const wrong = placeOn(panel, edge, distance);
  if (wrong) return refused(wrong);
  const notch = { id: freeId('notch', idsOf(panel.notches)), edge, distance, outward: false, count };
  return accepted({ ...panel, notches: [...panel.notches, notch] }, panel);
}

/** Changes a notch: how far along its edge it stands, single, double or triple, inward or outward. */
export function setNotch(
  panel: Panel,
  id: string,
  change: { readonly distance?: Millimetres; readonly count?: number; readonly outward?: boolean }
): Edited {
  const notch = panel.notches.find((one) => one.id === id);
  if (!notch) return refused('There is no such notch.');
  const wrong = placeOn(panel, notch.edge, change.distance ?? notch.distance);
  if (wrong) return refused(wrong);
  return accepted(
    { ...panel, notches: panel.notches.map((one) => (one.id === id ? { ...one, ...change } : one)) },
    panel
  );
}

/** Slides a notch along its edge, towards the edge's end when positive. */
export function slideNotch(panel: Panel, id: string, by: Millimetres): Edited {
  const notch = panel.notches.find((one) => one.id === id);
  return notch ? setNotch(panel, id, { distance: notch.distance + by }) : refused('There is no such notch.');
}

export function addMatchPoint(panel: Panel, edge: string, distance: Millimetres, name: string): Edited {
  const wrong = placeOn(panel, edge, distance);
  if (wrong) return refused(wrong);
  const point = { id: freeId('match', idsOf(panel.matchPoints)), name, edge, distance };
  return accepted({ ...panel, matchPoints: [...panel.matchPoints, point] }, panel);
}

export function setMatchPoint(
  panel: Panel,
  id: string,
  change: { readonly distance?: Millimetres; readonly name?: string }
): Edited {
  const point = panel.matchPoints.find((one) => one.id === id);
  if (!point) return refused('There is no such match point.');
  const wrong = placeOn(panel, point.edge, change.distance ?? point.distance);
  if (wrong) return refused(wrong);
  return accepted(
    { ...panel, matchPoints: panel.matchPoints.map((one) => (one.id === id ? { ...one, ...change } : one)) },
    panel
  );
}

export function addDrillHole(panel: Panel, at: Point, note = ''): Edited {
  const hole = { id: freeId('hole', idsOf(panel.drillHoles)), at: snapPoint(at), note };
  return accepted({ ...panel, drillHoles: [...panel.drillHoles, hole] }, panel);
}

export function setDrillHole(
  panel: Panel,
  id: string,
  change: { readonly at?: Point; readonly note?: string }
): Edited {
  if (!panel.drillHoles.some((hole) => hole.id === id)) return refused('There is no such drill hole.');
  return accepted(
    {
      ...panel,
      drillHoles: panel.drillHoles.map((hole) => (hole.id === id ? { ...hole, ...change } : hole))
    },
    panel
  );
}

export function addInternalLine(panel: Panel, path: Path, note = ''): Edited {
  if (pathLength(path) < 0.1) return refused('A line needs two places that lie apart.');
  const id = freeId('line', idsOf(panel.internalLines));
  const line = { id, path: { from: path.from, segments: [...path.segments] }, note };
  return accepted({ ...panel, internalLines: [...panel.internalLines, line] }, panel);
}

export function setInternalLine(panel: Panel, id: string, note: string): Edited {
  if (!panel.internalLines.some((line) => line.id === id)) return refused('There is no such line.');
  return accepted(
    {
      ...panel,
      internalLines: panel.internalLines.map((line) => (line.id === id ? { ...line, note } : line))
    },
    panel
  );
}

export type MarkKind = 'notches' | 'drillHoles' | 'internalLines' | 'matchPoints';

/** Takes a notch, a drill hole, a line or a match point off the panel. */
export function removeMark(panel: Panel, kind: MarkKind, id: string): Edited {
  if (!panel[kind].some((mark) => mark.id === id)) return refused('There is no such mark.');
  return accepted(
    { ...panel, [kind]: (panel[kind] as { id: string }[]).filter((mark) => mark.id !== id) },
    panel
  );
}

/** Draws the grain line anew. On a fold it runs along the fold. */
export function setGrain(panel: Panel, from: Point, to: Point): Edited {
  return accepted({ ...panel, grain: { from: snapPoint(from), to: snapPoint(to), confirmed: true } }, panel);
}

/** Name and note of the panel. */
export function setWords(panel: Panel, change: { readonly name?: string; readonly note?: string }): Edited {
  return accepted({ ...panel, ...change }, panel);
}
