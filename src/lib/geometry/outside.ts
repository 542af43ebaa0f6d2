import { distanceToOutline } from './outline-distance';
import type { Outline, Point } from './point';
import { contains, meetingPoint } from './polygon';

/** How far an outline reaches out of another, and where; depth 0 and no place when it lies inside. */
export interface Outside {
  readonly depth: number;
  readonly at: Point | null;
}

/**
 * How far `outline` reaches out of `edge` (simple, without holes): the largest distance to `edge` of a place of the outline that lies
 * outside it. Places between the crossings of the two are looked at, so that a notch of the edge is not jumped over.
 */
export function outside(outline: Outline, edge: Outline): Outside {
  let depth = 0;
  let at: Point | null = null;
  const look = (place: Point): void => {
    if (contains(edge, place)) return;
    const far = distanceToOutline(edge, place);
    if (far <= depth) return;
    depth = far;
    at = place;
  };
  outline.forEach((a, i) => {
    const b = outline[(i + 1) % outline.length]!;
    const stops = [a, ...crossings(a, b, edge), b];
    for (let k = 0; k + 1 < stops.length; k++) {
      look(stops[k]!);
      look({ x: (stops[k]!.x + stops[k + 1]!.x) / 2, y: (stops[k]!.y + stops[k + 1]!.y) / 2 });
    }
  });
  return { depth, at };
}

/** Where the line a → b crosses the edges of an outline, in the order of the line. */
function crossings(a: Point, b: Point, edge: Outline): Point[] {
  const along = ({ x, y }: Point): number => (x - a.x) * (b.x - a.x) + (y - a.y) * (b.y - a.y);
  return edge
    .flatMap((c, i) => meetingPoint(a, b, c, edge[(i + 1) % edge.length]!) ?? [])
    .sort((p, q) => along(p) - along(q));
}
