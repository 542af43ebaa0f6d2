import { clearBy } from '$lib/geometry/distance';
import type { PreparedOutline } from '$lib/geometry/prepared';
import { snap } from '$lib/geometry/point';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import { boxOf, replaced } from '$lib/lay/edit';
import { matched } from '$lib/lay/matching';
import { balance } from '$lib/lay/needs';
import { ontoFold } from '$lib/lay/on-fold';
import type { PanelBook } from '$lib/lay/panel-book';
import { placedOutline, placedPieces, type PlacedPiece } from '$lib/lay/placed';
import { whereAllowed, type AllowedStretch } from '$lib/lay/where-allowed';

/*
 * Where a piece goes that is placed without a pointer: the first place from the zero end, and there from the near
 * selvedge, at which it is clear of all others. Places are tried where its box would touch what is there already.
 */

/** Least gap kept, so that a piece placed this way is never counted as touching. */
const HAIR = 0.001;

/** Stretches of the width in which the piece gives nothing that is not asked for, before those in which it does. */
function inOrder(
  document: LayDocument,
  book: PanelBook,
  own: PlacedPiece,
  stretches: readonly AllowedStretch[]
): AllowedStretch[] {
  const surplus = (stretch: AllowedStretch): number => {
    const laid = atStretch(own, stretch);
    return balance(replaced(document, [laid]), book).surplus.reduce((sum, { count }) => sum + count, 0);
  };
  return stretches
    .map((stretch) => ({ stretch, extra: surplus(stretch) }))
    .sort((a, b) => a.extra - b.extra)
    .map(({ stretch }) => stretch);
}

/** The piece at the lower border of a stretch, at the cloth's start: on the fold, or with its box there. */
function atStretch(own: PlacedPiece, { band, fold, zone, ways }: AllowedStretch): LayPlacement {
  const { panel, placement } = own;
  if (fold) {
    const way =
      ways!.find(({ turn, flip }) => turn === placement.turn && flip === placement.flip) ?? ways![0]!;
    return ontoFold(panel, { ...placement, ...way, x: 0, y: 0 }, { spread: [zone] }, Infinity);
  }
  // Of the whole piece: where it lies now it may be on the fold.
  const box = boxOf(panel, placement);
  return { ...placement, x: snap(placement.x - box.minX), y: snap(placement.y + band.from - box.minY) };
}

/** `document` with the placement `id` moved to its first free place. `free` is false when there is none. */
export function firstFreePlace(
  document: LayDocument,
  book: PanelBook,
  id: string
): { document: LayDocument; free: boolean } {
  const pieces = placedPieces(document, book);
  const own = pieces.find(({ placement }) => placement.id === id);
  const allowed = own && whereAllowed(document, book, own.placement);
  if (!own || !allowed) return { document, free: false };
  const others = pieces.filter(({ placement }) => placement.id !== id).map(({ outline }) => outline);
  const order = inOrder(document, book, own, allowed.stretches);
  for (const stretch of order) {
    const found = freeIn(document, book, own, stretch, others);
    if (found) return { document: replaced(document, [found]), free: true };
  }
  const past = Math.max(0, ...others.map((other) => other.box.maxX + document.strip.clearance + HAIR));
  const last = order[0] ? atStretch(own, order[0]) : own.placement;
  const { box } = outlineAt(own, last, document);
  const moved = { ...last, x: snap(last.x + past - box.minX) };
  return { document: replaced(document, [moved]), free: false };
}

function outlineAt(own: PlacedPiece, placement: LayPlacement, { strip }: LayDocument): PreparedOutline {
  return placedOutline(own.panel, placement, strip);
}

/** The first free place of a stretch; null where there is none before the end of what lies there. */
function freeIn(
  document: LayDocument,
  book: PanelBook,
  own: PlacedPiece,
  stretch: AllowedStretch,
  others: readonly PreparedOutline[]
): LayPlacement | null {
  const { length, clearance, repeat } = document.strip;
  const gap = clearance + HAIR;
  const first = atStretch(own, stretch);
  const { box } = outlineAt(own, first, document);
  const [wide, high] = [box.maxX - box.minX, box.maxY - box.minY];
  const held = new Set([first.id]);
  const start =
    stretch.fold?.side === 'start' ? box.minX : Math.max(0, stretch.zone.fold === 'start' ? clearance : 0);
  const xs =
    stretch.fold?.side === 'start'
      ? [box.minX]
      : [start, ...others.map((other) => other.box.maxX + gap)].sort((a, b) => a - b);
  const ys =
    stretch.fold && stretch.fold.side !== 'start'
      ? [box.minY]
      : [stretch.band.from, ...others.map((other) => other.box.maxY + gap)]
          .filter((y) => y >= stretch.band.from && y + high <= stretch.band.to)
          .sort((a, b) => a - b);
  for (const x of xs) {
    if (length !== null && x + wide > length) break;
    for (const y of ys) {
      const at = { ...first, x: snap(first.x + x - box.minX), y: snap(first.y + y - box.minY) };
      const next = matched(document, book, at, held);
      // The nearest matching place may lie behind what is there already: the one after it does not.
      const steps = next === at ? [next] : [next, { ...next, x: snap(next.x + (repeat.along?.size ?? 0)) }];
      for (const one of steps) {
        const outline = outlineAt(own, one, document);
        const inside =
          outline.box.minX >= -1e-6 &&
          outline.box.minY >= stretch.band.from - 1e-6 &&
          outline.box.maxY <= stretch.band.to + 1e-6 &&
          (length === null || outline.box.maxX <= length);
        if (inside && isClear(outline, others, gap)) return one;
      }
    }
  }
  return null;
}

function isClear(own: PreparedOutline, others: readonly PreparedOutline[], gap: number): boolean {
  return others.every(
    (other) =>
      own.box.minX >= other.box.maxX + gap ||
      own.box.maxX + gap <= other.box.minX ||
      own.box.minY >= other.box.maxY + gap ||
      own.box.maxY + gap <= other.box.minY ||
      clearBy(own, other, gap)
  );
}
