import type { Outline, Point } from '$lib/geometry/point';

/*
 * Overlap, overhang and distance of outlines as they lie, straight from their edges: the independent check of what the
 * search found by other means.
 */

/** An outline as it lies, with its box. */
export interface Placed {
  readonly name: string;
  readonly outline: Outline;
  readonly fixed: boolean;
  readonly minX: number;
  readonly minY: number;
  readonly maxX: number;
  readonly maxY: number;
  readonly inner: () => Point;
}

export function placedOf(name: string, outline: Outline, fixed: boolean): Placed {
  const box = { minX: Infinity, minY: Infinity, maxX: -Infinity, maxY: -Infinity };
  for (const { x, y } of outline) {
    box.minX = Math.min(box.minX, x);
    box.minY = Math.min(box.minY, y);
    box.maxX = Math.max(box.maxX, x);
    box.maxY = Math.max(box.maxY, y);
  }
  let inner: Point | null = null;
  return { name, outline, fixed, ...box, inner: () => (inner ??= innerPlace(outline, box)) };
}

/**
 * How deep two outlines reach into each other: the largest distance to the border of one, of a place of the other's
 * border (or its inner place) that lies inside it. Borders are looked at between all their crossings.
 */
export function depthOf(a: Placed, b: Placed): number {
  return Math.max(reach(a, b), reach(b, a));
}

/** How deep places of `outline` lie inside `other`. */
function reach(one: Placed, other: Placed): number {
  let depth = depthInside(one.inner(), other.outline);
  const { outline } = one;
  for (let i = 0, j = outline.length - 1; i < outline.length; j = i++) {
    const a = outline[j]!;
    const b = outline[i]!;
    if (
      Math.max(a.x, b.x) <= other.minX ||
      Math.min(a.x, b.x) >= other.maxX ||
      Math.max(a.y, b.y) <= other.minY ||
      Math.min(a.y, b.y) >= other.maxY
    )
      continue;
    const stops = [0, 1, ...crossings(a, b, other.outline)].sort((s, t) => s - t);
    for (let k = 0; k < stops.length; k++) {
      depth = Math.max(depth, depthInside(along(a, b, stops[k]!), other.outline));
      if (k > 0)
        depth = Math.max(depth, depthInside(along(a, b, (stops[k - 1]! + stops[k]!) / 2), other.outline));
    }
  }
  return depth;
}

const along = (a: Point, b: Point, t: number): Point => ({
  x: a.x + t * (b.x - a.x),
  y: a.y + t * (b.y - a.y)
});

/** Where along a → b, 0 … 1, the edges of `outline` cross it. */
function crossings(a: Point, b: Point, outline: Outline): number[] {
  const found: number[] = [];
  const dx = b.x - a.x;
  const dy = b.y - a.y;
  for (let i = 0, j = outline.length - 1; i < outline.length; j = i++) {
    const c = outline[j]!;
    const ex = outline[i]!.x - c.x;
    const ey = outline[i]!.y - c.y;
    const across = dx * ey - dy * ex;
    if (across === 0) continue;
    const t = ((c.x - a.x) * ey - (c.y - a.y) * ex) / across;
    const s = ((c.x - a.x) * dy - (c.y - a.y) * dx) / across;
    if (t > 0 && t < 1 && s >= 0 && s <= 1) found.push(t);
  }
  return found;
}

/** How far inside `outline` a place lies; 0 outside. */
function depthInside(p: Point, outline: Outline): number {
  let inside = false;
  for (let i = 0, j = outline.length - 1; i < outline.length; j = i++) {
    const a = outline[j]!;
    const b = outline[i]!;
    if (a.y <= p.y !== b.y <= p.y && a.x + ((p.y - a.y) / (b.y - a.y)) * (b.x - a.x) > p.x) inside = !inside;
  }
  return inside ? cornersTo([p], outline) : 0;
}

/** A place well inside: the middle of the longest chord of a few across the outline. */
function innerPlace(outline: Outline, box: { minY: number; maxY: number }): Point {
  let best = outline[0]!;
  let longest = -1;
  for (let k = 1; k < 16; k++) {
    const y = box.minY + ((box.maxY - box.minY) * k) / 16;
    const xs: number[] = [];
    for (let i = 0, j = outline.length - 1; i < outline.length; j = i++) {
      const a = outline[j]!;
      const b = outline[i]!;
      if (a.y <= y !== b.y <= y) xs.push(a.x + ((y - a.y) / (b.y - a.y)) * (b.x - a.x));
    }
    xs.sort((s, t) => s - t);
    for (let i = 0; i + 1 < xs.length; i += 2) {
      if (xs[i + 1]! - xs[i]! <= longest) continue;
      longest = xs[i + 1]! - xs[i]!;
      best = { x: (xs[i]! + xs[i + 1]!) / 2, y };
    }
  }
  return best;
}

/** How far a border reaches out of the outline that should hold it. */
export function reachOutside(border: Outline, holder: Outline): number {
  let most = 0;
  for (let i = 0, j = border.length - 1; i < border.length; j = i++) {
    const a = border[j]!;
    const b = border[i]!;
    const stops = [0, 1, ...crossings(a, b, holder)].sort((s, t) => s - t);
    for (let k = 0; k < stops.length; k++) {
      const places = [along(a, b, stops[k]!)];
      if (k > 0) places.push(along(a, b, (stops[k - 1]! + stops[k]!) / 2));
      for (const p of places) if (depthInside(p, holder) === 0) most = Math.max(most, cornersTo([p], holder));
    }
  }
  return most;
}

/** The least distance between the edges of two outlines that do not cross. */
export function distance(a: Outline, b: Outline): number {
  return Math.min(cornersTo(a, b), cornersTo(b, a));
}

function cornersTo(corners: Outline, outline: Outline): number {
  let least = Infinity;
  for (const p of corners)
    for (let i = 0, j = outline.length - 1; i < outline.length; j = i++)
      least = Math.min(least, toEdge(p, outline[j]!, outline[i]!));
  return least;
}

function toEdge(p: Point, a: Point, b: Point): number {
  const dx = b.x - a.x;
  const dy = b.y - a.y;
  const t = ((p.x - a.x) * dx + (p.y - a.y) * dy) / (dx * dx + dy * dy || 1);
  const c = t < 0 ? 0 : t > 1 ? 1 : t;
  return Math.sqrt((p.x - a.x - c * dx) ** 2 + (p.y - a.y - c * dy) ** 2);
}
