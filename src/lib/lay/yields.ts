import type { Layer, Strip, Zone } from '$lib/cloth/strip';
import { place } from '$lib/geometry/placement';
import type { Hand } from '$lib/pattern/panel';
import type { Millimetres } from '$lib/units/measure';
import type { LayPlacement, NeedHand } from './document';
import { foldUnder } from './on-fold';
import type { LayPanel } from './panel-book';

/*
 * What a placement gives. No other code of the product counts pieces: a fold, several plies and cloth face to face
 * multiply and mirror here.
 */

/** Pieces of one hand that one placement gives. */
export interface Yield {
  readonly garment: string;
  readonly panel: string;
  /** `either` when a mirrored copy serves as well: a symmetric piece, or cloth with both sides alike. */
  readonly hand: NeedHand;
  /** The hand as the piece lies; an `either` piece serves this hand first. */
  readonly asLaid: Hand;
  readonly count: number;
}

/** The other hand. */
export function otherHand(hand: Hand): Hand {
  return hand === 'left' ? 'right' : 'left';
}

/** Whether a mirrored copy of the piece serves as well on this cloth, so that a flip is free. */
export function flipIsFree(panel: LayPanel, strip: Strip): boolean {
  return panel.shape.symmetric || strip.sidesAlike;
}

/** The hand that one layer of cloth gives: a flip mirrors, and so does cloth with its wrong side up. */
function handOf(panel: LayPanel, flip: boolean, layer: Layer): Hand {
  return flip !== (layer.sideUp === 'wrong') ? otherHand(panel.shape.hand) : panel.shape.hand;
}

/** The zone of the spread that a placement lies in: that of the fold it lies on, else by the place of its label. */
export function zoneOf(placement: LayPlacement, panel: LayPanel, strip: Strip): Zone {
  const first = strip.spread[0]!;
  const fold = foldUnder(panel, placement, strip);
  if (fold) return fold.zone;
  if (strip.spread.length === 1) return first;
  const { y } = place(panel.shape.label, placement);
  return (
    strip.spread.find((zone) => y >= zone.from && y <= zone.to) ?? (y < 0 ? first : strip.spread.at(-1)!)
  );
}

/** The hand of a placement's piece on the top ply of open cloth, as it lies. */
export function handAsLaid(placement: Pick<LayPlacement, 'flip'>, panel: LayPanel, strip: Strip): Hand {
  return handOf(panel, placement.flip, strip.spread[0]!.layers[0]!);
}

/** What one placement is as a person reads it: a hand, a pair of both, or either where the hand is free. */
export type LaidHand = NeedHand | 'pair';

/** The hand that a placement gives where it lies; 'pair' where its layers give both. */
export function laidHand(placement: LayPlacement, panel: LayPanel, strip: Strip): LaidHand {
  const given = yields(placement, panel, strip);
  if (given.length > 1) return flipIsFree(panel, strip) ? 'either' : 'pair';
  return given[0]?.hand ?? 'either';
}

/** Whether `hand` on the top ply asks for a flip of the panel's shape. */
export function flipFor(hand: NeedHand, panel: LayPanel, strip: Strip): boolean {
  return hand !== 'either' && hand !== handAsLaid({ flip: false }, panel, strip);
}

/**
 * The pieces that `placement` of `panel` gives on this spread: one a layer, at most one entry a hand. A piece on the fold is
 * one whole piece for each two layers.
 */
export function yields(placement: LayPlacement, panel: LayPanel, strip: Strip): Yield[] {
  const { layers } = zoneOf(placement, panel, strip);
  const counts = new Map<Hand, number>();
  const onFold = foldUnder(panel, placement, strip) !== null;
  for (const layer of onFold ? layers.slice(0, layers.length / 2) : layers) {
    const hand = handOf(panel, placement.flip, layer);
    counts.set(hand, (counts.get(hand) ?? 0) + 1);
  }
  const free = flipIsFree(panel, strip);
  return [...counts].map(([asLaid, count]) => ({
    garment: placement.garment,
    panel: placement.panel,
    hand: free ? 'either' : asLaid,
    asLaid,
    count
  }));
}

/** How many pieces a placement gives in all: what its area counts for. */
export function yieldCount(placement: LayPlacement, panel: LayPanel, strip: Strip): number {
  return yields(placement, panel, strip).reduce((sum, one) => sum + one.count, 0);
}

/** Usable width counted once a layer: what an area placed on the spread is divided by. */
export function layeredWidth(strip: Strip): Millimetres {
  return strip.spread.reduce((sum, zone) => sum + (zone.to - zone.from) * zone.layers.length, 0);
}
