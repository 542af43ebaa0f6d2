import { travel } from '$lib/geometry/contact';
import { snapPlacement } from '$lib/geometry/placement';
import type { Point } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import { roomTo, sideOn, sides, type StripSide } from './borders';
import type { Edit } from './edit';
import type { LayDocument } from './document';
import type { PanelBook } from './panel-book';
import { placedPieces } from './placed';
import { millimetres, nameOf, pieces } from './wording';

/** Towards the start or the end of the cloth, the near or the far selvedge. */
export type SnugWay = StripSide;
export const snugWays = sides;

const directions: Readonly<Record<SnugWay, Point>> = {
  start: { x: -1, y: 0 },
  end: { x: 1, y: 0 },
  near: { x: 0, y: -1 },
  far: { x: 0, y: 1 }
};

/**
 * Pushes the chosen pieces, as one body, one way until they meet another piece at the clearance or the border of the strip.
 * Locked pieces stay and are met like any other. Refused where nothing can move, or where nothing is in the way.
 */
export function snug(document: LayDocument, book: PanelBook, ids: readonly string[], way: SnugWay): Edit {
  const wanted = new Set(ids);
  const all = placedPieces(document, book);
  const moving = all.filter(({ placement }) => wanted.has(placement.id) && !placement.locked);
  if (moving.length === 0) {
    const held = document.placements.some(({ id, locked }) => wanted.has(id) && locked);
    return { refused: held ? 'What is chosen is locked. Unlock it first.' : 'No piece is chosen.' };
  }
  const moved = new Set(moving.map(({ placement }) => placement.id));
  const others = all.filter(({ placement }) => !moved.has(placement.id));
  const fixed = others.map(({ outline }) => outline);

  const room = Math.min(...moving.map(({ outline }) => roomTo(outline.box, document.strip)[way]));
  let far: Millimetres = Math.max(0, Math.floor(room * 1000 + 1e-6) / 1000);
  for (const { outline } of moving)
    far = Math.min(far, travel(outline, fixed, directions[way], document.strip.clearance, far));
  const what = moving.length === 1 ? nameOf(document, book, moving[0]!.placement) : pieces(moving.length);
  if (far === Infinity) return { refused: `Nothing lies that way for ${what} to snug against.` };
  if (far <= 0) return { refused: `${what} can't move further towards ${sideOn(way, document.strip)}.` };

  const { x, y } = directions[way];
  return {
    document: {
      ...document,
      placements: document.placements.map((placement) =>
        moved.has(placement.id)
          ? {
              ...placement,
              ...snapPlacement({ ...placement, x: placement.x + x * far, y: placement.y + y * far })
            }
          : placement
      )
    },
    said: `${what} snugged ${millimetres(far)} towards ${sideOn(way, document.strip)}.`
  };
}
