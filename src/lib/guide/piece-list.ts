import { needHands } from '$lib/lay/document';
import type { DeskPage } from './desk-page';
import type { LaidPiece } from './laid-piece';
import { handWords } from './piece-drawing';

/*
 * What is cut, counted: on the ticket in two columns, and on further pages where it is long.
 */

/** One line of the piece list. */
export interface PieceCount {
  readonly garment: string;
  readonly panel: string;
  readonly hand: string;
  readonly count: number;
}

/** What is cut, garment by garment: as many as the placements give. */
export function pieceList(pieces: readonly LaidPiece[]): PieceCount[] {
  const counts = new Map<string, PieceCount>();
  for (const { garment, panel, hand, copies } of pieces) {
    const key = JSON.stringify([garment, panel, hand]);
    counts.set(key, { garment, panel, hand, count: (counts.get(key)?.count ?? 0) + copies });
  }
  const order = (one: PieceCount): number => needHands.indexOf(one.hand as (typeof needHands)[number]);
  return [...counts.values()]
    .sort(
      (a, b) =>
        a.garment.localeCompare(b.garment, 'en') ||
        a.panel.localeCompare(b.panel, 'en') ||
        order(a) - order(b)
    )
    .map((one) => ({ ...one, hand: handWords(one.hand as LaidPiece['hand']) }));
}

/** The piece list in two columns down to `bottom`; gives the lines that found no room. */
export function listPieces(
  page: DeskPage,
  list: readonly PieceCount[],
  bottom: number
): readonly PieceCount[] {
  const row = 5.3;
  const gap = 6;
  const width = (page.width - gap) / 2;
  const perColumn = Math.max(0, Math.floor((page.top - bottom - 1) / row));
  const fits = list.length <= perColumn * 2;
  // The last place says where the others are.
  const shown = fits ? list : list.slice(0, Math.max(0, perColumn * 2 - 1));
  const tall = fits ? Math.ceil(list.length / 2) : perColumn;
  const place = (i: number) => ({
    x: page.left + (i < tall ? 0 : width + gap),
    y: page.top - ((i % Math.max(tall, 1)) + 1) * row + 1.2
  });
  shown.forEach((one, i) => {
    const { x, y } = place(i);
    page.put(String(one.count), x + 7, y, 4.4, { weight: 'bold', align: 'end' });
    const name = [one.panel, one.hand].filter(Boolean).join(', ');
    const wide = Math.min(page.lettering.width(name, 4, 'bold'), width - 10);
    page.put(name, x + 10, y, 4, { weight: 'bold', room: width - 10 });
    if (width - 10 - wide > 12) page.put(one.garment, x + 12 + wide, y, 3.2, { room: width - 12 - wide });
  });
  if (!fits && perColumn > 0) {
    const { x, y } = place(shown.length);
    page.put(`${list.length - shown.length} more lines on the next page`, x + 10, y, 3.6);
  }
  return list.slice(shown.length);
}
