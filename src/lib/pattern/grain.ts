import type { Point } from '$lib/geometry/point';
import type { Degrees } from '$lib/units/measure';
import type { Panel } from './panel';

/** A fold may lie this far off the drawn grain line and still count as on grain. */
export const FOLD_OFF_GRAIN: Degrees = 0.1;

/** The direction of a → b as cosine and sine; multiples of 90° are exact. null when both are the same place. */
function direction(a: Point, b: Point): Point | null {
  const dx = b.x - a.x;
  const dy = b.y - a.y;
  const length = Math.hypot(dx, dy);
  if (length < 0.001) return null;
  if (Math.abs(dy) < 1e-9 * length) return { x: Math.sign(dx), y: 0 };
  if (Math.abs(dx) < 1e-9 * length) return { x: 0, y: Math.sign(dy) };
  return { x: dx / length, y: dy / length };
}

/** The direction of the grain line; null when it has no length. */
export function grainDirection(panel: Panel): Point | null {
  return direction(panel.grain.from, panel.grain.to);
}

/** The direction of the fold edge from start to end, and how far it is off the grain line; null without a fold or grain. */
export function foldDirection(panel: Panel): { readonly way: Point; readonly off: Degrees } | null {
  const edge = panel.edges.find(({ id }) => id === panel.fold);
  const grain = grainDirection(panel);
  const way = edge && direction(edge.from, edge.segments[edge.segments.length - 1]!.to);
  if (!grain || !way) return null;
  const sine = Math.abs(grain.x * way.y - grain.y * way.x);
  return { way, off: (Math.asin(Math.min(1, sine)) * 180) / Math.PI };
}

/**
 * Turns a place of the panel about its origin so that the grain line points along +x. A panel on the fold is turned by its fold, which is
 * on grain, so that the fold comes to lie exactly level.
 */
export function ontoGrain(panel: Panel): (point: Point) => Point {
  const grain = grainDirection(panel);
  if (!grain) throw new RangeError('A grain line without length has no direction');
  const fold = foldDirection(panel);
  let { x: cos, y: sin } = grain;
  if (fold) {
    const sense = fold.way.x * grain.x + fold.way.y * grain.y > 0 ? 1 : -1;
    cos = fold.way.x * sense;
    sin = fold.way.y * sense;
  }
  return ({ x, y }) => ({ x: x * cos + y * sin, y: y * cos - x * sin });
}
