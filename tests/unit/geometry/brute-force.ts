import { locate } from '$lib/geometry/polygon';
import type { Outline, Point } from '$lib/geometry/point';
import { outlineOf, type PreparedOutline } from '$lib/geometry/prepared';

/* Slow and plain answers, to hold the quick ones against. */

/** Distance of a point from the nearest place of an outline. */
export function distanceTo(outline: Outline, { x, y }: Point): number {
  return Math.min(
    ...outline.map((a, i) => {
      const b = outline[(i + 1) % outline.length]!;
      const [dx, dy] = [b.x - a.x, b.y - a.y];
      const t = Math.min(1, Math.max(0, ((x - a.x) * dx + (y - a.y) * dy) / (dx * dx + dy * dy)));
      return Math.hypot(x - a.x - t * dx, y - a.y - t * dy);
    })
  );
}

/** Points along an outline, no farther apart than `step`. */
export function samples(outline: Outline, step: number): Point[] {
  return outline.flatMap((a, i) => {
    const b = outline[(i + 1) % outline.length]!;
    const count = Math.ceil(Math.hypot(b.x - a.x, b.y - a.y) / step);
    return Array.from({ length: count }, (_, k) => ({
      x: a.x + ((b.x - a.x) * k) / count,
      y: a.y + ((b.y - a.y) * k) / count
    }));
  });
}

/** The depth of an overlap by trying every sample of either outline, and both label points. */
export function denseDepth(a: PreparedOutline, b: PreparedOutline, step: number): number {
  const [one, two] = [outlineOf(a), outlineOf(b)];
  const sink = (from: Point[], into: Outline) =>
    from.reduce(
      (most, point) => (locate(into, point) === 'inside' ? Math.max(most, distanceTo(into, point)) : most),
      0
    );
  return Math.max(sink([a.inner, ...samples(one, step)], two), sink([b.inner, ...samples(two, step)], one));
}

/** The distance of two outlines by trying every sample of one against the other. */
export function denseDistance(a: Outline, b: Outline, step: number): number {
  return Math.min(
    ...samples(a, step).map((point) => distanceTo(b, point)),
    ...samples(b, step).map((point) => distanceTo(a, point))
  );
}
