import { spreadKind, spreadWords } from '$lib/cloth/spread';
import { flawsAsLaid } from '$lib/cloth/flaws-as-laid';
import { laidWidth, type Flaw } from '$lib/cloth/strip';
import { placeOutline, snapPlacement } from '$lib/geometry/placement';
import type { Outline } from '$lib/geometry/point';
import { TOUCHING } from '$lib/geometry/tolerance';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import { flawBox } from '$lib/lay/flaw-room';
import { balance, panelOfPlacement } from '$lib/lay/needs';
import { panelOf, type LayPanel, type PanelBook } from '$lib/lay/panel-book';
import { allowedTurns, againstNap, way as napWay } from '$lib/lay/turns';
import { nameOf, pieceName } from '$lib/lay/wording';
import { hasRepeat } from '$lib/lay/matching';
import { laidShape } from '$lib/lay/on-fold';
import { whereAllowed, type WhereAllowed } from '$lib/lay/where-allowed';
import { lyingNow, lyingOf, notLain, type Lying } from './lying';
import type { Lattice, SettlePiece, SettlePlacement, SettleProblem, SettleResult, Way } from './problem';

/** What a settle run is to lay: everything that is not locked, or only what hangs on the Rail. */
export type SettleReach = 'all' | 'loose';
/** Whether it begins with the lay as it stands. */
export type SettleFrom = 'here' | 'scratch';

/** A lay as a problem, and whose pieces its copies are. Plain data. */
export interface LaySettle {
  readonly problem: SettleProblem;
  /** Per piece of the problem: garment and panel, and the placement of each copy, null for one off the Rail. */
  readonly pieces: Readonly<
    Record<
      string,
      { readonly garment: string; readonly panel: string; readonly placements: readonly (string | null)[] }
    >
  >;
  /** Pieces that are asked for and that this spread can't give by themselves: they stay on the Rail. */
  readonly notLain: number;
}

/** A panel that may be turned at will is tried at so many turns. */
const FREE_TURNS = Array.from({ length: 12 }, (_, i) => i * 30);

/** What of this lay's cloth the search can't do, in words for a person; null when it can. */
export function beyondSettle({ strip }: Pick<LayDocument, 'strip'>): string | null {
  return spreadKind(strip) === 'crosswise'
    ? `Settle lays no pieces against a fold across the cloth (${spreadWords(strip)}). Place them by hand, or spread the cloth otherwise.`
    : null;
}

/** The lay as a problem for the solver, by the rules that the check keeps. */
export function fromLay(
  document: LayDocument,
  book: PanelBook,
  options: {
    readonly reach: SettleReach;
    readonly from: SettleFrom;
    readonly side?: 'near' | 'far' | null | undefined;
  }
): LaySettle {
  const { strip } = document;
  const stays = document.placements.filter((one) => one.locked || options.reach === 'loose');
  const moves = document.placements.filter((one) => !one.locked && options.reach === 'all');
  const naps = napsOf(document, book, stays);
  const moving = new Set(moves.map(({ id }) => id));
  const groups = new Map<string, { piece: SettlePiece; owners: Owner; placements: (string | null)[] }>();

  const add = (lying: Lying, placement: string | null) => {
    const { garment, panel, stretch, flips } = lying;
    const known = panelOf(
      book,
      document.garments.find(({ id }) => id === garment),
      panel
    )!;
    const id = [garment, panel, flips.join(), ...(stretch === 0 ? [] : [stretch])].join('/');
    let group = groups.get(id);
    if (!group) {
      const piece = pieceOf(id, document, book, known, lying, moving, naps.get(garment) ?? 0);
      groups.set(id, (group = { piece, owners: { garment, panel }, placements: [] }));
    }
    group.placements.push(placement);
    return { id, copy: group.placements.length - 1 };
  };

  const start: SettlePlacement[] = [];
  for (const one of moves) {
    const lying = lyingNow(document, book, one);
    if (!lying) continue;
    const added = add(lying, one.id);
    if (options.from === 'here')
      start.push({ piece: added.id, copy: added.copy, x: one.x, y: one.y, turn: one.turn, flip: one.flip });
  }
  const { loose } = balance(document, book);
  const laid = lyingOf(document, book, loose);
  for (const lying of laid) add(lying, null);

  const pieces = [...groups.values()].map(({ piece, placements }) => ({
    ...piece,
    copies: placements.length
  }));
  return {
    problem: {
      width: laidWidth(strip),
      length: strip.length,
      outline: strip.given?.outline ?? null,
      keepOuts: flawsAsLaid(strip).map(keepOutOf),
      clearance: strip.clearance,
      touching: TOUCHING,
      preferredSide: options.side ?? null,
      pieces,
      locked: stays.flatMap((one) => {
        const panel = panelOfPlacement(document, book, one);
        return panel
          ? [
              {
                id: one.id,
                name: nameOf(document, book, one),
                outline: placeOutline(laidShape(panel, one, strip).cut, one)
              }
            ]
          : [];
      }),
      start
    },
    pieces: Object.fromEntries(
      [...groups].map(([id, { owners, placements }]) => [id, { ...owners, placements }])
    ),
    notLain: notLain(loose, laid, document, book)
  };
}

interface Owner {
  readonly garment: string;
  readonly panel: string;
}

/**
 * The placements of the lay once `result` is taken: what stayed, and what was laid, under its old id where it lay before
 * and a new one from the Rail. Pieces left over hang on the Rail again.
 */
export function toPlacements(
  document: LayDocument,
  settle: LaySettle,
  result: SettleResult,
  newId: () => string
): LayPlacement[] {
  const moved = new Set(Object.values(settle.pieces).flatMap(({ placements }) => placements));
  const stays = document.placements.filter(({ id }) => !moved.has(id));
  return [
    ...stays,
    ...result.placements.map((one) => {
      const { garment, panel, placements } = settle.pieces[one.piece]!;
      return {
        id: placements[one.copy] ?? newId(),
        garment,
        panel,
        ...snapPlacement(one),
        locked: false
      };
    })
  ];
}

function pieceOf(
  id: string,
  document: LayDocument,
  book: PanelBook,
  panel: LayPanel,
  { garment, panel: panelId, stretch: number, flips, words }: Lying,
  moving: ReadonlySet<string>,
  nap: 1 | -1 | 0
): SettlePiece {
  const { strip } = document;
  const where = whereAllowed(document, book, { garment, panel: panelId }, moving)!;
  const stretch = where.stretches[number]!;
  const turns = allowedTurns(panel, strip) ?? FREE_TURNS.filter((turn) => !againstNap(panel, strip, turn));
  const lying = stretch.ways ?? turns.flatMap((turn) => flips.map((flip) => ({ turn, flip })));
  const ways = lying
    .map(({ turn, flip }): Way => ({ turn, flip, nap: napWay(panel.turns, turn) }))
    .filter((one) => nap === 0 || one.nap === 0 || one.nap === nap);
  // One lattice serves all ways of a piece: those that ask for another one are left out.
  const lattice = ways[0] ? latticeOf(where, ways[0]) : null;
  const agreeing = lattice ? ways.filter((way) => sameLattice(lattice, latticeOf(where, way))) : ways;
  // Both of a pair are tilted alike: neither is. On stripes and checks, and on the fold, nothing is.
  const tilts =
    panel.turns !== 'free' &&
    !panel.paired &&
    !hasRepeat(strip) &&
    stretch.fold === null &&
    strip.spread.length === 1;
  return {
    id,
    name: `${pieceName(panel, words, document.garments.find((one) => one.id === garment)?.label)}${stretch.fold ? ', on the fold' : ''}`,
    outline: stretch.shape.cut,
    copies: 0,
    ways: agreeing,
    tilt: tilts ? panel.grainTolerance : 0,
    napGroup: strip.nap === 'garmentWay' ? garment : null,
    onFold: stretch.fold !== null,
    band: stretch.band.from > 0 || stretch.band.to < laidWidth(strip) ? stretch.band : null,
    lattice
  };
}

/** Where the repeat may take a piece that lies in `way`: by its first match point. */
function latticeOf(where: WhereAllowed, way: Way): Lattice | null {
  return where.latticesFor(way)[0] ?? null;
}

function sameLattice(a: Lattice, b: Lattice | null): boolean {
  const same = (one: Lattice['x'], other: Lattice['x']): boolean => {
    if (!one || !other) return one === other;
    const apart = (one.at - other.at) / one.size;
    return Math.abs(apart - Math.round(apart)) < 1e-9;
  };
  return b !== null && a.group === b.group && same(a.x, b.x) && same(a.y, b.y);
}

/** Which way each garment runs by the pieces that stay, on cloth where a garment runs one way. */
function napsOf(document: LayDocument, book: PanelBook, stays: readonly LayPlacement[]): Map<string, 1 | -1> {
  const naps = new Map<string, 1 | -1>();
  if (document.strip.nap !== 'garmentWay') return naps;
  for (const one of stays) {
    const panel = panelOfPlacement(document, book, one);
    const runs = panel ? napWay(panel.turns, one.turn) : 0;
    if (runs !== 0) naps.set(one.garment, runs);
  }
  return naps;
}

/** What a flaw takes: its box, grown by its radius where it has one. */
function keepOutOf(flaw: Flaw): Outline {
  const { minX, minY, maxX, maxY } = flawBox(flaw);
  if (minX === maxX) return circleAround(flaw.x, flaw.y, Math.max(flaw.radius, 0.01));
  const { radius } = flaw;
  return [
    { x: minX - radius, y: minY - radius },
    { x: maxX + radius, y: minY - radius },
    { x: maxX + radius, y: maxY + radius },
    { x: minX - radius, y: maxY + radius }
  ];
}

/** A polygon outside the circle, at most 1 % farther out. */
function circleAround(x: number, y: number, radius: number): Outline {
  const corners = 24;
  const reach = radius / Math.cos(Math.PI / corners);
  return Array.from({ length: corners }, (_, i) => ({
    x: x + reach * Math.cos((2 * Math.PI * i) / corners),
    y: y + reach * Math.sin((2 * Math.PI * i) / corners)
  }));
}
