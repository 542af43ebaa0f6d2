import type { Strip } from '$lib/cloth/strip';
import { placePrepared, prepare, type PreparedOutline } from '$lib/geometry/prepared';
import type { Placement } from '$lib/geometry/placement';
import type { PieceShape } from '$lib/pattern/piece-shape';
import type { LayDocument, LayPlacement } from './document';
import { laidShape } from './on-fold';
import { panelOf, type LayPanel, type PanelBook } from './panel-book';

/*
 * Placements with the outlines that they come to lie as, ready to be asked about.
 */

/** One piece on the cloth. */
export interface PlacedPiece {
  readonly placement: LayPlacement;
  readonly panel: LayPanel;
  readonly outline: PreparedOutline;
}

const prepared = new WeakMap<PieceShape, PreparedOutline>();

/** The prepared cut outline of a shape; made once a shape. */
export function preparedShape(shape: PieceShape): PreparedOutline {
  let known = prepared.get(shape);
  if (!known) prepared.set(shape, (known = prepare(shape.cut, shape.label)));
  return known;
}

/** The cut outline of a panel where `placement` lays it; of its half where it lies on the fold. */
export function placedOutline(
  panel: LayPanel,
  placement: Placement,
  strip: Pick<Strip, 'spread'>
): PreparedOutline {
  return placePrepared(preparedShape(laidShape(panel, placement, strip)), placement);
}

/**
 * Every placement whose panel the book knows, in the order of the document. `kept` holds pieces of an earlier state of
 * the same lay; an unchanged placement is taken from there.
 */
export function placedPieces(
  document: LayDocument,
  book: PanelBook,
  kept: ReadonlyMap<LayPlacement, PlacedPiece> = new Map()
): PlacedPiece[] {
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  return document.placements.flatMap((placement) => {
    const known = kept.get(placement);
    if (known) return [known];
    const panel = panelOf(book, garments.get(placement.garment), placement.panel);
    return panel ? [{ placement, panel, outline: placedOutline(panel, placement, document.strip) }] : [];
  });
}
