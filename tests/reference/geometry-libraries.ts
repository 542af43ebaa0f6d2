import { Clipper, EndType, FillRule, JoinType } from 'clipper2-ts';
import GeometryFactory from 'jsts/org/locationtech/jts/geom/GeometryFactory.js';
import GeoJSONReader from 'jsts/org/locationtech/jts/io/GeoJSONReader.js';
import BufferOp from 'jsts/org/locationtech/jts/operation/buffer/BufferOp.js';
import BufferParameters from 'jsts/org/locationtech/jts/operation/buffer/BufferParameters.js';
import DistanceOp from 'jsts/org/locationtech/jts/operation/distance/DistanceOp.js';
import OverlayOp from 'jsts/org/locationtech/jts/operation/overlay/OverlayOp.js';
import polygonClipping from 'polygon-clipping';
import type { Outline } from '$lib/geometry/point';

/*
 * The same questions put to three well-kept libraries that share no code with each other or with us: clipper2-ts 2.0 (whole numbers,
 * here thousandths of a millimetre), jsts 2.12 (a topology suite in floating point) and polygon-clipping 0.15 (a sweep line).
 */

const toClipper = (outline: Outline) =>
  outline.map(({ x, y }) => ({ x: Math.round(x * 1000), y: Math.round(y * 1000) }));
const toPairs = (outline: Outline): [number, number][] => outline.map(({ x, y }) => [x, y]);

const reader = new GeoJSONReader(new GeometryFactory());
const toJsts = (outline: Outline) =>
  reader.read({
    type: 'Polygon',
    coordinates: [[...toPairs(outline), [outline[0]!.x, outline[0]!.y]]]
  });

/** Area of an outline, square millimetres. */
export const areaBy: Record<string, (outline: Outline) => number> = {
  'clipper2-ts': (outline) => Clipper.area(toClipper(outline)) / 1e6,
  jsts: (outline) => toJsts(outline).getArea()
};

/** Area that two outlines share. */
export const sharedAreaBy: Record<string, (a: Outline, b: Outline) => number> = {
  'clipper2-ts': (a, b) =>
    Clipper.areaPaths(Clipper.intersect([toClipper(a)], [toClipper(b)], FillRule.NonZero)) / 1e6,
  jsts: (a, b) => OverlayOp.intersection(toJsts(a), toJsts(b)).getArea(),
  'polygon-clipping': (a, b) =>
    polygonClipping
      .intersection([toPairs(a)], [toPairs(b)])
      .flatMap((polygon) => polygon.map((ring, i) => (i === 0 ? 1 : -1) * Math.abs(ringArea(ring))))
      .reduce((sum, part) => sum + part, 0)
};

function ringArea(ring: readonly (readonly [number, number])[]): number {
  return Clipper.areaD(ring.map(([x, y]) => ({ x, y })));
}

/** Distance of two outlines, by jsts; 0 where they share a point. */
export const distanceByJsts = (a: Outline, b: Outline): number =>
  new DistanceOp(toJsts(a), toJsts(b)).distance();

/** Every outline at one distance, corners mitred up to four times it: the outer ring only. */
export const offsetBy: Record<string, (outline: Outline, distance: number) => Outline> = {
  'clipper2-ts': (outline, distance) => {
    const paths = Clipper.inflatePaths(
      [toClipper(outline)],
      distance * 1000,
      JoinType.Miter,
      EndType.Polygon,
      4
    );
    const largest = paths.reduce((most, path) => (Clipper.area(path) > Clipper.area(most) ? path : most));
    return largest.map(({ x, y }) => ({ x: x / 1000, y: y / 1000 }));
  },
  jsts: (outline, distance) => {
    const parameters = new BufferParameters(8, BufferParameters.CAP_FLAT, BufferParameters.JOIN_MITRE, 4);
    // The library thins its input out by a share of the distance unless told not to.
    parameters.setSimplifyFactor(1e-6);
    const result = new BufferOp(toJsts(outline), parameters).getResultGeometry(distance);
    const ring: { x: number; y: number }[] = result.getExteriorRing().getCoordinates();
    return ring.slice(0, -1).map(({ x, y }) => ({ x, y }));
  }
};

/** Area that is in one of two outlines and not in the other, by clipper2-ts. */
export function differenceInArea(a: Outline, b: Outline): number {
  const parts = Clipper.xor([toClipper(a)], [toClipper(b)], FillRule.NonZero);
  return Math.abs(Clipper.areaPaths(parts)) / 1e6;
}
