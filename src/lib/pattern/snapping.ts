import type { Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import { outlinePoints, type PointName } from './edit-points';
import type { Panel } from './panel';

export interface SnapWishes {
  /** Distance of the grid's lines; null: no grid. */
  readonly grid: Millimetres | null;
  /** To a right angle at the point before or after. */
  readonly square: boolean;
  /** To the height or the side of the point before or after. */
  readonly level: boolean;
  /** From how near it snaps. */
  readonly reach: Millimetres;
}

export interface Snapped {
  readonly point: Point;
  /** What it snapped to; empty when to nothing. */
  readonly to: readonly ('level' | 'square' | 'grid')[];
}

interface Line {
  readonly through: Point;
  readonly way: Point;
  readonly to: 'level' | 'square';
}

/** Where a moved point comes to lie: on the nearest line asked for, at the crossing of two, else on the grid. Pure. */
export function snapped(panel: Panel, name: PointName, at: Point, wishes: SnapWishes): Snapped {
  const points = outlinePoints(panel);
  const n = points.length;
  const i = points.findIndex((one) => one.edge === name.edge && one.at === name.at);
  const lines: Line[] = [];
  if (i >= 0 && n > 2)
    for (const step of [-1, 1]) {
      const near = points[(i + step + n) % n]!.point;
      const beyond = points[(i + 2 * step + 2 * n) % n]!.point;
      if (wishes.level)
        lines.push(
          { through: near, way: { x: 1, y: 0 }, to: 'level' },
          { through: near, way: { x: 0, y: 1 }, to: 'level' }
        );
      const [dx, dy] = [near.x - beyond.x, near.y - beyond.y];
      const length = Math.hypot(dx, dy);
      if (wishes.square && length > 0.01)
        lines.push({ through: near, way: { x: -dy / length, y: dx / length }, to: 'square' });
    }
  const off = ({ through, way }: Line): number => (at.x - through.x) * -way.y + (at.y - through.y) * way.x;
  const near = lines
    .filter((line) => Math.abs(off(line)) <= wishes.reach)
    .toSorted((a, b) => Math.abs(off(a)) - Math.abs(off(b)));
  const [first] = near;
  if (first) {
    const second = near.find((line) => Math.abs(line.way.x * first.way.y - line.way.y * first.way.x) > 0.2);
    const crossing = second && meet(first, second);
    if (crossing && Math.hypot(crossing.x - at.x, crossing.y - at.y) <= 2 * wishes.reach)
      return { point: crossing, to: [...new Set([first.to, second.to])] };
    const away = off(first);
    return { point: { x: at.x + away * first.way.y, y: at.y - away * first.way.x }, to: [first.to] };
  }
  if (wishes.grid !== null && wishes.grid > 0) {
    const g = wishes.grid;
    return { point: { x: Math.round(at.x / g) * g + 0, y: Math.round(at.y / g) * g + 0 }, to: ['grid'] };
  }
  return { point: at, to: [] };
}

function meet(a: Line, b: Line): Point {
  const turn = a.way.x * b.way.y - a.way.y * b.way.x;
  const t = ((b.through.x - a.through.x) * b.way.y - (b.through.y - a.through.y) * b.way.x) / turn;
  return { x: a.through.x + a.way.x * t, y: a.through.y + a.way.y * t };
}
