import type { Strip, Zone } from '$lib/cloth/strip';
import type { Placement } from '$lib/geometry/placement';
import type { Point } from '$lib/geometry/point';
import { halfShape } from '$lib/pattern/half';
import type { PieceShape } from '$lib/pattern/piece-shape';
import type { Millimetres } from '$lib/units/measure';
import type { LayDocument, LayPlacement } from './document';
import { hasRepeat, matchPlaces, senseOf, type MatchGroup } from './matching';
import { foldsOf, ontoFold, type ClothFold } from './on-fold';
import { panelOf, type LayPanel, type PanelBook } from './panel-book';
import { againstNap, allowedTurns, grainTurns } from './turns';
import { yields, type Yield } from './yields';

/*
 * Where a piece may lie, as one pure answer for everything that places pieces: automatic placement, the hand that snaps, the first free place.
 */

/** One way in which a piece may lie: flip first (y → −y), then turn. */
export type LyingWay = Pick<Placement, 'turn' | 'flip'>;

/**
 * A stretch of the width in which a piece may lie.
 *
 * - `band`: its placed cut outline (of `shape`) lies within from ≤ y ≤ to. The clearance from a fold is taken off already, for a piece on
 *   the fold it is not.
 * - `fold`: null for a piece beside the fold. Else the fold line of the piece (`shape.foldLine`) lies on it: at y = `at` for 'near' and
 *   'far', at x = `at` for 'start'; the other coordinate is free. Only `ways` keep the cloth on the right side of the fold.
 * - `shape`: what is cut there, in the panel's own coordinates, so that a placement means the same for the half and the whole.
 * - `ways`: null: the turns and flips that the panel allows. Else only these.
 * - `gives`: what one placement gives there, unflipped; a flip swaps left and right.
 */
export interface AllowedStretch {
  readonly zone: Zone;
  readonly band: { readonly from: Millimetres; readonly to: Millimetres };
  readonly fold: Pick<ClothFold, 'side' | 'at'> | null;
  readonly shape: PieceShape;
  readonly ways: readonly LyingWay[] | null;
  readonly gives: readonly Pick<Yield, 'hand' | 'asLaid' | 'count'>[];
}

/**
 * The places of the repeat that a match point may fall on: `anchor`, in the panel's own coordinates, at x = x.at + k · x.size and y = y.at + k ·
 * y.size for whole k; null: free that way.
 *
 * `group` null: the lines lie where `at` says, because a piece of the group lies on the cloth and stays, or because the members may lie
 * mirrored or turned end for end, which agree on a line of the repeat whatever else. Else the id of the match group: every member may be moved off these
 * lines by one common amount.
 */
export interface AllowedLattice {
  readonly anchor: Point;
  readonly x: { readonly size: Millimetres; readonly at: Millimetres } | null;
  readonly y: { readonly size: Millimetres; readonly at: Millimetres } | null;
  readonly group: string | null;
}

export interface WhereAllowed {
  /** Every stretch that the piece may lie in; the best first: on the fold where its panel has one. Empty: nowhere on this spread. */
  readonly stretches: readonly AllowedStretch[];
  /** The lattices for a way of lying: one for each match group that the panel is in. Empty: anywhere in the repeat. */
  latticesFor(way: LyingWay): readonly AllowedLattice[];
}

/**
 * Where a piece of `garment` and `panel` may lie on the cloth of a lay. `moving` names placements that are about to move and so hold no lattice.
 * null for a panel that the book lacks.
 */
export function whereAllowed(
  document: LayDocument,
  book: PanelBook,
  piece: { readonly garment: string; readonly panel: string },
  moving: ReadonlySet<string> = new Set()
): WhereAllowed | null {
  const panel = panelOf(
    book,
    document.garments.find(({ id }) => id === piece.garment),
    piece.panel
  );
  if (!panel) return null;
  return {
    stretches: stretchesOf(document.strip, panel, piece),
    latticesFor: (way) => latticesOf(document, book, panel, piece, moving, way)
  };
}

function stretchesOf(
  strip: Strip,
  panel: LayPanel,
  piece: { readonly garment: string; readonly panel: string }
): AllowedStretch[] {
  const given = (way: LyingWay, at: Point): AllowedStretch['gives'] => {
    const lying: LayPlacement = { id: '', locked: false, ...piece, ...way, ...at };
    return yields(lying, panel, strip).map(({ hand, asLaid, count }) => ({ hand, asLaid, count }));
  };
  const beside = strip.spread
    .filter(({ layers }) => layers.length > 0)
    .map((zone): AllowedStretch => {
      const room = (side: 'near' | 'far'): Millimetres =>
        zone.fold === side || zone.fold === 'both' ? strip.clearance : 0;
      const band = { from: zone.from + room('near'), to: zone.to - room('far') };
      const middle = (band.from + band.to) / 2;
      return {
        zone,
        band,
        fold: null,
        shape: panel.shape,
        ways: null,
        gives: given({ turn: 0, flip: false }, { x: 0, y: middle - panel.shape.label.y })
      };
    });
  return [...foldsOf(strip).flatMap((fold) => stretchOnFold(strip, panel, fold, given)), ...beside];
}

/** Ways in which the upper half of a shape (y ≥ its fold line) lies on the cloth's side of a fold. */
const waysOn: Readonly<Record<ClothFold['side'], readonly LyingWay[]>> = {
  near: [
    { turn: 0, flip: false },
    { turn: 180, flip: true }
  ],
  far: [
    { turn: 0, flip: true },
    { turn: 180, flip: false }
  ],
  start: [
    { turn: 270, flip: false },
    { turn: 90, flip: true }
  ]
};

function stretchOnFold(
  strip: Strip,
  panel: LayPanel,
  fold: ClothFold,
  given: (way: LyingWay, at: Point) => AllowedStretch['gives']
): AllowedStretch[] {
  const line = panel.shape.foldLine;
  if (!line) return [];
  const allowed = grainTurns(panel.turns);
  const ways = waysOn[fold.side].filter(
    ({ turn }) => (allowed === null || allowed.includes(turn)) && !againstNap(panel, strip, turn)
  );
  const first = ways[0];
  if (!first) return [];
  const { zone } = fold;
  const laid = ontoFold(panel, { ...first, x: 0, y: 0 }, { spread: [zone] }, Infinity);
  return [
    {
      zone,
      band: { from: zone.from, to: zone.to },
      fold: { side: fold.side, at: fold.at },
      shape: halfShape(panel.shape, 1),
      ways,
      gives: given(first, laid)
    }
  ];
}

function latticesOf(
  document: LayDocument,
  book: PanelBook,
  panel: LayPanel,
  piece: { readonly garment: string; readonly panel: string },
  moving: ReadonlySet<string>,
  way: LyingWay
): AllowedLattice[] {
  const { repeat } = document.strip;
  if (!hasRepeat(document.strip)) return [];
  return document.rules.matchGroups.flatMap((group): AllowedLattice[] => {
    const own = group.points.find((one) => one.garment === piece.garment && one.panel === piece.panel);
    const point = own && panel.shape.matchPoints.find(({ id }) => id === own.point);
    if (!point) return [];
    const anchor = matchPlaces(document, book, group).find((one) => !moving.has(one.placement.id));
    const sense = senseOf(way, group.mirrored);
    const line = (
      of: Strip['repeat']['along'],
      placed: Millimetres | undefined,
      agree: number
    ): AllowedLattice['x'] =>
      of && {
        size: of.size,
        at: placed === undefined ? of.offset : of.offset + agree * (placed - of.offset)
      };
    return [
      {
        anchor: point.at,
        x: line(repeat.along, anchor?.at.x, anchor ? anchor.sense.along * sense.along : 1),
        y: line(repeat.across, anchor?.at.y, anchor ? anchor.sense.across * sense.across : 1),
        group: anchor || mayDiffer(document, book, group) ? null : group.id
      }
    ];
  });
}

/** Whether members of a group may come to lie so that the garment reads the repeat the other way on them. */
function mayDiffer(document: LayDocument, book: PanelBook, group: MatchGroup): boolean {
  if (group.mirrored) return true;
  return group.points.some(({ garment, panel: id }) => {
    const panel = panelOf(
      book,
      document.garments.find((one) => one.id === garment),
      id
    );
    const turns = panel && allowedTurns(panel, document.strip);
    return !turns || turns.some((turn) => senseOf({ turn, flip: false }, false).along === -1);
  });
}
