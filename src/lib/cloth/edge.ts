import { z } from 'zod';
import type { Outline } from '$lib/geometry/point';
import { boundingBox, counterClockwise, isSimple } from '$lib/geometry/polygon';
import type { Millimetres } from '$lib/units/measure';

/*
 * The edge of an odd remnant: corners from its start along the warp (x) and from its near side across (y).
 */

const EDGE_SCHEMA = 1;
export const MOST_CORNERS = 200;

const point = z.object({ x: z.number().finite(), y: z.number().finite() });
const stored = z.object({
  schema: z.literal(EDGE_SCHEMA),
  points: z.array(point).min(3).max(MOST_CORNERS)
});

/** The edge in stored text. Throws for what is none. */
export function openEdge(text: string): Outline {
  return stored.parse(JSON.parse(text)).points;
}

export function edgeText(edge: Outline): string {
  return JSON.stringify({ schema: EDGE_SCHEMA, points: edge });
}

export type EdgeReading = { readonly edge: Outline; readonly error?: undefined } | { readonly error: string };

/** Corners as an edge, counter-clockwise; or what is wrong with them. The edge lies within `length` by `width`. */
export function edgeOf(
  corners: Outline,
  within: { readonly length: Millimetres; readonly width: Millimetres }
): EdgeReading {
  if (corners.length < 3) return { error: `An edge needs at least 3 corners; these are ${corners.length}.` };
  if (corners.length > MOST_CORNERS)
    return { error: `An edge has at most ${MOST_CORNERS} corners; these are ${corners.length}.` };
  const { minX, minY, maxX, maxY } = boundingBox(corners);
  if (minX < 0 || minY < 0 || maxX > within.length + 0.001 || maxY > within.width + 0.001)
    return { error: 'A corner lies outside the length and width that are given above.' };
  if (!isSimple(corners))
    return { error: 'The edge crosses itself. Type the corners in order, once around.' };
  return { edge: counterClockwise(corners) };
}
