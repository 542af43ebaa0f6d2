import type { Point } from '$lib/geometry/point';
import type { LivePiece, LiveReport } from '$lib/lay/live';
import { degrees, millimetres } from '$lib/lay/wording';

/*
 * What is said beside pieces while they are held: off grain, over an edge of the cloth, against the nap.
 */

export interface HeldNote {
  /** Above which place of the cloth it stands. */
  readonly at: Point;
  readonly words: string;
  readonly stops: boolean;
}

const sides = {
  near: 'over the near selvedge',
  far: 'over the far selvedge',
  start: 'before the zero end',
  end: 'past the end of the cloth'
} as const;

function wordsFor(piece: LivePiece): { words: string; stops: boolean }[] {
  const notes: { words: string; stops: boolean }[] = [];
  for (const side of ['near', 'far', 'start', 'end'] as const) {
    const by = piece.outside[side];
    if (by > 0) notes.push({ words: `${millimetres(by)} ${sides[side]}`, stops: true });
  }
  if (piece.offGrain > 0)
    notes.push({ words: `${degrees(piece.offGrain)} off grain`, stops: piece.beyondTolerance });
  if (piece.againstNap) notes.push({ words: 'against the nap', stops: true });
  return notes;
}

/** Most pieces that speak at once. */
const MOST = 6;

/** The notes on held pieces, at the middle of the side that is up. */
export function heldNotes(report: LiveReport): HeldNote[] {
  const notes: HeldNote[] = [];
  for (const piece of report.pieces) {
    const said = wordsFor(piece);
    if (said.length === 0) continue;
    notes.push({
      at: { x: (piece.box.minX + piece.box.maxX) / 2, y: (piece.box.minY + piece.box.maxY) / 2 },
      words: said.map(({ words }) => words).join(' · '),
      stops: said.some(({ stops }) => stops)
    });
    if (notes.length === MOST) break;
  }
  return notes;
}
