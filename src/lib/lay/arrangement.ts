import { snapPlacement } from '$lib/geometry/placement';
import type { Box } from '$lib/geometry/point';
import type { LayDocument, LayPlacement } from './document';
import { boxOf, type Edit } from './edit';
import { balance, panelOfPlacement } from './needs';
import { panelOf, type PanelBook } from './panel-book';
import { pieces } from './wording';

/**
 * Lays the loose pieces of garment `to` as those of garment `from` lie, all moved along by the same length, past
 * everything on the cloth. `newId` gives the id of each new placement.
 */
export function copyArrangement(
  document: LayDocument,
  book: PanelBook,
  from: string,
  to: string,
  newId: () => string
): Edit {
  const labelOf = (id: string): string =>
    document.garments.find((garment) => garment.id === id)?.label ?? 'the garment';
  if (from === to) return { refused: 'Choose two different garments.' };
  const source = document.placements.filter((one) => one.garment === from);
  if (source.length === 0) return { refused: `No piece of ${labelOf(from)} is on the cloth yet.` };
  const boxes = (of: readonly LayPlacement[]): Box[] =>
    of.flatMap((placement) => {
      const panel = panelOfPlacement(document, book, placement);
      return panel ? [boxOf(panel, placement)] : [];
    });
  const start = Math.min(...boxes(source).map((box) => box.minX));
  const past = Math.max(0, ...boxes(document.placements).map((box) => box.maxX));
  const shift = past + document.strip.clearance - start;

  const garment = document.garments.find((each) => each.id === to);
  const placements = [...document.placements];
  let laid = 0;
  for (const placement of source) {
    const original = panelOfPlacement(document, book, placement);
    const panel = panelOf(book, garment, placement.panel);
    if (!panel || !original) continue;
    const before = balance({ ...document, placements }, book).surplus.length;
    const copy = {
      ...placement,
      id: newId(),
      garment: to,
      locked: false,
      ...snapPlacement({ ...placement, x: placement.x + shift })
    };
    // A copy that nothing asks for would be surplus: the piece is on the cloth already, or was never needed.
    if (balance({ ...document, placements: [...placements, copy] }, book).surplus.length > before) continue;
    placements.push(copy);
    laid++;
  }
  if (laid === 0)
    return { refused: `No loose piece of ${labelOf(to)} lies as one of ${labelOf(from)} does.` };
  return {
    document: { ...document, placements },
    said: `${pieces(laid)} of ${labelOf(to)} laid as ${labelOf(from)}.`
  };
}
