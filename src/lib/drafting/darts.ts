import { pathLength as lengthOf, placeAt, splitAt, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { meetingPoint } from '$lib/geometry/polygon';
import { straight } from './construction';
import { add, apart, between, minus, towards } from './curves';

/** The drill hole lies this far short of a dart's point, so that it is hidden in the fold. From memory: half an inch. */
const DRILL_SHORT = 13;

/** A dart on an edge: the edge in two, the cap between them, its legs. */
export interface Dart {
  readonly before: Path;
  /** Over the mouth: what lies even with the seam once the dart is folded and pressed. */
  readonly cap: Path;
  readonly after: Path;
  readonly legs: readonly [Path, Path];
  readonly point: Point;
  readonly drill: Point;
}

/**
 * A dart into `edge`, its mouth `width` wide along the edge about the place at `distance`, its point `length` away on the side that `inward`
 * names. Legs are equal.
 */
export function dartInto(
  edge: Path,
  distance: number,
  width: number,
  length: number,
  inward: Point = { x: 0, y: 1 }
): Dart {
  const [before, rest] = splitAt(edge, distance - width / 2);
  const [, after] = splitAt(rest, width);
  const a = rest.from;
  const b = after.from;
  const middle = between(a, b, 0.5);
  const across = minus(b, a);
  const normal = { x: -across.y, y: across.x };
  const sign = normal.x * inward.x + normal.y * inward.y < 0 ? -1 : 1;
  const point = add(middle, normal, (sign * length) / Math.hypot(normal.x, normal.y));
  return dartBetween(before, after, point);
}

/** The dart whose mouth lies between the end of `before` and the start of `after`, with its point at `point`; legs must be equal. */
export function dartBetween(before: Path, after: Path, point: Point): Dart {
  const a = endOf(before);
  const b = after.from;
  const arriving = placeAt(before, lengthOf(before)).tangent;
  const cap = straight(a, capPoint(a, b, arriving, point), b);
  return {
    before,
    cap,
    after,
    legs: [straight(a, point), straight(b, point)],
    point,
    drill: towards(point, between(a, b, 0.5), DRILL_SHORT)
  };
}

const endOf = (path: Path): Point => path.segments[path.segments.length - 1]!.to;

/**
 * Where the fold of the dart ends: the edge beside the mouth, mirrored at the leg, meets the middle line of the dart there. Folded and
 * pressed towards that side the cap lies under the edge.
 */
function capPoint(a: Point, b: Point, arriving: Point, point: Point): Point {
  const leg = minus(a, point);
  const size = leg.x * leg.x + leg.y * leg.y;
  const back = { x: -arriving.x, y: -arriving.y };
  const dot = back.x * leg.x + back.y * leg.y;
  const mirrored = { x: (2 * dot * leg.x) / size - back.x, y: (2 * dot * leg.y) / size - back.y };
  const middle = between(a, b, 0.5);
  const reach = 4 * apart(a, b);
  const out = add(middle, minus(middle, point), reach / apart(middle, point));
  return meetingPoint(a, add(a, mirrored, reach), between(middle, point, 0.5), out) ?? middle;
}
