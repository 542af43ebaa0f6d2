import { spreadKind, spreadWords } from '$lib/cloth/spread';
import { flawsAsLaid } from '$lib/cloth/flaws-as-laid';
import type { Flaw, Strip } from '$lib/cloth/strip';
import { placeOutline, snapPlacement } from '$lib/geometry/placement';
import type { Outline } from '$lib/geometry/point';
import { TOUCHING } from '$lib/geometry/tolerance';
import type { LayDocument, LayPlacement, NeedHand } from '$lib/lay/document';
import { flawBox } from '$lib/lay/flaw-room';
import { balance, panelOfPlacement } from '$lib/lay/needs';
import { panelOf, type LayPanel, type PanelBook } from '$lib/lay/panel-book';
import { allowedTurns, againstNap, way as napWay } from '$lib/lay/turns';
import { nameOf, pieceName } from '$lib/lay/wording';
import { flipFor, flipIsFree, handAsLaid } from '$lib/lay/yields';
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
}

/** A panel that may be turned at will is tried at so many turns. */
const FREE_TURNS = Array.from({ length: 12 }, (_, i) => i * 30);

/** What of this lay's cloth the search can't do yet, in words for a person; null when it can. */
export function beyondSettle({ strip }: Pick<LayDocument, 'strip'>): string | null {
  const kind = spreadKind(strip);
  return kind === 'open'
    ? null
    : `Settle lays pieces on open, single cloth only; this cloth lies otherwise (${spreadWords(strip)}). Place the pieces by hand, or open the cloth.`;
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
  const groups = new Map<string, { piece: SettlePiece; owners: Owner; placements: (string | null)[] }>();

  const add = (garment: string, panel: string, flips: readonly boolean[], placement: string | null) => {
    const known = panelOf(
      book,
      document.garments.find(({ id }) => id === garment),
      panel
    );
    if (!known) return null;
    const id = `${garment}/${panel}/${flips.join()}`;
    let group = groups.get(id);
    if (!group) {
      const piece = pieceOf(id, document, known, garment, flips, naps.get(garment) ?? 0);
      groups.set(id, (group = { piece, owners: { garment, panel }, placements: [] }));
    }
    group.placements.push(placement);
    return { id, copy: group.placements.length - 1 };
  };

  const start: SettlePlacement[] = [];
  for (const one of moves) {
    const panel = panelOfPlacement(document, book, one);
    const free = panel && flipIsFree(panel, strip);
    const added = add(one.garment, one.panel, free ? [false, true] : [one.flip], one.id);
    if (added && options.from === 'here')
      start.push({ piece: added.id, copy: added.copy, x: one.x, y: one.y, turn: one.turn, flip: one.flip });
  }
  for (const one of balance(document, book).loose)
    add(one.garment, one.panel, flipsOf(one.hand, document, book, one), null);

  const pieces = [...groups.values()].map(({ piece, placements }) => ({
    ...piece,
    copies: placements.length
  }));
  return {
    problem: {
      width: strip.usableWidth,
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
          ? [{ id: one.id, name: nameOf(document, book, one), outline: placeOutline(panel.shape.cut, one) }]
          : [];
      }),
      start
    },
    pieces: Object.fromEntries(
      [...groups].map(([id, { owners, placements }]) => [id, { ...owners, placements }])
    )
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

function flipsOf(hand: NeedHand, document: LayDocument, book: PanelBook, owner: Owner): readonly boolean[] {
  const panel = panelOf(
    book,
    document.garments.find(({ id }) => id === owner.garment),
    owner.panel
  );
  if (!panel || flipIsFree(panel, document.strip)) return [false, true];
  return [flipFor(hand, panel, document.strip)];
}

function pieceOf(
  id: string,
  document: LayDocument,
  panel: LayPanel,
  garment: string,
  flips: readonly boolean[],
  nap: 1 | -1 | 0
): SettlePiece {
  const { strip } = document;
  const turns = allowedTurns(panel, strip) ?? FREE_TURNS.filter((turn) => !againstNap(panel, strip, turn));
  const ways = turns
    .flatMap((turn) => flips.map((flip): Way => ({ turn, flip, nap: napWay(panel.turns, turn) })))
    .filter((one) => nap === 0 || one.nap === 0 || one.nap === nap);
  const lattice = latticeOf(document, panel, garment);
  // Both of a pair are tilted alike: neither is. On stripes and checks nothing is.
  const tilts = panel.turns !== 'free' && !panel.paired && !strip.repeat.along && !strip.repeat.across;
  return {
    id,
    name: pieceName(
      panel,
      flips.length > 1 ? 'either' : handAsLaid({ flip: flips[0]! }, panel, strip),
      document.garments.find((one) => one.id === garment)?.label
    ),
    outline: panel.shape.cut,
    copies: 0,
    ways,
    tilt: tilts ? panel.grainTolerance : 0,
    napGroup: strip.nap === 'garmentWay' ? garment : null,
    onFold: false,
    band: null,
    lattice
  };
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

/** Where the repeat may take a panel: its match point of a match group on a line of the repeat. */
function latticeOf(document: LayDocument, panel: LayPanel, garment: string): Lattice | null {
  const { along, across } = document.strip.repeat;
  if (!along && !across) return null;
  for (const group of document.rules.matchGroups)
    for (const one of group.points) {
      if (one.garment !== garment || one.panel !== panel.shape.panel) continue;
      const point = panel.shape.matchPoints.find(({ id }) => id === one.point);
      if (point) return { anchor: point.at, x: line(along), y: line(across), group: null };
    }
  return null;
}

const line = (repeat: Strip['repeat']['along']) => repeat && { size: repeat.size, at: repeat.offset };

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
