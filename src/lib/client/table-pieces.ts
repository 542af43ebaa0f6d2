import { place, placeOutline, unplace, type Placement } from '$lib/geometry/placement';
import { boundingBox, contains } from '$lib/geometry/polygon';
import type { Box, Point } from '$lib/geometry/point';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import { panelOf, type LayPanel, type PanelBook } from '$lib/lay/panel-book';
import { laidShape } from '$lib/lay/on-fold';
import { laidHand } from '$lib/lay/yields';
import type { Hand } from '$lib/pattern/panel';
import type { PieceShape } from '$lib/pattern/piece-shape';

/*
 * The placements of a lay made ready for the table: with their panel, box and hand. A placement that did not change
 * keeps its ready form, so that an edit of one piece costs one piece.
 */

export interface TablePiece {
  readonly id: string;
  readonly placement: LayPlacement;
  readonly panel: LayPanel;
  /** What is cut where it lies: its half on the fold, else the whole. */
  readonly shape: PieceShape;
  readonly box: Box;
  /** Which garment of the lay, counted from 0. */
  readonly garment: number;
  /** null where a flip changes nothing; 'pair' where the layers give both. */
  readonly hand: Hand | 'pair' | null;
}

const ready = new WeakMap<LayPlacement, { piece: TablePiece; strip: LayDocument['strip'] }>();

/** Every placement whose panel the book knows, lowest first. */
export function tablePieces(document: LayDocument, book: PanelBook): TablePiece[] {
  const garments = new Map(document.garments.map((garment, i) => [garment.id, { garment, i }]));
  const pieces: TablePiece[] = [];
  for (const placement of document.placements) {
    const known = ready.get(placement);
    if (known && known.strip === document.strip) {
      pieces.push(known.piece);
      continue;
    }
    const garment = garments.get(placement.garment);
    const panel = panelOf(book, garment?.garment, placement.panel);
    if (!panel) continue;
    const shape = laidShape(panel, placement, document.strip);
    const hand = laidHand(placement, panel, document.strip);
    const piece: TablePiece = {
      id: placement.id,
      placement,
      panel,
      shape,
      box: boundingBox(placeOutline(shape.cut, placement)),
      garment: garment?.i ?? 0,
      hand: hand === 'either' ? null : hand
    };
    ready.set(placement, { piece, strip: document.strip });
    pieces.push(piece);
  }
  return pieces;
}

/** The topmost piece at `point`, or else the nearest within `reach` millimetres of its outline. */
export function pieceAt(pieces: readonly TablePiece[], point: Point, reach: number): TablePiece | null {
  let nearest: TablePiece | null = null;
  let least = reach;
  for (let i = pieces.length - 1; i >= 0; i--) {
    const piece = pieces[i]!;
    const { box } = piece;
    if (
      point.x < box.minX - reach ||
      point.x > box.maxX + reach ||
      point.y < box.minY - reach ||
      point.y > box.maxY + reach
    )
      continue;
    const own = unplace(point, piece.placement);
    if (contains(piece.shape.cut, own)) return piece;
    const away = distanceTo(piece.shape.cut, own);
    if (away < least) {
      least = away;
      nearest = piece;
    }
  }
  return nearest;
}

function distanceTo(outline: readonly Point[], point: Point): number {
  let least = Infinity;
  for (let i = 0, j = outline.length - 1; i < outline.length; j = i++) {
    const a = outline[j]!;
    const b = outline[i]!;
    const dx = b.x - a.x;
    const dy = b.y - a.y;
    const t = Math.max(
      0,
      Math.min(1, ((point.x - a.x) * dx + (point.y - a.y) * dy) / (dx * dx + dy * dy || 1))
    );
    least = Math.min(least, Math.hypot(point.x - a.x - t * dx, point.y - a.y - t * dy));
  }
  return least;
}

/** The pieces that lie wholly or partly in `box`: with their outline, not only their own box. */
export function piecesWithin(pieces: readonly TablePiece[], box: Box): TablePiece[] {
  return pieces.filter((piece) => {
    if (
      piece.box.minX > box.maxX ||
      piece.box.maxX < box.minX ||
      piece.box.minY > box.maxY ||
      piece.box.maxY < box.minY
    )
      return false;
    const inside = (p: Point): boolean =>
      p.x >= box.minX && p.x <= box.maxX && p.y >= box.minY && p.y <= box.maxY;
    return (
      piece.shape.cut.some((point) => inside(place(point, piece.placement))) ||
      contains(piece.shape.cut, unplace({ x: box.minX, y: box.minY }, piece.placement))
    );
  });
}

/** The smallest box around some pieces; null for none. */
export function boxAround(pieces: readonly TablePiece[]): Box | null {
  if (pieces.length === 0) return null;
  return {
    minX: Math.min(...pieces.map(({ box }) => box.minX)),
    minY: Math.min(...pieces.map(({ box }) => box.minY)),
    maxX: Math.max(...pieces.map(({ box }) => box.maxX)),
    maxY: Math.max(...pieces.map(({ box }) => box.maxY))
  };
}

/** `placement` moved by a step. */
export function stepped<P extends Placement>(placement: P, step: Point): P {
  return { ...placement, x: placement.x + step.x, y: placement.y + step.y };
}
