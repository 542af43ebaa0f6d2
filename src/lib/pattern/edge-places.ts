import { flatten, pathLength, splitAt, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import type { Edge, Panel } from './panel';

/* Places along the edges of a panel, and marks that stay where they are while an edge changes. */

/** The sew or cut line of an edge as drawn. */
export const pathOf = (edge: Edge): Path => ({ from: edge.from, segments: edge.segments });

/** How fine curves are followed while a nearest place is looked for. */
const FINE: Millimetres = 0.005;

export interface Nearest {
  /** Along the path from its start. */
  readonly distance: Millimetres;
  readonly point: Point;
  readonly away: Millimetres;
}

/** The place of `path` that lies nearest to `point`, within about 0.01 mm. */
export function nearestOn(path: Path, point: Point): Nearest {
  const points = flatten(path, FINE);
  let along = 0;
  let best: Nearest = { distance: 0, point: points[0]!, away: Infinity };
  for (let i = 1; i < points.length; i++) {
    const [a, b] = [points[i - 1]!, points[i]!];
    const [dx, dy] = [b.x - a.x, b.y - a.y];
    const length = Math.hypot(dx, dy);
    const share =
      length === 0
        ? 0
        : Math.min(1, Math.max(0, ((point.x - a.x) * dx + (point.y - a.y) * dy) / (length * length)));
    const at = { x: a.x + dx * share, y: a.y + dy * share };
    const away = Math.hypot(at.x - point.x, at.y - point.y);
    if (away < best.away) best = { distance: along + length * share, point: at, away };
    along += length;
  }
  // The polyline is a hair shorter than the curve.
  const whole = pathLength(path);
  return { ...best, distance: along === 0 ? 0 : Math.min(whole, (best.distance * whole) / along) };
}

/** The edge that lies nearest to `point`, and where on it. */
export function nearestEdge(panel: Panel, point: Point): Nearest & { readonly edge: string } {
  return panel.edges
    .map((edge) => ({ ...nearestOn(pathOf(edge), point), edge: edge.id }))
    .reduce((best, one) => (one.away < best.away ? one : best));
}

const same = (a: Point, b: Point): boolean => Math.hypot(a.x - b.x, a.y - b.y) < 1e-9;

/** Where a mark at `distance` along `old` stands on `now`: where it was, counted from the end that did not change. */
export function carriedMark(old: Path, now: Path, distance: Millimetres): Millimetres {
  const length = pathLength(old);
  const at = Math.min(distance, length);
  const whole = pathLength(now);
  if (at <= 0) return 0;
  if (at >= length) return whole;
  const [before, after] = splitAt(old, at);
  const untouched = (part: readonly unknown[], list: readonly unknown[]) =>
    part.every((segment, i) => JSON.stringify(segment) === JSON.stringify(list[i]));
  const kept = before.segments.slice(0, -1);
  const holding = old.segments[kept.length];
  const next = now.segments[kept.length];
  if (
    same(old.from, now.from) &&
    untouched(kept, now.segments) &&
    JSON.stringify(holding) === JSON.stringify(next)
  )
    return Math.min(at, whole);
  const rest = after.segments.length;
  const tail = old.segments.slice(-rest);
  const [startOld, startNow] = [startOf(old, rest), startOf(now, rest)];
  if (startNow && same(startOld!, startNow) && untouched(tail, now.segments.slice(-rest)))
    return Math.max(0, whole - (length - at));
  return nearestOn(now, before.segments[before.segments.length - 1]!.to).distance;
}

/** Where the last `count` segments of a path start. */
function startOf(path: Path, count: number): Point | undefined {
  const index = path.segments.length - count;
  return index < 0 ? undefined : index === 0 ? path.from : path.segments[index - 1]!.to;
}

/** `after` with the notches and match points of changed edges where they stood in `before`. */
export function keepMarks(before: Panel, after: Panel): Panel {
  const old = new Map(before.edges.map((edge) => [edge.id, edge]));
  const changed = new Map(
    after.edges.flatMap((edge) => {
      const was = old.get(edge.id);
      return was && (was.from !== edge.from || was.segments !== edge.segments)
        ? [[edge.id, edge] as const]
        : [];
    })
  );
  const carry = <Mark extends { edge: string; distance: number }>(mark: Mark): Mark => {
    const now = changed.get(mark.edge);
    return now
      ? { ...mark, distance: carriedMark(pathOf(old.get(mark.edge)!), pathOf(now), mark.distance) }
      : mark;
  };
  return { ...after, notches: after.notches.map(carry), matchPoints: after.matchPoints.map(carry) };
}
