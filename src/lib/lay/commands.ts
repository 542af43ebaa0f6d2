import { cosSin, snapPlacement, snapTurn } from '$lib/geometry/placement';
import { snap, type Point } from '$lib/geometry/point';
import type { Degrees, Millimetres } from '$lib/units/measure';
import type { LayDocument } from './document';
import { boxOf, centred, chosen, middleOf, replaced, subject, type Edit, type Ids } from './edit';
import { sideOn } from './borders';
import { landing, steppedLanding } from './landing';
import { balance, type LoosePiece } from './needs';
import { panelOf, type PanelBook } from './panel-book';
import { allowedTurns, nearestTurn, nextTurn, withinTolerance } from './turns';
import { degrees, millimetres, nameOf, pieceName, pieces } from './wording';
import { flipFor, flipIsFree } from './yields';

/*
 * Everything a person does to the pieces of a lay, one by one or several; exact figures are in exact.ts, snug in snug.ts,
 * whole garments in arrangement.ts. A command gives a new document and says what it did, or refuses and
 * says why. Locked pieces never move. Ids of new placements come from outside: this code has no randomness.
 */

/**
 * Takes `piece` from the Rail and lays it with the middle of its box at `at`, at the first turn that it is allowed, with
 * the hand that is needed. `id` names the new placement.
 */
export function placeFromRail(
  document: LayDocument,
  book: PanelBook,
  piece: LoosePiece,
  at: Point,
  id: string
): Edit {
  const garment = document.garments.find((each) => each.id === piece.garment);
  const panel = panelOf(book, garment, piece.panel);
  if (!panel) return { refused: 'The outline of this piece is not known here.' };
  const name = pieceName(panel, piece.hand, garment?.label);
  const hangs = balance(document, book).loose.some(
    (one) => one.garment === piece.garment && one.panel === piece.panel && one.hand === piece.hand
  );
  if (!hangs) return { refused: `${name} no longer hangs on the Rail.` };
  if (document.placements.some((placement) => placement.id === id))
    return { refused: `${name} is on the cloth already.` };
  const placement = centred(
    panel,
    {
      id,
      panel: piece.panel,
      garment: piece.garment,
      x: 0,
      y: 0,
      turn: allowedTurns(panel, document.strip)?.[0] ?? 0,
      flip: flipFor(piece.hand, panel, document.strip),
      locked: false
    },
    at
  );
  const laid = { ...document, placements: [...document.placements, placement] };
  const landed = landing(laid, book, placement, new Set([id]));
  return {
    document: replaced(laid, [{ ...landed, ...snapPlacement(landed) }]),
    said: `${name} placed on the cloth.`
  };
}

/** Moves the chosen pieces as one body by `dx` along the warp and `dy` across. */
export function move(
  document: LayDocument,
  book: PanelBook,
  ids: Ids,
  dx: Millimetres,
  dy: Millimetres
): Edit {
  const picked = chosen(document, book, ids);
  if ('refused' in picked) return picked;
  if (dx === 0 && dy === 0) return { refused: 'The pieces are where they were.' };
  const moving = new Set(picked.free.map(({ placement }) => placement.id));
  const moved = picked.free.map(({ placement }) => {
    const next =
      picked.free.length === 1
        ? steppedLanding(document, book, placement, { x: dx, y: dy }, moving)
        : { ...placement, x: placement.x + dx, y: placement.y + dy };
    return { ...next, ...snapPlacement(next) };
  });
  const [first, now] = [picked.free[0]!.placement, moved[0]!];
  const [wentX, wentY] = [snap(now.x - first.x), snap(now.y - first.y)];
  const parts = [
    wentX === 0 ? '' : `${millimetres(Math.abs(wentX))} towards the ${wentX > 0 ? 'end' : 'start'}`,
    wentY === 0
      ? ''
      : `${millimetres(Math.abs(wentY))} towards ${sideOn(wentY > 0 ? 'far' : 'near', document.strip)}`
  ].filter((part) => part !== '');
  if (parts.length === 0)
    return {
      refused: `${subject(document, book, picked)} stays: it lies on the fold or on its matching place.`
    };
  return {
    document: replaced(document, moved),
    said: `${subject(document, book, picked)} moved ${parts.join(' and ')}.`
  };
}

/**
 * Turns the chosen pieces to their next allowed turn, counter-clockwise (`step` 1) or clockwise (−1). When all turn by
 * the same angle they turn as one body, else each about its own middle.
 */
export function turnBySteps(document: LayDocument, book: PanelBook, ids: Ids, step: 1 | -1): Edit {
  const picked = chosen(document, book, ids);
  if ('refused' in picked) return picked;
  const { strip } = document;
  const turns = picked.free.map(({ placement, panel }) => nextTurn(panel, strip, placement.turn, step));
  const deltas = picked.free.map(({ placement }, i) => snapTurn(turns[i]! - placement.turn));
  if (deltas.every((delta) => delta === 0))
    return {
      refused: `${subject(document, book, picked)} may lie only this way on this cloth.`
    };
  const together = deltas.every((delta) => delta === deltas[0]);
  const whole = middleOf(picked.free.map(({ placement, panel }) => boxOf(panel, placement)));
  const turned = picked.free.map(({ placement, panel }, i) => {
    const next = { ...placement, turn: turns[i]! };
    return together
      ? { ...next, ...snapPlacement({ ...next, ...aboutPoint(placement, whole, deltas[0]!) }) }
      : centred(panel, next, middleOf([boxOf(panel, placement)]));
  });
  return {
    document: replaced(document, turned),
    said: together
      ? `${subject(document, book, picked)} turned by ${degrees(deltas[0]!)}.`
      : `${subject(document, book, picked)} turned to their next allowed turns.`
  };
}

/** Where `point` comes to lie when the table is turned by `turn` about `centre`. */
function aboutPoint(point: Point, centre: Point, turn: Degrees): Point {
  const [cos, sin] = cosSin(turn);
  const [dx, dy] = [point.x - centre.x, point.y - centre.y];
  return { x: centre.x + dx * cos - dy * sin, y: centre.y + dx * sin + dy * cos };
}

/** Turns each chosen piece by `by` about its own middle, never further than its grain tolerance allows. */
export function turnFreely(document: LayDocument, book: PanelBook, ids: Ids, by: Degrees): Edit {
  const picked = chosen(document, book, ids);
  if ('refused' in picked) return picked;
  const { strip } = document;
  const turned = picked.free.map(({ placement, panel }) =>
    centred(
      panel,
      { ...placement, turn: withinTolerance(panel, strip, placement.turn + by) },
      middleOf([boxOf(panel, placement)])
    )
  );
  if (turned.every((next, i) => next.turn === picked.free[i]!.placement.turn))
    return {
      refused: `${subject(document, book, picked)} can't turn further: the grain tolerance is ${degrees(
        Math.min(...picked.free.map(({ panel }) => panel.grainTolerance))
      )}.`
    };
  const first = turned[0]!;
  const off = snapTurn(first.turn - nearestTurn(picked.free[0]!.panel, strip, first.turn));
  return {
    document: replaced(document, turned),
    said:
      turned.length === 1
        ? `${subject(document, book, picked)} turned to ${degrees(first.turn)}, ${degrees(
            Math.min(off, 360 - off)
          )} off grain.`
        : `${subject(document, book, picked)} turned within their grain tolerance.`
  };
}

/**
 * Flips each chosen piece over its grain line, where it lies. A flip changes the hand: it is refused where that hand is
 * not needed, unless a mirrored copy serves as well (a symmetric piece, or cloth with both sides alike).
 */
export function flip(document: LayDocument, book: PanelBook, ids: Ids): Edit {
  const picked = chosen(document, book, ids);
  if ('refused' in picked) return picked;
  const flipped = replaced(
    document,
    picked.free.map(({ placement, panel }) =>
      centred(panel, { ...placement, flip: !placement.flip }, middleOf([boxOf(panel, placement)]))
    )
  );
  if (!picked.free.every(({ panel }) => flipIsFree(panel, document.strip))) {
    const surplus = (lay: LayDocument): number =>
      balance(lay, book).surplus.reduce((sum, one) => sum + one.count, 0);
    if (surplus(flipped) > surplus(document)) {
      const [first] = picked.free;
      const after = flipped.placements.find(({ id }) => id === first!.placement.id)!;
      return {
        refused:
          picked.free.length === 1
            ? `Flipped it would be ${nameOf(flipped, book, after)}, which is not needed any more.`
            : 'Flipped, some of these pieces would be of a hand that is not needed any more.'
      };
    }
  }
  return {
    document: flipped,
    said:
      picked.free.length === 1
        ? `Flipped: now ${nameOf(
            flipped,
            book,
            flipped.placements.find(({ id }) => id === picked.free[0]!.placement.id)!
          )}.`
        : `${subject(document, book, picked)} flipped.`
  };
}

/** Locks or unlocks the chosen pieces. */
export function setLocked(document: LayDocument, book: PanelBook, ids: Ids, locked: boolean): Edit {
  const wanted = new Set(ids);
  const changed = document.placements.filter((one) => wanted.has(one.id) && one.locked !== locked);
  if (changed.length === 0) return { refused: `Nothing chosen is ${locked ? 'unlocked' : 'locked'}.` };
  const what = changed.length === 1 ? nameOf(document, book, changed[0]!) : pieces(changed.length);
  return {
    document: replaced(
      document,
      changed.map((placement) => ({ ...placement, locked }))
    ),
    said: `${what} ${locked ? 'locked' : 'unlocked'}.`
  };
}

/** Hangs the chosen pieces back on the Rail; locked ones stay. Works for pieces whose panel is not known, too. */
export function toRail(document: LayDocument, book: PanelBook, ids: Ids): Edit {
  const wanted = new Set(ids);
  const all = document.placements.filter(({ id }) => wanted.has(id));
  const taken = all.filter(({ locked }) => !locked);
  if (all.length === 0) return { refused: 'No piece is chosen.' };
  if (taken.length === 0) return { refused: `${pieces(all.length)} locked on the cloth. Unlock first.` };
  const gone = new Set(taken.map(({ id }) => id));
  const what = taken.length === 1 ? nameOf(document, book, taken[0]!) : pieces(taken.length);
  return {
    document: { ...document, placements: document.placements.filter(({ id }) => !gone.has(id)) },
    said: `${what} back on the Rail.`
  };
}

/** Ids of every placement of a garment. */
export function placementsOf(document: LayDocument, garment: string): string[] {
  return document.placements.filter((one) => one.garment === garment).map(({ id }) => id);
}
