import { flatten, mapPath, type Path } from '$lib/geometry/path';
import { snapPoint, type Point } from '$lib/geometry/point';
import type { Corner, Edge, Panel } from './panel';

/** One edge of a panel as the polyline on the 0.001 mm grid that stands for it, with what its allowance needs to know. */
export interface FlatEdge {
  readonly id: string;
  /** From corner to corner, both included. */
  readonly points: readonly Point[];
  readonly allowance: number;
  readonly role: Edge['role'];
  /** How the corner at its start is treated. */
  readonly treatment: Corner['treatment'];
  /** Whether it runs the other way than the panel was drawn: the mirror image across a fold. */
  readonly mirrored: boolean;
}

/** The path of an edge, sent through `move`. */
export function edgePath(edge: Edge, move: (point: Point) => Point): Path {
  return mapPath({ from: edge.from, segments: edge.segments }, move);
}

/** The edges of a panel flattened, every point sent through `move`; each ends exactly where the next one starts. */
export function flatEdges(panel: Panel, move: (point: Point) => Point): FlatEdge[] {
  const starts = panel.edges.map((edge) => snapPoint(move(edge.from)));
  return panel.edges.map((edge, i): FlatEdge => {
    const points = flatten(edgePath(edge, move)).map(snapPoint);
    points[0] = starts[i]!;
    points[points.length - 1] = starts[(i + 1) % starts.length]!;
    return {
      id: edge.id,
      points: points.filter((p, k) => k === 0 || p.x !== points[k - 1]!.x || p.y !== points[k - 1]!.y),
      allowance: edge.id === panel.fold ? 0 : edge.allowance,
      role: edge.role,
      treatment: panel.corners[i]?.treatment ?? 'mitred',
      mirrored: false
    };
  });
}

/** The closed outline that edges run round, without its repeated corners. */
export function outlineOfEdges(edges: readonly FlatEdge[]): Point[] {
  return edges.flatMap((edge) => edge.points.slice(0, -1));
}
