import { pathLength, placeAt, type Path } from '$lib/geometry/path';
import { snapPoint, type Outline, type Point } from '$lib/geometry/point';
import type { PieceShape } from './piece-shape';

type Stroke = PieceShape['notches'][number];

/** Two or three notches at one place stand this far apart. */
export const NOTCH_APART = 6;

/** How far the mark of a notch reaches into a panel that is drawn as its cut line and names no allowance. */
const INTO_CUT = 3;

/** Where the ray from `from` along `way` first meets `outline`, no farther than `reach`; null when it does not. */
function meets(outline: Outline, from: Point, way: Point, reach: number): Point | null {
  let nearest = Infinity;
  outline.forEach((a, i) => {
    const b = outline[(i + 1) % outline.length]!;
    const [ex, ey] = [b.x - a.x, b.y - a.y];
    const turn = way.x * ey - way.y * ex;
    if (Math.abs(turn) < 1e-12) return;
    const [dx, dy] = [a.x - from.x, a.y - from.y];
    const t = (dx * ey - dy * ex) / turn;
    const share = (dx * way.y - dy * way.x) / turn;
    // A sew line may lie on the cut line: rounding must not hide it.
    if (t > -0.06 && t < nearest && t <= reach && share >= -1e-9 && share <= 1 + 1e-9) nearest = t;
  });
  return nearest === Infinity ? null : { x: from.x + way.x * nearest, y: from.y + way.y * nearest };
}

/**
 * The strokes of a notch at `distance` along an edge: `from` on the sew line, `to` square to it on the cut line. How deep the snip from
 * `to` may go is the guide's (half the stroke, 3 mm at most; outside the cut line for an outward notch). Throws a RangeError past
 * the end of the edge.
 *
 * On a panel drawn as its cut line the notch stands on the cut line and the stroke runs inward: as far as the allowance, or 3 mm where none is
 * named.
 */
export function notchStrokes(
  path: Path,
  notch: { readonly distance: number; readonly count: number; readonly outward: boolean },
  allowance: number,
  drawn: 'sew' | 'cut',
  cut: Outline
): Stroke[] {
  const length = pathLength(path);
  if (notch.distance > length + 0.05)
    throw new RangeError(`The edge is ${length} mm long; there is no place at ${notch.distance} mm`);
  return Array.from({ length: notch.count }, (_, i): Stroke => {
    const along = notch.distance + (i - (notch.count - 1) / 2) * NOTCH_APART;
    const { point, tangent } = placeAt(path, Math.min(Math.max(0, along), length));
    const out = { x: tangent.y, y: -tangent.x };
    if (drawn === 'cut') {
      const depth = allowance > 0 ? allowance : INTO_CUT;
      const from = { x: point.x - out.x * depth, y: point.y - out.y * depth };
      return { from: snapPoint(from), to: snapPoint(point), outward: notch.outward };
    }
    const to = allowance > 0 ? meets(cut, point, out, allowance * 4) : point;
    const plain = { x: point.x + out.x * allowance, y: point.y + out.y * allowance };
    return { from: snapPoint(point), to: snapPoint(to ?? plain), outward: notch.outward };
  });
}
