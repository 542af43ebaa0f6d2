import type { Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import type { Stroke } from './drawing';
import { distance, endOf, reversed } from './path-measure';

/** Ends nearer than this are the same place. */
export const ENDS_MEET: Millimetres = 0.1;

export interface Joined {
  strokes: Stroke[];
  /** Ends that were pulled together although they stood apart. */
  gaps: { at: Point; gap: Millimetres }[];
  /** Places where more than two ends meet, so that nothing was joined there. */
  forks: { at: Point; ends: number }[];
}

/** Where strokes end, with which of their two ends: `end` 0 is the start. */
interface End {
  stroke: number;
  end: 0 | 1;
  at: Point;
}

/** Ends grouped by place: every end within reach of another belongs to the same place. */
function places(ends: readonly End[]): End[][] {
  const cell = (p: Point, dx = 0, dy = 0): string =>
    `${Math.floor(p.x / ENDS_MEET) + dx}:${Math.floor(p.y / ENDS_MEET) + dy}`;
  const grid = new Map<string, number[]>();
  ends.forEach((end, i) => {
    const key = cell(end.at);
    const list = grid.get(key);
    if (list) list.push(i);
    else grid.set(key, [i]);
  });
  const place = new Array<number>(ends.length).fill(-1);
  const groups: End[][] = [];
  for (let i = 0; i < ends.length; i += 1) {
    if (place[i] !== -1) continue;
    const group: End[] = [];
    const open = [i];
    place[i] = groups.length;
    while (open.length > 0) {
      const k = open.pop()!;
      group.push(ends[k]!);
      for (let dx = -1; dx <= 1; dx += 1)
        for (let dy = -1; dy <= 1; dy += 1)
          for (const other of grid.get(cell(ends[k]!.at, dx, dy)) ?? [])
            if (place[other] === -1 && distance(ends[k]!.at, ends[other]!.at) <= ENDS_MEET) {
              place[other] = groups.length;
              open.push(other);
            }
    }
    groups.push(group);
  }
  return groups;
}

/** One stroke from a chain of strokes, each already turned the right way; the first one's words are kept. */
function chain(parts: readonly Stroke[], joined: Joined): Stroke {
  const [first, ...rest] = parts as readonly [Stroke, ...Stroke[]];
  const segments = [...first.path.segments];
  for (const part of rest) {
    const end = segments[segments.length - 1]!;
    const gap = distance(end.to, part.path.from);
    if (gap > 0.001) joined.gaps.push({ at: end.to, gap });
    segments[segments.length - 1] = { ...end, to: part.path.from };
    segments.push(...part.path.segments);
  }
  return {
    ...first,
    name: parts.find((part) => part.name !== '')?.name ?? '',
    path: { from: first.path.from, segments }
  };
}

/**
 * Open strokes joined where exactly two of their ends meet. Strokes of different layers, groups or meanings are
 * never joined. A chain that comes back to its start is left for the caller to close.
 */
export function joinStrokes(open: readonly Stroke[]): Joined {
  const joined: Joined = { strokes: [], gaps: [], forks: [] };
  const families = new Map<string, Stroke[]>();
  for (const stroke of open) {
    const key = JSON.stringify([stroke.layer, stroke.group, stroke.meaning]);
    const family = families.get(key);
    if (family) family.push(stroke);
    else families.set(key, [stroke]);
  }
  for (const family of families.values()) joinFamily(family, joined);
  return joined;
}

function joinFamily(family: readonly Stroke[], joined: Joined): void {
  const ends = family.flatMap((stroke, i): End[] => [
    { stroke: i, end: 0, at: stroke.path.from },
    { stroke: i, end: 1, at: endOf(stroke.path) }
  ]);
  /** The end that meets an end, by stroke × 2 + end. */
  const partner = new Map<number, End>();
  for (const group of places(ends)) {
    if (group.length > 2) joined.forks.push({ at: group[0]!.at, ends: group.length });
    if (group.length !== 2) continue;
    const [a, b] = group as [End, End];
    partner.set(a.stroke * 2 + a.end, b);
    partner.set(b.stroke * 2 + b.end, a);
  }
  const used = new Set<number>();
  /** Walks from the given end of a stroke away from it, over all partners. */
  const walk = (start: number, leaveBy: 0 | 1): Stroke[] => {
    const parts: Stroke[] = [];
    let [stroke, out] = [start, leaveBy];
    while (!used.has(stroke)) {
      used.add(stroke);
      const part = family[stroke]!;
      parts.push(out === 1 ? part : { ...part, path: reversed(part.path) });
      const next = partner.get(stroke * 2 + out);
      if (!next) break;
      stroke = next.stroke;
      out = next.end === 0 ? 1 : 0;
    }
    return parts;
  };
  // Chains with loose ends first, each from one of them; what remains are rings.
  for (let i = 0; i < family.length; i += 1) {
    if (used.has(i)) continue;
    const looseStart = !partner.has(i * 2);
    const looseEnd = !partner.has(i * 2 + 1);
    if (looseStart || looseEnd) joined.strokes.push(chain(walk(i, looseStart ? 1 : 0), joined));
  }
  for (let i = 0; i < family.length; i += 1) if (!used.has(i)) joined.strokes.push(chain(walk(i, 1), joined));
}
