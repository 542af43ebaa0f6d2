import type { Point } from '$lib/geometry/point';
import type { Path, Segment } from '$lib/pattern/panel';
import { ENDS_MEET } from './join';
import { distance, endOf, flatten } from './path-measure';

/* Small repairs to single paths before they are joined and judged. */

const round = (value: number): number => Math.round(value * 1e6) / 1e6 + 0;
const roundPoint = ({ x, y }: Point): Point => ({ x: round(x), y: round(y) });

/** A path without stretches of no length, on a grid far finer than any cloth; null when nothing is left. */
export function clean(path: Path): Path | null {
  const from = roundPoint(path.from);
  const segments: Segment[] = [];
  let last = from;
  for (const segment of path.segments) {
    const to = roundPoint(segment.to);
    const still =
      distance(last, to) < 1e-5 &&
      (segment.kind === 'line' || (distance(last, segment.c1) < 1e-5 && distance(last, segment.c2) < 1e-5));
    if (still) continue;
    segments.push(
      segment.kind === 'line'
        ? { kind: 'line', to }
        : { kind: 'cubic', c1: roundPoint(segment.c1), c2: roundPoint(segment.c2), to }
    );
    last = to;
  }
  return segments.length === 0 ? null : { from, segments };
}

export function points(path: Path): Point[] {
  return [
    path.from,
    ...path.segments.flatMap((segment) =>
      segment.kind === 'line' ? [segment.to] : [segment.c1, segment.c2, segment.to]
    )
  ];
}

/** A path that ends exactly where it starts: a last stretch is pulled in or a straight one added. */
export function closePath(path: Path): Path {
  const end = endOf(path);
  const gap = distance(end, path.from);
  const segments = [...path.segments];
  if (gap === 0) return path;
  if (gap <= ENDS_MEET && segments.length > 1) {
    segments[segments.length - 1] = { ...segments[segments.length - 1]!, to: path.from };
  } else segments.push({ kind: 'line', to: path.from });
  return { from: path.from, segments };
}

export function pathMiddle(path: Path): Point {
  const flat = flatten(path, 1);
  const i = Math.floor((flat.length - 1) / 2);
  const [a, b] = [flat[i]!, flat[i + 1] ?? flat[i]!];
  return { x: (a.x + b.x) / 2, y: (a.y + b.y) / 2 };
}
