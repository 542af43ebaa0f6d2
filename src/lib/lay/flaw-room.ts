import type { Flaw } from '$lib/cloth/strip';
import { placeOutline } from '$lib/geometry/placement';
import type { Box, Outline, Point } from '$lib/geometry/point';
import { overlapDepth } from '$lib/geometry/overlap';
import { contains } from '$lib/geometry/polygon';
import { outlineOf, prepare } from '$lib/geometry/prepared';
import { segmentsCross, segmentSegmentSquared } from '$lib/geometry/segment';
import type { Millimetres } from '$lib/units/measure';
import type { LayDocument, LayPlacement } from './document';
import type { PlacedPiece } from './placed';

/*
 * Flaws of the cloth: where they are, which panels may lie over them, and how near a piece comes.
 */

/** The box of a flaw, its radius left out. */
export function flawBox({ x, y, along: length, across: width }: Flaw): Box {
  // A line has some width, so that what lies across it is found.
  const [along, across] = length > 0 || width > 0 ? [Math.max(length, 0.1), Math.max(width, 0.1)] : [0, 0];
  return { minX: x - along / 2, minY: y - across / 2, maxX: x + along / 2, maxY: y + across / 2 };
}

/** Whether the panel of a placement was allowed to lie over flaws. */
export function mayCoverFlaws(document: LayDocument, { garment, panel }: LayPlacement): boolean {
  const version = document.garments.find(({ id }) => id === garment)?.styleVersion;
  return document.rules.mayCoverFlaws.some((one) => one.panel === panel && one.styleVersion === version);
}

/** How far the box of a flaw is from the cloth of a piece, negative where they share any; a cut-out is not of the piece. */
export function roomToFlaw({ panel, placement, outline }: PlacedPiece, flaw: Flaw): Millimetres {
  const { minX, minY, maxX, maxY } = flawBox(flaw);
  const box = [
    { x: minX, y: minY },
    { x: maxX, y: minY },
    { x: maxX, y: maxY },
    { x: minX, y: maxY }
  ];
  const cut = outlineOf(outline);
  const gap = gapBetween(cut, box);
  const inside = contains(cut, box[0]!);
  // A box of no size is a point; one around the whole piece has all of it inside.
  if (!inside && gap > 0 && !boxHolds(flaw, cut[0]!)) return gap;
  if (gap === 0) return -overlapDepth(outline, prepare(box)).depth;
  if (!inside) return -gap;
  for (const hole of panel.shape.cutOuts) {
    const placedHole = placeOutline(hole, placement);
    if (!contains(placedHole, box[0]!)) continue;
    const toHole = gapBetween(placedHole, box);
    return toHole === 0 ? -overlapDepth(outline, prepare(box)).depth : Math.min(gap, toHole);
  }
  return -gap;
}

const boxHolds = (flaw: Flaw, { x, y }: Point): boolean => {
  const { minX, minY, maxX, maxY } = flawBox(flaw);
  return x > minX && x < maxX && y > minY && y < maxY;
};

/** The least distance between the edges of two outlines; 0 where they cross or touch. */
function gapBetween(a: Outline, b: Outline): Millimetres {
  let least = Infinity;
  a.forEach((p, i) => {
    const q = a[(i + 1) % a.length]!;
    b.forEach((r, j) => {
      const s = b[(j + 1) % b.length]!;
      least = segmentsCross(p.x, p.y, q.x, q.y, r.x, r.y, s.x, s.y)
        ? 0
        : Math.min(least, segmentSegmentSquared(p.x, p.y, q.x, q.y, r.x, r.y, s.x, s.y));
    });
  });
  return Math.sqrt(least);
}
