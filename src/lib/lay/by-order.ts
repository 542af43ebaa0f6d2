import type { SquareMillimetres } from '$lib/units/measure';
import type { LayDocument } from './document';
import { panelOf, type PanelBook } from './panel-book';
import { pieceArea } from './piece-area';

/**
 * The area of the pieces that each order asks of a lay, by order: what a joint lay's cost is shared by. `orderOf` says whose an
 * order line is. All needs count, placed or not, so that the shares don't change while pieces are laid.
 */
export function areaByOrder(
  document: Pick<LayDocument, 'garments' | 'needs'>,
  book: PanelBook,
  orderOf: (orderItem: string) => string | undefined
): Map<string, SquareMillimetres> {
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  const areas = new Map<string, SquareMillimetres>();
  for (const need of document.needs) {
    const garment = garments.get(need.garment);
    const panel = panelOf(book, garment, need.panel);
    const order = garment && orderOf(garment.orderItem);
    if (!panel || order === undefined) continue;
    areas.set(order, (areas.get(order) ?? 0) + pieceArea(panel.shape) * need.count);
  }
  return areas;
}
