import { prepare } from '$lib/geometry/prepared';
import { clearBy } from '$lib/geometry/distance';
import type { Box, Outline } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';

/*
 * What is left of a lay that is worth keeping: the largest upright rectangles that no piece touches.
 */

/** A remnant smaller than this is a scrap: 20 × 30 cm. */
export const SMALLEST_REMNANT = { length: 300, width: 200 } as const;

/**
 * The largest rectangles within 0 … `length` by 0 … `width` that touch no outline, the largest first, none overlapping another; at most `most`.
 * Each is at least `least` one way round. Found on a grid of `cell` and so up to two cells smaller than they could be, never larger.
 */
export function emptyRectangles(
  outlines: readonly Outline[],
  length: Millimetres,
  width: Millimetres,
  {
    least = SMALLEST_REMNANT,
    most = 4,
    cell = 10
  }: {
    readonly least?: { readonly length: Millimetres; readonly width: Millimetres };
    readonly most?: number;
    readonly cell?: Millimetres;
  } = {}
): Box[] {
  const columns = Math.floor(length / cell + 1e-9);
  const rows = Math.floor(width / cell + 1e-9);
  if (columns < 1 || rows < 1) return [];
  const taken = new Uint8Array(columns * rows);
  for (const outline of outlines) {
    const shape = prepare(outline);
    const { box } = shape;
    for (
      let c = Math.max(0, Math.floor(box.minX / cell));
      c < Math.min(columns, Math.ceil(box.maxX / cell));
      c++
    )
      for (
        let r = Math.max(0, Math.floor(box.minY / cell));
        r < Math.min(rows, Math.ceil(box.maxY / cell));
        r++
      )
        if (!taken[c * rows + r] && !clearBy(shape, prepare(square(c * cell, r * cell, cell)), 0))
          taken[c * rows + r] = 1;
  }
  const found: Box[] = [];
  while (found.length < most) {
    const best = largest(taken, columns, rows, least.length / cell, least.width / cell);
    if (!best) break;
    const [c0, r0, c1, r1] = best;
    found.push({ minX: c0 * cell, minY: r0 * cell, maxX: c1 * cell, maxY: r1 * cell });
    for (let c = c0; c < c1; c++) for (let r = r0; r < r1; r++) taken[c * rows + r] = 1;
  }
  return found;
}

const square = (x: number, y: number, size: number): Outline => [
  { x, y },
  { x: x + size, y },
  { x: x + size, y: y + size },
  { x, y: y + size }
];

/** The largest free rectangle of cells, [first column, first row, past the last column, past the last row]: over each column the largest under a skyline. */
function largest(
  taken: Uint8Array,
  columns: number,
  rows: number,
  long: number,
  short: number
): [number, number, number, number] | null {
  const heights = new Int32Array(rows);
  let best: [number, number, number, number] | null = null;
  let bestArea = 0;
  for (let c = 0; c < columns; c++) {
    for (let r = 0; r < rows; r++) heights[r] = taken[c * rows + r] ? 0 : heights[r]! + 1;
    const stack: number[] = [];
    for (let r = 0; r <= rows; r++) {
      const height = r < rows ? heights[r]! : 0;
      while (stack.length > 0 && heights[stack.at(-1)!]! >= height) {
        const h = heights[stack.pop()!]!;
        const from = stack.length > 0 ? stack.at(-1)! + 1 : 0;
        const wide = r - from;
        const fits = (h >= long && wide >= short) || (h >= short && wide >= long);
        if (fits && h * wide > bestArea) {
          bestArea = h * wide;
          best = [c + 1 - h, from, c + 1, r];
        }
      }
      stack.push(r);
    }
  }
  return best;
}
