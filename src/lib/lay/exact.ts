import { snapPlacement, snapTurn, type Placement } from '$lib/geometry/placement';
import { snap } from '$lib/geometry/point';
import type { Degrees, Millimetres } from '$lib/units/measure';
import type { LayDocument } from './document';
import { boxOf, centred, chosen, middleOf, replaced, type Edit } from './edit';
import type { LayPanel, PanelBook } from './panel-book';
import { allowedTurns, nearestTurn, withinTolerance } from './turns';
import { degrees, millimetres, nameOf } from './wording';

/** Exact figures for one piece; what is left out stays as it is. */
export interface Exact {
  /** Distance of the nearest cut edge from the zero end. */
  readonly fromStart?: Millimetres;
  /** Distance of the nearest cut edge from the near selvedge. */
  readonly fromSelvedge?: Millimetres;
  readonly turn?: Degrees;
}

/** What `setExact` would have to be given to change nothing. */
export function exactOf(panel: LayPanel, placement: Placement): Required<Exact> {
  const box = boxOf(panel, placement);
  return { fromStart: snap(box.minX), fromSelvedge: snap(box.minY), turn: placement.turn };
}

/** Lays one piece at exact distances and an exact turn; a turn beyond the grain tolerance is refused. */
export function setExact(document: LayDocument, book: PanelBook, id: string, exact: Exact): Edit {
  const picked = chosen(document, book, [id]);
  if ('refused' in picked) return picked;
  const { placement, panel } = picked.free[0]!;
  let next = placement;
  if (exact.turn !== undefined) {
    const turn = snapTurn(exact.turn);
    if (withinTolerance(panel, document.strip, turn) !== turn) {
      const nearest = nearestTurn(panel, document.strip, turn);
      return {
        refused: `${nameOf(document, book, placement)} may lie at ${(
          allowedTurns(panel, document.strip) ?? [nearest]
        )
          .map((allowed) => degrees(allowed))
          .join(', ')}, within ${degrees(panel.grainTolerance)}; got ${degrees(turn)}.`
      };
    }
    next = centred(panel, { ...next, turn }, middleOf([boxOf(panel, placement)]));
  }
  const box = boxOf(panel, next);
  next = {
    ...next,
    ...snapPlacement({
      ...next,
      x: next.x + (exact.fromStart === undefined ? 0 : exact.fromStart - box.minX),
      y: next.y + (exact.fromSelvedge === undefined ? 0 : exact.fromSelvedge - box.minY)
    })
  };
  const now = exactOf(panel, next);
  return {
    document: replaced(document, [next]),
    said: `${nameOf(document, book, placement)} lies ${millimetres(now.fromStart)} from the zero end, ${millimetres(
      now.fromSelvedge
    )} from the near selvedge, turned ${degrees(now.turn)}.`
  };
}
