import polygonClipping, { type Polygon } from 'polygon-clipping';
import type { SquareMillimetres } from '$lib/units/measure';
import { area } from './polygon';
import { snapPoint, type Outline } from './point';

export interface OverlapRegion {
  /** The pieces of the overlap, outer outlines only, counter-clockwise. */
  readonly region: readonly Outline[];
  readonly area: SquareMillimetres;
}

/** On the grid, so that the library is not handed corners that differ by the noise of a turn. */
function asPolygon(outline: Outline): Polygon {
  return [
    outline.map((point) => {
      const { x, y } = snapPoint(point);
      return [x, y];
    })
  ];
}

/**
 * What `a` and `b` share, for drawing and measuring an overlap that `overlapDepth` has convicted: it never convicts by
 * itself. Empty when they share no surface on the 0.001 mm grid.
 */
export function overlapRegion(a: Outline, b: Outline): OverlapRegion {
  const shared = polygonClipping.intersection(asPolygon(a), asPolygon(b));
  let total = 0;
  const region: Outline[] = [];
  for (const polygon of shared)
    polygon.forEach((ring, i) => {
      // Rings come closed, the outer one counter-clockwise, holes after it.
      const outline = ring.slice(0, -1).map(([x, y]) => ({ x, y }));
      const size = Math.abs(area(outline));
      total += i === 0 ? size : -size;
      if (i === 0) region.push(outline);
    });
  return { region, area: total };
}
