import type { Point } from '$lib/geometry/point';
import type { Stroke } from './drawing';
import { distance, endOf } from './path-measure';

/** How near an arrow's head must stand to the tip of its shaft. */
const TIP_WITHIN = 0.6;
/** Heads are short beside their shaft, and short at all. */
const HEAD_SHARE = 0.35;
const LONGEST_HEAD = 60;
const SHORTEST_SHAFT = 30;

function isStraight(stroke: Stroke): boolean {
  return stroke.path.segments.length === 1 && stroke.path.segments[0]!.kind === 'line';
}

/** Whether `head` is a head at `tip`: an open or closed V with a point at the tip, or one short stroke ending there. */
function headAt(tip: Point, head: Stroke, longest: number): 'whole' | 'half' | null {
  const points = [head.path.from, ...head.path.segments.map((segment) => segment.to)];
  if (points.length > 5 || points.some((point) => distance(point, tip) > longest)) return null;
  if (points.length === 2) return points.some((point) => distance(point, tip) <= TIP_WITHIN) ? 'half' : null;
  const corner = head.closed ? points : points.slice(1, -1);
  return corner.some((point) => distance(point, tip) <= TIP_WITHIN) ? 'whole' : null;
}

/**
 * Finds straight lines with an arrow head at one or both ends: grain lines as they are drawn by hand. Marks them
 * and returns the strokes without the heads.
 */
export function findArrows(strokes: readonly Stroke[]): Stroke[] {
  const shafts = strokes.filter(
    (stroke) =>
      !stroke.closed &&
      stroke.meaning === 'plain' &&
      isStraight(stroke) &&
      distance(stroke.path.from, endOf(stroke.path)) >= SHORTEST_SHAFT
  );
  if (shafts.length === 0 || shafts.length > 500) return [...strokes];
  const small = strokes.filter(
    (stroke) => stroke.path.segments.length <= 4 && (stroke.meaning === 'plain' || stroke.meaning === 'grain')
  );
  const heads = new Set<Stroke>();
  const arrows = new Set<Stroke>();
  for (const shaft of shafts) {
    const length = distance(shaft.path.from, endOf(shaft.path));
    for (const tip of [shaft.path.from, endOf(shaft.path)]) {
      const found = small
        .filter((stroke) => stroke !== shaft)
        .map((stroke) => ({ stroke, as: headAt(tip, stroke, Math.min(LONGEST_HEAD, HEAD_SHARE * length)) }))
        .filter(({ as }) => as !== null);
      // One line ending at another is a corner of an outline; an arrow has two such strokes, or a whole V.
      const whole = found.filter(({ as }) => as === 'whole');
      const chosen =
        whole.length === 1 && found.length === 1
          ? whole
          : whole.length === 0 && found.length === 2
            ? found
            : [];
      if (chosen.length > 0) {
        arrows.add(shaft);
        chosen.forEach(({ stroke }) => heads.add(stroke));
      }
    }
  }
  return strokes
    .filter((stroke) => !heads.has(stroke))
    .map((stroke) => (arrows.has(stroke) ? { ...stroke, meaning: 'grain', grain: 'arrow' } : stroke));
}
