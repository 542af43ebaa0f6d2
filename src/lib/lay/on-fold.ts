import type { Strip, Zone } from '$lib/cloth/strip';
import { snap } from '$lib/geometry/point';
import { place, type Placement } from '$lib/geometry/placement';
import { TOUCHING } from '$lib/geometry/tolerance';
import { halfShape } from '$lib/pattern/half';
import type { PieceShape } from '$lib/pattern/piece-shape';
import type { Millimetres } from '$lib/units/measure';
import type { LayPanel } from './panel-book';

/*
 * Pieces on the fold. A piece whose panel is drawn on a fold and whose fold line lies on a fold of the cloth is cut as a half: the other
 * half lies under it, in the same cut. Nothing is stored of it; a placement lies on the fold when its fold line does.
 */

/** One fold of the cloth: a straight line along the warp or across. */
export interface ClothFold {
  readonly zone: Zone;
  readonly side: 'near' | 'far' | 'start';
  /** y of a fold along the warp, x of one across. */
  readonly at: Millimetres;
}

const folds = new WeakMap<Strip['spread'], readonly ClothFold[]>();

/** The folds of a strip. */
export function foldsOf({ spread }: Pick<Strip, 'spread'>): readonly ClothFold[] {
  let known = folds.get(spread);
  if (!known) {
    known = spread.flatMap((zone): ClothFold[] => {
      const near: ClothFold = { zone, side: 'near', at: zone.from };
      const far: ClothFold = { zone, side: 'far', at: zone.to };
      switch (zone.fold) {
        case 'none':
          return [];
        case 'near':
          return [near];
        case 'far':
          return [far];
        case 'both':
          return [near, far];
        case 'start':
          return [{ zone, side: 'start', at: 0 }];
      }
    });
    folds.set(spread, known);
  }
  return known;
}

/** How far the fold line of a placed piece is from a fold of the cloth, towards larger x or y; null where they don't run alike. */
function offFold(panel: LayPanel, placement: Placement, fold: ClothFold): Millimetres | null {
  const line = panel.shape.foldLine;
  if (!line) return null;
  const across = fold.side === 'start';
  if (placement.turn % 180 !== (across ? 90 : 0)) return null;
  const at = place(line.from, placement);
  return (across ? at.x : at.y) - fold.at;
}

/** The fold of the cloth that a piece lies on; null when it lies on none. */
export function foldUnder(
  panel: LayPanel,
  placement: Placement,
  strip: Pick<Strip, 'spread'>
): ClothFold | null {
  if (!panel.shape.foldLine) return null;
  return (
    foldsOf(strip).find((fold) => {
      const off = offFold(panel, placement, fold);
      return off !== null && Math.abs(off) <= TOUCHING;
    }) ?? null
  );
}

/** The half that lies on the cloth when a piece is on `fold`, by how it is turned and flipped. */
function halfOn(panel: LayPanel, placement: Pick<Placement, 'turn' | 'flip'>, fold: ClothFold): PieceShape {
  const up = place({ x: 0, y: 1 }, { x: 0, y: 0, turn: placement.turn, flip: placement.flip });
  const inwards = fold.side === 'start' ? up.x : fold.side === 'near' ? up.y : -up.y;
  return halfShape(panel.shape, inwards > 0 ? 1 : -1);
}

/** The shape that is cut where a piece lies: its half on a fold of the cloth, else the whole. */
export function laidShape(panel: LayPanel, placement: Placement, strip: Pick<Strip, 'spread'>): PieceShape {
  const fold = foldUnder(panel, placement, strip);
  return fold ? halfOn(panel, placement, fold) : panel.shape;
}

/** How near to the fold the fold line of a piece must come to be laid on it. */
export const FOLD_REACH: Millimetres = 25;

/** `placement` with its fold line on the nearest fold of the cloth, where that is within `reach`; else as it is. */
export function ontoFold<T extends Placement>(
  panel: LayPanel,
  placement: T,
  strip: Pick<Strip, 'spread'>,
  reach: Millimetres = FOLD_REACH
): T {
  let nearest: { fold: ClothFold; off: Millimetres } | null = null;
  for (const fold of foldsOf(strip)) {
    const off = offFold(panel, placement, fold);
    if (off !== null && Math.abs(off) <= Math.min(reach, Math.abs(nearest?.off ?? Infinity)))
      nearest = { fold, off };
  }
  if (!nearest) return placement;
  return nearest.fold.side === 'start'
    ? { ...placement, x: snap(placement.x - nearest.off) }
    : { ...placement, y: snap(placement.y - nearest.off) };
}
