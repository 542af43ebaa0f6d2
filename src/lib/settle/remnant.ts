import type { Outline } from '$lib/geometry/point';
import { difference, FillRule } from 'clipper2-ts';
import { cleaned, ringArea } from './form';
import type { SettleProblem } from './problem';

/**
 * What lies around a remnant, as outlines without holes: each half of a frame less the remnant, halved again while a
 * part of the remnant lies in it like an island. The frame is wide enough that the nearest way out of it leads
 * into the remnant.
 */
export function surroundings(problem: SettleProblem, scale: number): Outline[] {
  if (!problem.outline) return [];
  const remnant = problem.outline.map((p) => ({ x: Math.round(p.x * scale), y: Math.round(p.y * scale) }));
  const end = Math.max(...remnant.map((p) => p.x));
  const top = Math.round(problem.width * scale);
  const margin = Math.round(2 * scale * Math.max(...problem.pieces.map((piece) => extent(piece.outline))));
  const found: Outline[] = [];
  const split = (from: number, to: number, depth: number) => {
    const frame = [
      { x: from, y: -margin },
      { x: to, y: -margin },
      { x: to, y: top + margin },
      { x: from, y: top + margin }
    ];
    const parts = difference([frame], [remnant], FillRule.NonZero);
    const rings = parts.map((part) =>
      cleaned(
        part.map((p) => p.x),
        part.map((p) => p.y)
      )
    );
    if (depth < 12 && rings.some((ring) => ring && ringArea(ring) < 0)) {
      const middle = Math.round((Math.max(from, 0) + to) / 2);
      split(from, middle, depth + 1);
      split(middle, to, depth + 1);
      return;
    }
    for (const ring of rings)
      if (ring && ringArea(ring) > 4)
        found.push(Array.from(ring.xs, (x, k) => ({ x: x / scale, y: ring.ys[k]! / scale })));
  };
  split(-margin, end, 0);
  return found;
}

/** The longer side of the box of an outline. */
export function extent(outline: Outline): number {
  const xs = outline.map((p) => p.x);
  const ys = outline.map((p) => p.y);
  return Math.max(Math.max(...xs) - Math.min(...xs), Math.max(...ys) - Math.min(...ys));
}
