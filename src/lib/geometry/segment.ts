/*
 * Straight edges, as bare numbers: these run millions of times while a piece is dragged or a lay is settled.
 */

/** Square of the distance of (px, py) from the segment a → b. */
export function pointSegmentSquared(
  px: number,
  py: number,
  ax: number,
  ay: number,
  bx: number,
  by: number
): number {
  const dx = bx - ax;
  const dy = by - ay;
  const length = dx * dx + dy * dy;
  let t = length > 0 ? ((px - ax) * dx + (py - ay) * dy) / length : 0;
  if (t < 0) t = 0;
  else if (t > 1) t = 1;
  const ex = px - ax - t * dx;
  const ey = py - ay - t * dy;
  return ex * ex + ey * ey;
}

/** Where on a → b (0 to 1) the place nearest to (px, py) lies. */
export function nearestShare(px: number, py: number, ax: number, ay: number, bx: number, by: number): number {
  const dx = bx - ax;
  const dy = by - ay;
  const length = dx * dx + dy * dy;
  if (length === 0) return 0;
  return Math.min(1, Math.max(0, ((px - ax) * dx + (py - ay) * dy) / length));
}

/** Whether a → b and c → d properly cross; in floating point, so only where a touch makes no difference. */
export function segmentsCross(
  ax: number,
  ay: number,
  bx: number,
  by: number,
  cx: number,
  cy: number,
  dx: number,
  dy: number
): boolean {
  const abx = bx - ax;
  const aby = by - ay;
  const sc = abx * (cy - ay) - aby * (cx - ax);
  const sd = abx * (dy - ay) - aby * (dx - ax);
  if (sc > 0 === sd > 0) return false;
  const cdx = dx - cx;
  const cdy = dy - cy;
  const sa = cdx * (ay - cy) - cdy * (ax - cx);
  const sb = cdx * (by - cy) - cdy * (bx - cx);
  return sa > 0 !== sb > 0;
}

/** Square of the distance between a → b and c → d; 0 where they cross. */
export function segmentSegmentSquared(
  ax: number,
  ay: number,
  bx: number,
  by: number,
  cx: number,
  cy: number,
  dx: number,
  dy: number
): number {
  if (segmentsCross(ax, ay, bx, by, cx, cy, dx, dy)) return 0;
  return Math.min(
    pointSegmentSquared(ax, ay, cx, cy, dx, dy),
    pointSegmentSquared(bx, by, cx, cy, dx, dy),
    pointSegmentSquared(cx, cy, ax, ay, bx, by),
    pointSegmentSquared(dx, dy, ax, ay, bx, by)
  );
}
