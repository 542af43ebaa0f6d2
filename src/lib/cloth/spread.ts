import { snap } from '$lib/geometry/point';
import type { Millimetres } from '$lib/units/measure';
import { laidWidth, type Layer, type Strip, type Zone } from './strip';

/*
 * The ways in which cloth is spread, and the zones of the width that each gives. The zones are what is stored; which spread
 * they are is read back from them.
 */

export const spreadKinds = ['open', 'lengthwise', 'crosswise', 'pliesUp', 'faceToFace', 'tubular'] as const;
/**
 * open: one ply · lengthwise: a fold along the warp at y = 0 · crosswise: a fold across at the cloth's start · pliesUp: several
 * plies, one side up · faceToFace: several plies, each facing the one below · tubular: knitted or sewn round, folded twice.
 */
export type SpreadKind = (typeof spreadKinds)[number];

export const MOST_PLIES = 200;

/** What a person chooses. Fields that the kind does not ask for change nothing. */
export interface SpreadChoice {
  readonly kind: SpreadKind;
  /** Which side of the top ply looks up. */
  readonly sideUp: 'right' | 'wrong';
  /** Lengthwise: how much usable width lies doubled, from the fold; null for half of it, selvedge on selvedge. */
  readonly depth: Millimetres | null;
  /** Plies in all: 2 or more where the kind has several, and even face to face. */
  readonly plies: number;
  /**
   * Crosswise: the upper layer is cut off and turned. Face to face: every other ply is cut off and turned. Either way the nap
   * of all layers then runs alike; a fold, and cloth laid to and fro, turn it round.
   */
  readonly turned: boolean;
}

/** What is not chosen: the depth of a whole fold, two plies, turned so that a nap runs alike. */
export const openChoice: SpreadChoice = {
  kind: 'open',
  sideUp: 'right',
  depth: null,
  plies: 2,
  turned: true
};

/**
 * Which side is up where nobody says: open cloth right side up, folded cloth right sides in, stripes and checks folded right side out so that
 * they can be seen to match (published leaflets).
 */
export function usualSideUp(kind: SpreadKind, patterned: boolean): 'right' | 'wrong' {
  return kind === 'open' || kind === 'pliesUp' || patterned ? 'right' : 'wrong';
}

type Width = Pick<Strip, 'usableWidth' | 'fullWidth'>;

/** What a selvedge and the room kept from it take of the width: half of what is not usable. */
export function sideMargin({ usableWidth, fullWidth }: Width): Millimetres {
  return snap(Math.max(0, fullWidth - usableWidth) / 2);
}

/** The deepest and the shallowest fold of a cloth: half of its usable width, and what a hand still lays straight. */
export function foldDepths({ usableWidth }: Width): {
  readonly least: Millimetres;
  readonly most: Millimetres;
} {
  return { least: Math.min(50, snap(usableWidth / 2)), most: snap(usableWidth / 2) };
}

/** The zones that `choice` gives on a cloth. Throws RangeError for a depth or a number of plies that no cloth has. */
export function spreadOf(cloth: Width, choice: SpreadChoice): Zone[] {
  const { kind, sideUp, turned } = choice;
  const top: Layer = { sideUp, nap: 'along' };
  const under: Layer = { sideUp: other(sideUp), nap: 'along' };
  const whole = (layers: Layer[], fold: Zone['fold']): Zone[] => [
    { from: 0, to: cloth.usableWidth, layers, fold }
  ];
  switch (kind) {
    case 'open':
      return whole([top], 'none');
    case 'lengthwise':
      return folded(cloth, choice.depth, [top, under]);
    case 'crosswise':
      return turned ? whole([top, under], 'none') : whole([top, { ...under, nap: 'against' }], 'start');
    case 'pliesUp':
      return whole(
        Array.from({ length: plies(choice) }, () => top),
        'none'
      );
    case 'faceToFace':
      return whole(
        Array.from({ length: plies(choice) }, (_, i): Layer =>
          i % 2 === 0 ? top : { ...under, nap: turned ? 'along' : 'against' }
        ),
        'none'
      );
    case 'tubular':
      return whole([top, under], 'both');
  }
}

/**
 * A fold at y = 0. The doubled stretch reaches to where the upper ply stops being usable; its selvedge margin lies on the lower ply, and beyond
 * that the lower ply lies single up to usable width − depth.
 */
function folded(cloth: Width, wanted: Millimetres | null, layers: Layer[]): Zone[] {
  const { least, most } = foldDepths(cloth);
  const depth = snap(wanted ?? most);
  if (!(depth >= least && depth <= most))
    throw new RangeError(`A fold lies ${least} to ${most} mm deep on this cloth, got ${depth} mm`);
  const doubled: Zone = { from: 0, to: depth, layers, fold: 'near' };
  const end = snap(cloth.usableWidth - depth);
  const past = snap(depth + sideMargin(cloth));
  // Less than this beside the upper selvedge is no cloth to lay on.
  if (end - past < 1) return [doubled];
  const single: Zone = { from: past, to: end, layers: [layers[1]!], fold: 'none' };
  return past > depth
    ? [doubled, { from: depth, to: past, layers: [], fold: 'none' }, single]
    : [doubled, single];
}

function plies(choice: SpreadChoice): number {
  const count = choice.plies;
  if (!Number.isInteger(count) || count < 2 || count > MOST_PLIES)
    throw new RangeError(`Several plies are 2 to ${MOST_PLIES}, got ${count}`);
  if (choice.kind === 'faceToFace' && count % 2 !== 0)
    throw new RangeError(`Face to face lies an even number of plies, got ${count}`);
  return count;
}

function other(side: 'right' | 'wrong'): 'right' | 'wrong' {
  return side === 'right' ? 'wrong' : 'right';
}

/** Which spread the zones of a strip are. */
export function spreadKind(strip: Pick<Strip, 'spread'>): SpreadKind {
  const { fold, layers } = strip.spread[0]!;
  if (fold === 'near' || fold === 'far') return 'lengthwise';
  if (fold === 'both') return 'tubular';
  if (fold === 'start') return 'crosswise';
  if (layers.length === 1) return 'open';
  return layers.every(({ sideUp }) => sideUp === layers[0]!.sideUp) ? 'pliesUp' : 'faceToFace';
}

/** What was chosen for a strip to be spread so. A crosswise fold that is cut and turned is two plies face to face. */
export function choiceOf(strip: Pick<Strip, 'spread' | 'usableWidth'>): SpreadChoice {
  const { layers, to } = strip.spread[0]!;
  const kind = spreadKind(strip);
  return {
    kind,
    sideUp: layers[0]!.sideUp,
    depth: kind === 'lengthwise' && to < snap(strip.usableWidth / 2) ? to : null,
    plies: Math.max(2, layers.length),
    turned: layers.every(({ nap }) => nap === layers[0]!.nap)
  };
}

/** The choice that opens a cloth into a single ply: the side that the ply beneath a fold has up stays up. */
export function openingOf(strip: Pick<Strip, 'spread'>): SpreadChoice {
  const { layers } = strip.spread[0]!;
  const stays = spreadKind(strip) === 'lengthwise' ? layers[1]! : layers[0]!;
  return { ...openChoice, sideUp: stays.sideUp };
}

/** How many lengths of the cloth lie on one another: what the length of a lay is counted times when cloth is bought. */
export function lengthsSpread(strip: Pick<Strip, 'spread'>): number {
  const kind = spreadKind(strip);
  return kind === 'lengthwise' || kind === 'tubular' ? 1 : strip.spread[0]!.layers.length;
}

/** Whether the nap of some layers runs the other way than that of the top one. */
export function napTurned(strip: Pick<Strip, 'spread'>): boolean {
  const first = strip.spread[0]!.layers[0]!.nap;
  return strip.spread.some(({ layers }) => layers.some(({ nap }) => nap !== first));
}

/** Whether one placement gives pieces of both hands somewhere on this spread. */
export function hasBothSides(strip: Pick<Strip, 'spread'>): boolean {
  return strip.spread.some(({ layers }) => layers.some(({ sideUp }) => sideUp !== layers[0]!.sideUp));
}

const words: Readonly<Record<SpreadKind, (strip: Pick<Strip, 'spread'>) => string>> = {
  open: () => 'Open, single ply',
  lengthwise: ({ spread }) =>
    spread.length > 1 ? 'Folded lengthwise in part' : 'Folded lengthwise, selvedge on selvedge',
  crosswise: () => 'Folded crosswise',
  pliesUp: ({ spread }) => `${spread[0]!.layers.length} plies, all facing one way`,
  faceToFace: (strip) =>
    `${strip.spread[0]!.layers.length} plies face to face, ${napTurned(strip) ? 'laid to and fro' : 'every other ply turned'}`,
  tubular: () => 'Tubular, a fold at both sides'
};

/** The spread in words: 'Folded lengthwise in part'. */
export function spreadWords(strip: Pick<Strip, 'spread'>): string {
  return words[spreadKind(strip)](strip);
}

/** What lies which side up, as it is drawn and printed: 'RIGHT SIDE UP', 'FOLD: gives L + R'. */
export function spreadMarks(strip: Strip): string[] {
  const side = strip.sidesAlike
    ? 'BOTH SIDES ALIKE'
    : `${strip.spread[0]!.layers[0]!.sideUp === 'right' ? 'RIGHT' : 'WRONG'} SIDE UP`;
  switch (spreadKind(strip)) {
    case 'open':
      return [side];
    case 'lengthwise':
    case 'tubular':
    case 'crosswise':
      return [side, 'FOLD: gives L + R'];
    case 'pliesUp':
      return [side, `${strip.spread[0]!.layers.length} PLIES: each gives one`];
    case 'faceToFace':
      return [side, `${strip.spread[0]!.layers.length} PLIES FACE TO FACE: gives L + R`];
  }
}

/** Where the borders between zones lie, the outer ones left out. */
export function zoneBorders(strip: Pick<Strip, 'spread'>): Millimetres[] {
  return strip.spread.map(({ to }) => to).filter((y) => y < laidWidth(strip));
}
