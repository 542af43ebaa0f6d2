import type { Strip } from '$lib/cloth/strip';
import type { Hand } from '$lib/pattern/panel';
import type { Garment, LayDocument, LayPlacement, Need, NeedHand } from './document';
import { panelKey, panelOf, type LayPanel, type PanelBook } from './panel-book';
import { yields, type Yield } from './yields';

/*
 * What an order asks of a lay, what the placements give, and what is left over on either side.
 */

/**
 * The pieces that `garments` ask of this cloth, in the order of the garments and of the book. `takes` says which panels
 * of a garment this cloth is for; all of the book's panels of its style version when it is left out.
 */
export function needsOf(
  garments: readonly Garment[],
  book: PanelBook,
  strip: Strip,
  takes: (garment: Garment, panel: LayPanel) => boolean = () => true
): Need[] {
  const panels = Object.entries(book);
  return garments.flatMap((garment) =>
    panels
      .filter(
        ([key, panel]) => key === panelKey(garment.styleVersion, panel.shape.panel) && takes(garment, panel)
      )
      .flatMap(([, panel]) =>
        handsOf(panel, strip).map(({ hand, count }) => ({
          garment: garment.id,
          panel: panel.shape.panel,
          hand,
          count
        }))
      )
  );
}

/** The pieces of one garment by hand: a pair is half left, half right. */
function handsOf(panel: LayPanel, strip: Strip): { hand: NeedHand; count: number }[] {
  const { howMany, paired, shape } = panel;
  if (shape.symmetric) return [{ hand: 'either', count: howMany }];
  if (paired)
    return [
      { hand: 'left', count: howMany / 2 },
      { hand: 'right', count: howMany / 2 }
    ];
  return [{ hand: strip.sidesAlike ? 'either' : shape.hand, count: howMany }];
}

/** One piece that still hangs on the Rail. */
export interface LoosePiece {
  readonly garment: string;
  readonly panel: string;
  readonly hand: NeedHand;
}

/** Pieces of a placement that nothing asks for. */
export interface Surplus {
  readonly placement: string;
  readonly garment: string;
  readonly panel: string;
  readonly hand: Hand;
  readonly count: number;
}

/** Needs less yields, from both sides. */
export interface Balance {
  readonly loose: readonly LoosePiece[];
  readonly surplus: readonly Surplus[];
}

/** Pieces of one panel of one garment, needed or given. */
interface Account {
  readonly wanted: Record<NeedHand, number>;
  readonly given: { placement: string; yield: Yield; left: number }[];
}

/** What still hangs on the Rail, in the order of the needs, and what lies on the cloth unasked. */
export function balance(
  document: Pick<LayDocument, 'needs' | 'garments' | 'placements' | 'strip'>,
  book: PanelBook
): Balance {
  const accounts = new Map<string, Account>();
  const account = (garment: string, panel: string): Account => {
    const key = `${garment}/${panel}`;
    let found = accounts.get(key);
    if (!found) accounts.set(key, (found = { wanted: { left: 0, right: 0, either: 0 }, given: [] }));
    return found;
  };
  for (const need of document.needs) account(need.garment, need.panel).wanted[need.hand] += need.count;
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  for (const placement of document.placements) {
    const panel = panelOf(book, garments.get(placement.garment), placement.panel);
    if (!panel) continue;
    for (const one of yields(placement, panel, document.strip))
      account(one.garment, one.panel).given.push({ placement: placement.id, yield: one, left: one.count });
  }
  for (const one of accounts.values()) settleAccount(one);

  const loose: LoosePiece[] = [];
  for (const need of document.needs) {
    const { wanted } = account(need.garment, need.panel);
    const missing = Math.min(need.count, wanted[need.hand]);
    wanted[need.hand] -= missing;
    for (let i = 0; i < missing; i++)
      loose.push({ garment: need.garment, panel: need.panel, hand: need.hand });
  }
  const surplus = [...accounts.values()].flatMap(({ given }) =>
    given
      .filter((one) => one.left > 0)
      .map((one) => ({
        placement: one.placement,
        garment: one.yield.garment,
        panel: one.yield.panel,
        hand: one.yield.asLaid,
        count: one.left
      }))
  );
  return { loose, surplus };
}

/**
 * Sets what is given against what is wanted: each piece for the hand that it lies as, then for needs of either hand,
 * then, where a mirrored copy serves as well, for the other hand.
 */
function settleAccount({ wanted, given }: Account): void {
  const serve = (one: Account['given'][number], hand: NeedHand): void => {
    const served = Math.min(one.left, wanted[hand]);
    one.left -= served;
    wanted[hand] -= served;
  };
  for (const one of given) serve(one, one.yield.asLaid);
  for (const one of given) serve(one, 'either');
  for (const one of given)
    if (one.yield.hand === 'either') serve(one, one.yield.asLaid === 'left' ? 'right' : 'left');
}

/** What still hangs on the Rail: needs less yields, one entry a piece, in the order of the needs. */
export function loose(
  document: Pick<LayDocument, 'needs' | 'garments' | 'placements' | 'strip'>,
  book: PanelBook
): readonly LoosePiece[] {
  return balance(document, book).loose;
}

/** The panel of a placement; undefined when the book lacks it. */
export function panelOfPlacement(
  document: Pick<LayDocument, 'garments'>,
  book: PanelBook,
  placement: Pick<LayPlacement, 'garment' | 'panel'>
): LayPanel | undefined {
  return panelOf(
    book,
    document.garments.find((garment) => garment.id === placement.garment),
    placement.panel
  );
}
