import type { LayDocument, LayPlacement } from '$lib/lay/document';
import type { LoosePiece } from '$lib/lay/needs';
import { foldUnder } from '$lib/lay/on-fold';
import { panelOf, type LayPanel, type PanelBook } from '$lib/lay/panel-book';
import { whereAllowed, type AllowedStretch } from '$lib/lay/where-allowed';
import { flipIsFree, handAsLaid, otherHand, zoneOf } from '$lib/lay/yields';
import type { NeedHand } from '$lib/lay/document';

/*
 * As what pieces are laid on this spread: under a fold one placement gives a pair, on the fold half a panel gives a whole piece, plies
 * give copies. What an order asks is turned into placements that give just that.
 */

/** One placement to be made. */
export interface Lying {
  readonly garment: string;
  readonly panel: string;
  /** Number of the stretch of the cloth (see `whereAllowed`). */
  readonly stretch: number;
  readonly flips: readonly boolean[];
  /** The hand that it gives as a person calls it. */
  readonly words: NeedHand | 'pair';
}

/** As what a piece lies that is on the cloth already: in its own stretch, giving what it gives. */
export function lyingNow(document: LayDocument, book: PanelBook, one: LayPlacement): Lying | null {
  const { strip } = document;
  const panel = panelIn(document, book, one);
  const stretches = whereAllowed(document, book, one)?.stretches;
  if (!panel || !stretches) return null;
  const fold = foldUnder(panel, one, strip);
  const zone = zoneOf(one, panel, strip);
  const number = stretches.findIndex((stretch) =>
    fold ? stretch.fold?.side === fold.side : stretch.fold === null && stretch.zone === zone
  );
  const stretch = stretches[number];
  if (!stretch || (stretch.fold && stretch.fold.side !== 'near')) return null;
  const both = givesBoth(stretch);
  const free = flipIsFree(panel, strip) || both;
  return {
    garment: one.garment,
    panel: one.panel,
    stretch: number,
    flips: free ? [false, true] : [one.flip],
    words: both ? 'pair' : flipIsFree(panel, strip) ? 'either' : handAsLaid(one, panel, strip)
  };
}

/**
 * The placements that give `loose`, and nothing besides. A piece for which no stretch gives only what is asked is lain in none: it
 * comes as a placement in the first stretch that gives the least besides, unless that is more than is asked, and then it is left out.
 */
export function lyingOf(document: LayDocument, book: PanelBook, loose: readonly LoosePiece[]): Lying[] {
  const asked = new Map<string, { garment: string; panel: string; hands: Record<NeedHand, number> }>();
  for (const { garment, panel, hand } of loose) {
    const key = `${garment}/${panel}`;
    const known = asked.get(key) ?? { garment, panel, hands: { left: 0, right: 0, either: 0 } };
    known.hands[hand]++;
    asked.set(key, known);
  }
  return [...asked.values()].flatMap(({ garment, panel: id, hands }) => {
    const panel = panelIn(document, book, { garment, panel: id });
    const stretches = whereAllowed(document, book, { garment, panel: id })?.stretches ?? [];
    if (!panel) return [];
    const found: Lying[] = [];
    stretches.forEach((stretch, number) => {
      if (stretch.fold && stretch.fold.side !== 'near') return;
      for (const flip of flipIsFree(panel, document.strip) || givesBoth(stretch) ? [null] : [false, true]) {
        const gives = given(stretch, flip ?? false);
        while (Object.values(gives).some((count) => count > 0) && fits(hands, gives)) {
          serve(hands, gives);
          found.push({
            garment,
            panel: id,
            stretch: number,
            flips: flip === null ? [false, true] : [flip],
            words: givesBoth(stretch)
              ? 'pair'
              : gives.either > 0
                ? 'either'
                : gives.left > 0
                  ? 'left'
                  : 'right'
          });
        }
      }
    });
    return found;
  });
}

/** The pieces of `loose` that this spread can't give one by one: a single hand under doubled cloth. */
export function notLain(
  loose: readonly LoosePiece[],
  lying: readonly Lying[],
  document: LayDocument,
  book: PanelBook
): number {
  const gives = lying.map((one) => {
    const stretch = whereAllowed(document, book, one)!.stretches[one.stretch]!;
    return stretch.gives.reduce((sum, { count }) => sum + count, 0);
  });
  return loose.length - gives.reduce((sum, one) => sum + one, 0);
}

/** Whether no more of any hand is given than is asked; a piece of free hand serves whichever is asked. */
function fits(asked: Record<NeedHand, number>, gives: Record<NeedHand, number>): boolean {
  return (
    gives.left <= asked.left &&
    gives.right <= asked.right &&
    gives.left + gives.right + gives.either <= asked.left + asked.right + asked.either
  );
}

/** Takes what is given off what is asked. */
function serve(asked: Record<NeedHand, number>, gives: Record<NeedHand, number>): void {
  asked.left -= gives.left;
  asked.right -= gives.right;
  let free = gives.either;
  for (const hand of ['either', 'left', 'right'] as const) {
    const taken = Math.min(free, asked[hand]);
    asked[hand] -= taken;
    free -= taken;
  }
}

function given(stretch: AllowedStretch, flip: boolean): Record<NeedHand, number> {
  const counts: Record<NeedHand, number> = { left: 0, right: 0, either: 0 };
  for (const { hand, count } of stretch.gives)
    counts[hand === 'either' || !flip ? hand : otherHand(hand)] += count;
  return counts;
}

/** Whether a flip changes nothing because as many lefts as rights are given. */
function givesBoth({ gives }: AllowedStretch): boolean {
  const of = (which: NeedHand) => gives.find(({ hand }) => hand === which)?.count ?? 0;
  return of('left') > 0 && of('left') === of('right');
}

function panelIn(
  document: LayDocument,
  book: PanelBook,
  piece: { readonly garment: string; readonly panel: string }
): LayPanel | undefined {
  return panelOf(
    book,
    document.garments.find(({ id }) => id === piece.garment),
    piece.panel
  );
}
