import type { Point } from '$lib/geometry/point';
import type { Path } from '$lib/pattern/panel';
import type { Millimetres } from '$lib/units/measure';
import type { Position } from './edges';
import { distance, nearestOnLine, pointOn } from './path-measure';

/** A closed path as points, each with its position and the distance walked to it. */
interface Step {
  at: Point;
  position: Position;
  along: Millimetres;
}

const STEPS_PER_CURVE = 48;

function stepsOf(path: Path): Step[] {
  const steps: Step[] = [{ at: path.from, position: 0, along: 0 }];
  let from: Point = path.from;
  path.segments.forEach((segment, i) => {
    const count = segment.kind === 'line' ? 1 : STEPS_PER_CURVE;
    for (let k = 1; k <= count; k += 1) {
      const last = steps[steps.length - 1]!;
      const at = pointOn(from, segment, k / count);
      steps.push({ at, position: i + k / count, along: last.along + distance(last.at, at) });
    }
    from = segment.to;
  });
  return steps;
}

/** The position on a closed path that is nearest to a point. */
export function nearestPosition(path: Path, point: Point): { position: Position; distance: Millimetres } {
  const steps = stepsOf(path);
  let best = { position: 0, distance: Infinity };
  for (let i = 1; i < steps.length; i += 1) {
    const [a, b] = [steps[i - 1]!, steps[i]!];
    const { at, share } = nearestOnLine(point, a.at, b.at);
    const away = distance(point, at);
    if (away < best.distance)
      best = { position: a.position + (b.position - a.position) * share, distance: away };
  }
  return best.position >= path.segments.length ? { ...best, position: 0 } : best;
}

/** The position that lies so far along a closed path from another one, forward or (negative) back, round the end. */
export function positionAlong(path: Path, start: Position, by: Millimetres): Position {
  const steps = stepsOf(path);
  const whole = steps[steps.length - 1]!.along;
  if (!(whole > 0)) return start;
  const next = Math.max(
    1,
    steps.findIndex(({ position }) => position >= start)
  );
  const [a, b] = [steps[next - 1]!, steps[next]!];
  const share = b.position === a.position ? 0 : (start - a.position) / (b.position - a.position);
  const target = (((a.along + (b.along - a.along) * share + by) % whole) + whole) % whole;
  const end = Math.max(
    1,
    steps.findIndex(({ along }) => along >= target)
  );
  const [c, d] = [steps[end - 1]!, steps[end]!];
  const rest = d.along === c.along ? 0 : (target - c.along) / (d.along - c.along);
  const position = c.position + (d.position - c.position) * rest;
  return position >= path.segments.length ? 0 : position;
}
