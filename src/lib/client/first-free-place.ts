import { clearBy } from '$lib/geometry/distance';
import { movePrepared, type PreparedOutline } from '$lib/geometry/prepared';
import { snap } from '$lib/geometry/point';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import { placedPieces } from '$lib/lay/placed';

/*
 * Where a piece goes that is placed without a pointer: the first place from the zero end, and there from the near
 * selvedge, at which it is clear of all others. Places are tried where its box would touch what is there already.
 */

/** Least gap kept, so that a piece placed this way is never counted as touching. */
const HAIR = 0.001;

/** `document` with the placement `id` moved to its first free place. `free` is false when there is none. */
export function firstFreePlace(
  document: LayDocument,
  book: PanelBook,
  id: string
): { document: LayDocument; free: boolean } {
  const pieces = placedPieces(document, book);
  const own = pieces.find(({ placement }) => placement.id === id);
  if (!own) return { document, free: false };
  const others = pieces.filter(({ placement }) => placement.id !== id).map(({ outline }) => outline);
  const { usableWidth, length, clearance } = document.strip;
  const gap = clearance + HAIR;
  const { box } = own.outline;
  const wide = box.maxX - box.minX;
  const high = box.maxY - box.minY;
  const xs = [0, ...others.map((other) => other.box.maxX + gap)].sort((a, b) => a - b);
  const ys = [0, ...others.map((other) => other.box.maxY + gap)]
    .filter((y) => y + high <= usableWidth)
    .sort((a, b) => a - b);
  const moved = (dx: number, dy: number): LayDocument => ({
    ...document,
    placements: document.placements.map((placement): LayPlacement =>
      placement.id === id ? { ...placement, x: snap(placement.x + dx), y: snap(placement.y + dy) } : placement
    )
  });
  for (const x of xs) {
    if (length !== null && x + wide > length) break;
    const near = others.filter((other) => other.box.maxX + gap > x && other.box.minX - gap < x + wide);
    for (const y of ys) {
      const dx = snap(x - box.minX);
      const dy = snap(y - box.minY);
      if (isClear(movePrepared(own.outline, dx, dy), near, gap))
        return { document: moved(dx, dy), free: true };
    }
  }
  const past = Math.max(0, ...others.map((other) => other.box.maxX + gap));
  return {
    document: moved(past - box.minX, -box.minY),
    free: high <= usableWidth && (length === null || past + wide <= length)
  };
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
