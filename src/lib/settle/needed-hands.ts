import { boxOf, centred, middleOf, replaced } from '$lib/lay/edit';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import { balance, panelOfPlacement } from '$lib/lay/needs';
import type { PanelBook } from '$lib/lay/panel-book';
import { flipIsFree, handAsLaid, otherHand } from '$lib/lay/yields';

/**
 * The lay with pieces that lie as the wrong hand turned over where they lie: settled as they are, they would lie there for
 * nothing, beside the piece that is needed. Locked pieces stay as they are.
 */
export function withNeededHands(document: LayDocument, book: PanelBook): LayDocument {
  const { loose, surplus } = balance(document, book);
  const missing = [...loose];
  const turned: LayPlacement[] = [];
  for (const extra of surplus) {
    for (let i = 0; i < extra.count; i++) {
      const at = missing.findIndex(
        (piece) =>
          piece.garment === extra.garment &&
          piece.panel === extra.panel &&
          piece.hand === otherHand(extra.hand)
      );
      if (at < 0) break;
      const panel = panelOfPlacement(document, book, extra);
      const placement = document.placements.find(
        (one) =>
          !one.locked &&
          one.garment === extra.garment &&
          one.panel === extra.panel &&
          panel !== undefined &&
          !flipIsFree(panel, document.strip) &&
          handAsLaid(one, panel, document.strip) === extra.hand &&
          turned.every(({ id }) => id !== one.id)
      );
      if (!panel || !placement) break;
      missing.splice(at, 1);
      turned.push(
        centred(panel, { ...placement, flip: !placement.flip }, middleOf([boxOf(panel, placement)]))
      );
    }
  }
  return turned.length === 0 ? document : replaced(document, turned);
}
