import { endTangents, pathLength } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { area } from '$lib/geometry/polygon';
import type { Degrees, Millimetres, SquareMillimetres } from '$lib/units/measure';
import { pathOf } from './edge-places';
import { flatEdges, outlineOfEdges } from './flat-edge';
import type { Panel } from './panel';

/* Readings of a panel as it is drawn: the half where it lies on the fold. */

/** Length of every edge along its curves, by id. */
export function edgeLengths(panel: Panel): Map<string, Millimetres> {
  return new Map(panel.edges.map((edge) => [edge.id, pathLength(pathOf(edge))]));
}

/** Area inside the drawn line, cut-outs not taken off. */
export function panelArea(panel: Panel): SquareMillimetres {
  return area(outlineOfEdges(flatEdges(panel, (p) => p)));
}

/** The angle inside the panel at the corner where an edge starts, 0 to 360; null for an edge that is not there. */
export function cornerAngle(panel: Panel, edge: string): Degrees | null {
  const index = panel.edges.findIndex(({ id }) => id === edge);
  if (index < 0) return null;
  const before = panel.edges[(index + panel.edges.length - 1) % panel.edges.length]!;
  const a = endTangents(pathOf(before)).end;
  const b = endTangents(pathOf(panel.edges[index]!)).start;
  return 180 - (Math.atan2(a.x * b.y - a.y * b.x, a.x * b.x + a.y * b.y) * 180) / Math.PI;
}

export interface Span {
  readonly length: Millimetres;
  readonly along: Millimetres;
  readonly up: Millimetres;
  /** Direction from a to b, counter-clockwise from the level. */
  readonly angle: Degrees;
}

/** From place to place, straight. */
export function span(a: Point, b: Point): Span {
  const [along, up] = [b.x - a.x, b.y - a.y];
  return { length: Math.hypot(along, up), along, up, angle: (Math.atan2(up, along) * 180) / Math.PI };
}

/** Between two distances along one edge, along its curve. */
export const alongEdge = (from: Millimetres, to: Millimetres): Millimetres => Math.abs(to - from);
