import type { Point } from '$lib/geometry/point';
import type { Path } from '$lib/pattern/panel';
import { flatten, isInside, nearestOnPolyline } from './path-measure';
import type { ReadOutline } from './reading';

/* Which outline lies in which, which one a mark belongs to, which are the same drawn twice. */

/** Two outlines that differ by less than this are the same one drawn twice. */
const SAME_WITHIN = 0.1;

/** The outline, in the order of the list, that is the smallest one around `at`. */
export function smallestAround(at: Point, outlines: readonly Shape[], except?: Shape): Shape | null {
  let best: Shape | null = null;
  for (const shape of outlines) {
    if (shape === except) continue;
    const { box, area } = shape.outline;
    if (at.x < box.minX || at.x > box.maxX || at.y < box.minY || at.y > box.maxY) continue;
    if (best && best.outline.area <= area) continue;
    if (isInside(at, shape.polygon)) best = shape;
  }
  return best;
}

export interface Shape {
  outline: ReadOutline;
  polygon: Point[];
}

/**
 * Sets `inside` of every outline: the smallest other outline that holds all of it (points on the border count as
 * held). Outlines that overlap only in part stay side by side.
 */
export function nest(outlines: readonly ReadOutline[]): ReadOutline[] {
  const shapes = outlines.map((outline): Shape => ({ outline, polygon: ring(outline.path) }));
  const bySize = [...shapes].sort((a, b) => a.outline.area - b.outline.area);
  return shapes.map((shape) => {
    const { box, area } = shape.outline;
    const around = bySize.find(
      (other) =>
        other !== shape &&
        other.outline.area > area &&
        other.outline.box.minX <= box.minX + 1e-3 &&
        other.outline.box.minY <= box.minY + 1e-3 &&
        other.outline.box.maxX >= box.maxX - 1e-3 &&
        other.outline.box.maxY >= box.maxY - 1e-3 &&
        holds(other.polygon, shape.polygon)
    );
    return { ...shape.outline, inside: around?.outline.id ?? null };
  });
}

/** Whether a polygon lies within another: every corner and middle of a side inside it or on its border. */
function holds(outer: readonly Point[], inner: readonly Point[]): boolean {
  const closed = [...outer, outer[0]!];
  // A big inner polygon is looked at in at most 400 places; import only offers, the person decides.
  const step = Math.max(1, Math.floor(inner.length / 200));
  for (let i = 0; i < inner.length; i += step) {
    const a = inner[i]!;
    const b = inner[(i + 1) % inner.length]!;
    for (const p of [a, { x: (a.x + b.x) / 2, y: (a.y + b.y) / 2 }])
      if (!isInside(p, outer) && nearestOnPolyline(p, closed).distance > 0.01) return false;
  }
  return true;
}

export function ring(path: Path): Point[] {
  const polygon = flatten(path);
  polygon.pop();
  return polygon;
}

/** The outline whose border passes within 1 mm: notches and fold lines stand on it. */
export function smallestNear(at: Point, shapes: readonly Shape[]): Shape | null {
  let best: { shape: Shape; away: number } | null = null;
  for (const shape of shapes) {
    const { box, offered } = shape.outline;
    if (!offered || at.x < box.minX - 1 || at.x > box.maxX + 1 || at.y < box.minY - 1 || at.y > box.maxY + 1)
      continue;
    const away = nearestOnPolyline(at, [...shape.polygon, shape.polygon[0]!]).distance;
    if (away <= 1 && (!best || away < best.away)) best = { shape, away };
  }
  return best?.shape ?? null;
}

export function sameShape(a: Shape, b: Shape): boolean {
  const [p, q] = [a.outline.box, b.outline.box];
  if (
    Math.abs(p.minX - q.minX) > SAME_WITHIN ||
    Math.abs(p.minY - q.minY) > SAME_WITHIN ||
    Math.abs(p.maxX - q.maxX) > SAME_WITHIN ||
    Math.abs(p.maxY - q.maxY) > SAME_WITHIN
  )
    return false;
  const near = (of: Shape, on: Shape): boolean => {
    const line = [...on.polygon, on.polygon[0]!];
    const step = Math.max(1, Math.floor(of.polygon.length / 100));
    for (let i = 0; i < of.polygon.length; i += step)
      if (nearestOnPolyline(of.polygon[i]!, line).distance > SAME_WITHIN) return false;
    return true;
  };
  return near(a, b) && near(b, a);
}
