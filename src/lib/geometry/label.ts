import polylabel from 'polylabel';
import type { Millimetres } from '$lib/units/measure';
import { boundingBox } from './polygon';
import type { Outline, Point } from './point';

/**
 * The place inside `outline`, outside `holes`, that is farthest from every edge, within a hundredth of the outline's
 * smaller extent, and how far it is. The outline is simple and has an area.
 */
export function innermost(
  outline: Outline,
  holes: readonly Outline[] = []
): Point & { readonly clear: Millimetres } {
  const { minX, minY, maxX, maxY } = boundingBox(outline);
  const rings = [outline, ...holes].map((ring) => ring.map(({ x, y }): [number, number] => [x, y]));
  const found = polylabel(rings, Math.max(0.001, Math.min(maxX - minX, maxY - minY) / 100));
  return { x: found[0], y: found[1], clear: found.distance };
}
