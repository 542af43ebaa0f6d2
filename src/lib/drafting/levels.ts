import { flatten, pathLength, placeAt, type Path } from '$lib/geometry/path';
import type { Point } from '$lib/geometry/point';
import { edgePath } from '$lib/pattern/flat-edge';
import type { Panel } from '$lib/pattern/panel';
import type { Millimetres } from '$lib/units/measure';

/*
 * Measuring a finished garment at a level: how wide panels are along one line across the paper.
 */

/**
 * How much of a panel lies on the level line `y` of its draft (y down, as drawn), sew line to sew line; a panel on the fold gives its half.
 */
export function widthAt(panel: Panel, y: Millimetres): Millimetres {
  const outline = panel.edges.flatMap((edge) => flatten(edgePath(edge, (p) => p)).slice(0, -1));
  const xs: number[] = [];
  outline.forEach((a, i) => {
    const b = outline[(i + 1) % outline.length]!;
    // Half open, so that a corner on the line counts once.
    if (-a.y <= y === -b.y <= y) return;
    xs.push(a.x + ((b.x - a.x) * (-y - a.y)) / (b.y - a.y));
  });
  xs.sort((a, b) => a - b);
  return xs.reduce((sum, x, i) => (i % 2 === 0 ? sum - x : sum + x), 0);
}

/** How far along a path that runs down the paper the level `y` lies. @throws RangeError when it does not reach it. */
export function distanceAtLevel(path: Path, y: Millimetres): Millimetres {
  return distanceWhere(path, (point) => point.y - y, `the level ${y} mm`);
}

/** How far along a path from left to right, or back, x is reached. @throws RangeError when it is not. */
export function distanceAcross(path: Path, x: Millimetres): Millimetres {
  return distanceWhere(path, (point) => point.x - x, `x = ${x} mm`);
}

function distanceWhere(path: Path, side: (point: Point) => number, what: string): Millimetres {
  const length = pathLength(path);
  let [a, b] = [0, length];
  const start = side(path.from);
  if (Math.abs(start) < 1e-6) return 0;
  if (start * side(placeAt(path, length).point) > 0) throw new RangeError(`The line does not reach ${what}`);
  for (let k = 0; k < 60 && b - a > 1e-9; k++) {
    const middle = (a + b) / 2;
    if (side(placeAt(path, middle).point) * start > 0) a = middle;
    else b = middle;
  }
  return (a + b) / 2;
}
