import type { Point } from '$lib/geometry/point';
import type { Path } from '$lib/pattern/panel';
import { closePath, pathMiddle } from './clean-path';
import type { Find, Stroke } from './drawing';
import { ENDS_MEET, joinStrokes } from './join';
import { distance, endOf, isInside, pathBox, signedArea } from './path-measure';
import { ring } from './nesting';

/** An open line whose ends are nearer than this, and that stands in no outline, was probably meant to be closed. */
const NEARLY_CLOSED = 5;

export interface Closed {
  stroke: Stroke;
  path: Path;
  gap: number;
}

/** Parts strokes into closed outlines and open lines; joins what meets end to end. */
export function closeStrokes(strokes: readonly Stroke[], find: Find): { closed: Closed[]; open: Stroke[] } {
  const joinedOver = (at: Point, gap: number): void =>
    find('joined', 'tells', `Two ends that stood ${gap.toFixed(3)} mm apart were joined.`, at, null, gap);
  const closed: Closed[] = [];
  const loose: Stroke[] = [];
  const open: Stroke[] = [];
  for (const stroke of strokes) {
    const gap = distance(stroke.path.from, endOf(stroke.path));
    if (stroke.closed || (gap <= ENDS_MEET && stroke.path.segments.length > 1)) {
      if (!stroke.closed && gap > 0.001) joinedOver(stroke.path.from, gap);
      closed.push({ stroke, path: closePath(stroke.path), gap: 0 });
    } else if (['grain', 'mirror', 'notch', 'reference'].includes(stroke.meaning)) open.push(stroke);
    else loose.push(stroke);
  }
  const joined = joinStrokes(loose);
  for (const { at, gap } of joined.gaps) joinedOver(at, gap);
  for (const { at, ends } of joined.forks.slice(0, 50))
    find(
      'fork',
      'warns',
      `${ends} lines end at one place; it is not clear which two belong together.`,
      at,
      null,
      ends
    );
  const still: Stroke[] = [];
  for (const stroke of joined.strokes) {
    const gap = distance(stroke.path.from, endOf(stroke.path));
    if (gap <= ENDS_MEET && stroke.path.segments.length > 1) {
      if (gap > 0.001) joinedOver(stroke.path.from, gap);
      closed.push({ stroke, path: closePath(stroke.path), gap: 0 });
    } else still.push(stroke);
  }
  const rings = closed.map(({ path }) => ({ ring: ring(path), box: pathBox(path) }));
  for (const stroke of still) {
    const gap = distance(stroke.path.from, endOf(stroke.path));
    const middle = pathMiddle(stroke.path);
    const stands = rings.some(
      ({ ring: polygon, box }) =>
        middle.x >= box.minX &&
        middle.x <= box.maxX &&
        middle.y >= box.minY &&
        middle.y <= box.maxY &&
        isInside(middle, polygon)
    );
    const encloses = stroke.path.segments.length > 1 && Math.abs(signedArea(stroke.path)) > 100;
    if (encloses && !stands) {
      const name = stroke.name === '' ? 'An outline' : `'${stroke.name}'`;
      if (gap <= NEARLY_CLOSED) closed.push({ stroke, path: closePath(stroke.path), gap });
      else
        find(
          'not-closed',
          'warns',
          `${name} is not closed: its ends are ${gap.toFixed(1)} mm apart. It was taken as a line.`,
          stroke.path.from,
          null,
          gap
        );
      if (gap <= NEARLY_CLOSED) continue;
    }
    open.push(stroke);
  }
  return { closed, open };
}
