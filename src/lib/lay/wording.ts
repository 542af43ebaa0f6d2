import { formatDecimal } from '$lib/units/length';
import type { Degrees, Millimetres } from '$lib/units/measure';
import type { LayDocument, LayPlacement } from './document';
import { panelOf, type LayPanel, type PanelBook } from './panel-book';
import { laidHand, type LaidHand } from './yields';

/*
 * How a lay speaks of its pieces and measures: plain English, kept apart from the rules.
 */

/** 'Front (left) of Ada bodice 38 · 2', 'Sleeve (pair) of …'; no hand where it does not matter. */
export function nameOf(
  document: Pick<LayDocument, 'garments' | 'strip'>,
  book: PanelBook,
  placement: LayPlacement
): string {
  const garment = document.garments.find(({ id }) => id === placement.garment);
  const panel = panelOf(book, garment, placement.panel);
  const hand = panel ? laidHand(placement, panel, document.strip) : 'either';
  return pieceName(panel, hand, garment?.label);
}

/** The same for a piece that hangs on the Rail. */
export function pieceName(
  panel: LayPanel | undefined,
  hand: LaidHand,
  garmentLabel: string | undefined
): string {
  const name = panel?.shape.name ?? 'A piece';
  return `${name}${hand === 'either' ? '' : ` (${hand})`}${garmentLabel ? ` of ${garmentLabel}` : ''}`;
}

/** '12.5 mm': enough digits that a small measure is not shown as nothing. */
export function millimetres(length: Millimetres): string {
  const size = Math.abs(length);
  return `${formatDecimal(length, size < 0.1 ? 3 : size < 10 ? 2 : 1)} mm`;
}

/** '0.4°' */
export function degrees(angle: Degrees): string {
  const size = Math.abs(angle);
  return `${formatDecimal(angle, size < 0.1 ? 4 : size < 10 ? 2 : 1)}°`;
}

/** '1 piece', '3 pieces' */
export function pieces(count: number): string {
  return `${count} ${count === 1 ? 'piece' : 'pieces'}`;
}
