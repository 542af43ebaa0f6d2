import type { Point } from '$lib/geometry/point';
import type { Path, Segment } from '$lib/pattern/panel';

const short = (value: number): string => String(Math.round(value * 100) / 100 + 0);
const at = ({ x, y }: Point): string => `${short(x)} ${short(-y)}`;

function one(segment: Segment): string {
  return segment.kind === 'line'
    ? `L${at(segment.to)}`
    : `C${at(segment.c1)} ${at(segment.c2)} ${at(segment.to)}`;
}

/** A path as data for our own drawing, y turned down; made from numbers, never from uploaded text. */
export function pathData(path: Path, closed = false): string {
  return `M${at(path.from)}${path.segments.map(one).join('')}${closed ? 'Z' : ''}`;
}

/** Straight lines through points as path data. */
export function lineData(points: readonly Point[], closed = false): string {
  return points.map((point, i) => `${i === 0 ? 'M' : 'L'}${at(point)}`).join('') + (closed ? 'Z' : '');
}

/** The two strokes of an arrow head at `tip`, coming from `from`, as path data. */
export function headData(from: Point, tip: Point, size: number): string {
  const length = Math.hypot(tip.x - from.x, tip.y - from.y) || 1;
  const [ux, uy] = [(tip.x - from.x) / length, (tip.y - from.y) / length];
  const back = (side: number): Point => ({
    x: tip.x - ux * size + side * uy * size * 0.45,
    y: tip.y - uy * size - side * ux * size * 0.45
  });
  return `M${at(back(1))}L${at(tip)}L${at(back(-1))}`;
}
