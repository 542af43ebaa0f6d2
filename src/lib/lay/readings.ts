import { lengthsSpread, spreadKind } from '$lib/cloth/spread';
import type { Strip } from '$lib/cloth/strip';
import { whatToBuy } from '$lib/cloth/what-to-buy';
import { cosSin } from '$lib/geometry/placement';
import type { PieceShape } from '$lib/pattern/piece-shape';
import type { Millimetres, SquareMillimetres } from '$lib/units/measure';
import type { LayDocument, LayPlacement } from './document';
import { leastLength } from './least-length';
import { loose } from './needs';
import { panelOf, type PanelBook } from './panel-book';
import { pieceArea } from './piece-area';
import type { Readings } from './verdict';
import { layeredWidth, yieldCount } from './yields';

/*
 * The numbers of a lay. They are computed, never stored as truth.
 */

/** Full width counted once a layer: what a length of the lay takes from the roll. */
function consumedWidth(strip: Strip): Millimetres {
  // A tube is as wide again below.
  const sides = spreadKind(strip) === 'tubular' ? 2 : 1;
  return strip.fullWidth * sides * lengthsSpread(strip);
}

/** How far along the warp a placed piece reaches: its greatest x. */
function reach(shape: PieceShape, placement: LayPlacement): Millimetres {
  const [cos, sin] = cosSin(placement.turn);
  const mirrored = placement.flip ? -sin : sin;
  let most = -Infinity;
  for (const { x, y } of shape.cut) most = Math.max(most, x * cos - y * mirrored);
  return most + placement.x;
}

/** The cloth to buy for a length used: ends, splices, reserve, shrinking, repeats and rounding, all terms named. */
export function clothToBuy(strip: Strip, lengthUsed: Millimetres): Readings['clothToBuy'] {
  const { endAllowance, splices, reserve, shrinkage, wholeRepeats, repeat, buyStep } = strip;
  return whatToBuy({
    lengthUsed,
    lengths: lengthsSpread(strip),
    endAllowance,
    splices,
    reserve,
    shrinkage,
    wholeRepeats: wholeRepeats ? (repeat.along?.size ?? null) : null,
    step: buyStep
  });
}

/** Efficiency and utilisation of `placed` square millimetres on a length used; null while nothing lies there. */
export function sharesOf(
  strip: Strip,
  lengthUsed: Millimetres,
  placed: SquareMillimetres
): Pick<Readings, 'efficiency' | 'utilisation'> {
  if (lengthUsed <= 0) return { efficiency: null, utilisation: null };
  const { start, end } = strip.endAllowance;
  return {
    efficiency: placed / (layeredWidth(strip) * lengthUsed),
    utilisation: placed / (consumedWidth(strip) * (lengthUsed + start + end))
  };
}

/** The readings of a lay. Placements whose panel the book lacks count for nothing. */
export function readingsOf(document: LayDocument, book: PanelBook): Readings {
  const { strip } = document;
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  let lengthUsed = 0;
  let placed = 0;
  for (const placement of document.placements) {
    const panel = panelOf(book, garments.get(placement.garment), placement.panel);
    if (!panel) continue;
    lengthUsed = Math.max(lengthUsed, reach(panel.shape, placement));
    placed += pieceArea(panel.shape) * yieldCount(placement, panel, strip);
  }
  const needed = document.needs.reduce((sum, need) => sum + need.count, 0);
  const hanging = loose(document, book).length;
  return {
    pieces: { needed, placed: needed - hanging, loose: hanging },
    lengthUsed,
    area: placed,
    ...sharesOf(strip, lengthUsed, placed),
    leastLength: leastLength(document, book),
    clothToBuy: clothToBuy(strip, lengthUsed)
  };
}
