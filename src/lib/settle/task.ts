import { snap, type Outline } from '$lib/geometry/point';
import { cosSin, place, snapTurn } from '$lib/geometry/placement';
import { centredRing, formOf, ringKey, type Form } from './form';
import type { SettlePiece, SettlePlacement, SettleProblem, Way } from './problem';
import { extent, surroundings } from './remnant';
import { outerSimplified } from './simplify';

/** A way of a piece and the choice that it is, of several ways that look alike. */
export interface Look {
  readonly way: Way;
  readonly choice: number;
  readonly x: number;
  readonly y: number;
}

/** One copy of a piece that the search moves. Its choices are numbers first … last − 1 of the task's choice arrays. */
export interface Item {
  readonly piece: string;
  readonly copy: number;
  readonly first: number;
  readonly last: number;
  readonly looks: readonly Look[];
}

/** Something that stays where it is: a locked piece, a flaw, the surroundings of a remnant. */
export interface Fixed {
  readonly form: number;
  readonly x: number;
  readonly y: number;
}

/**
 * A problem in the search's own terms. Lengths are in quanta: whole numbers in which every outline of the product
 * is exact.
 */
export interface Task {
  /** Quanta per unit of the problem. */
  readonly scale: number;
  readonly width: number;
  /** The length that must not be exceeded, null when open. */
  readonly limit: number | null;
  /** No lay can be shorter: area ÷ width, the longest piece, the farthest lock. */
  readonly least: number;
  /** Greatest x of the locked pieces. */
  readonly lockedTo: number;
  readonly forms: readonly Form[];
  readonly clear: readonly boolean[];
  readonly clearance: number;
  readonly items: readonly Item[];
  /** Copies of pieces that have no way to lie on this cloth. */
  readonly unplaceable: readonly { readonly piece: string; readonly copy: number }[];
  readonly fixed: readonly Fixed[];
  readonly choiceForm: Int32Array;
  readonly choiceWay: readonly Way[];
  /** Where the box's centre lies, seen from the piece's origin. */
  readonly choiceX: Float64Array;
  readonly choiceY: Float64Array;
  /** Lattice: the centre lies at phase + k × size; size 0 is none. */
  readonly phaseX: Float64Array;
  readonly phaseY: Float64Array;
  readonly sizeX: Float64Array;
  readonly sizeY: Float64Array;
  /** How low and how high the centre may lie; both the same for a piece on the fold. */
  readonly low: Float64Array;
  readonly high: Float64Array;
  /** The mean of √area: the yardstick of the search. */
  readonly yardstick: number;
  readonly area: number;
}

const MOST = 1.6e7;
/** Rounding of a product of two decimals, in quanta. */
const HAIR = 1e-6;

/** The problem as a task. `random` deals the nap of groups that may lie either way. */
export function taskOf(problem: SettleProblem, random: () => number): Task {
  const scale = scaleOf(problem);
  const forms: Form[] = [];
  const clear: boolean[] = [];
  const byKey = new Map<string, number>();
  const formNumber = (ring: { xs: Float64Array; ys: Float64Array }, kept: boolean): number => {
    const key = ringKey(ring) + kept;
    let number = byKey.get(key);
    if (number === undefined) {
      number = forms.length;
      forms.push(formOf(ring));
      clear.push(kept);
      byKey.set(key, number);
    }
    return number;
  };

  const width = Math.round(problem.width * scale);
  const limit = problem.length === null ? null : Math.round(problem.length * scale);
  const items: Item[] = [];
  const unplaceable: { piece: string; copy: number }[] = [];
  const choice = {
    form: [] as number[],
    way: [] as Way[],
    x: [] as number[],
    y: [] as number[],
    phaseX: [] as number[],
    phaseY: [] as number[],
    sizeX: [] as number[],
    sizeY: [] as number[],
    low: [] as number[],
    high: [] as number[]
  };
  const grouped = napsOfStart(problem);
  const phases = phasesOf(problem, random);
  const coarse = coarseness(problem);
  let area = 0;
  let roots = 0;
  let longest = 0;
  for (const piece of problem.pieces) {
    const rooted = Math.sqrt(outlineArea(piece.outline));
    const outline =
      piece.outline.length > 14 && coarse > 0
        ? outerSimplified(piece.outline, coarse * rooted)
        : piece.outline;
    const first = choice.form.length;
    const seen = new Map<number, number>();
    const looks: Look[] = [];
    let shortest = Infinity;
    for (const way of waysOf(piece, problem, grouped, random)) {
      const centred = centredRing(outline, way, scale);
      if (!centred) continue;
      const form = formNumber(centred.ring, true);
      const { hx, hy } = forms[form]!;
      const low = hy + (piece.band ? Math.ceil(piece.band.from * scale - HAIR) : 0);
      const high = piece.onFold
        ? low
        : (piece.band ? Math.min(width, Math.floor(piece.band.to * scale + HAIR)) : width) - hy;
      if (low > high || low + hy > width || (limit !== null && 2 * hx > limit)) continue;
      const alike = seen.get(form);
      if (alike !== undefined && !piece.lattice) {
        looks.push({ way, choice: alike, x: centred.cx, y: centred.cy });
        continue;
      }
      seen.set(form, choice.form.length);
      looks.push({ way, choice: choice.form.length, x: centred.cx, y: centred.cy });
      shortest = Math.min(shortest, 2 * hx);
      choice.form.push(form);
      choice.way.push(way);
      choice.x.push(centred.cx);
      choice.y.push(centred.cy);
      choice.low.push(low);
      choice.high.push(high);
      const { lattice } = piece;
      const moved = lattice?.group ? phases.get(lattice.group)! : { x: 0, y: 0 };
      const [cos, sin] = cosSin(way.turn);
      const ay = lattice ? (way.flip ? -lattice.anchor.y : lattice.anchor.y) : 0;
      const ax = lattice ? lattice.anchor.x : 0;
      choice.sizeX.push(lattice?.x ? lattice.x.size * scale : 0);
      choice.sizeY.push(lattice?.y ? lattice.y.size * scale : 0);
      choice.phaseX.push(
        lattice?.x ? (lattice.x.at + moved.x - (ax * cos - ay * sin)) * scale + centred.cx : 0
      );
      choice.phaseY.push(
        lattice?.y ? (lattice.y.at + moved.y - (ax * sin + ay * cos)) * scale + centred.cy : 0
      );
    }
    const last = choice.form.length;
    if (last === first) {
      for (let copy = 0; copy < piece.copies; copy++) unplaceable.push({ piece: piece.id, copy });
      continue;
    }
    longest = Math.max(longest, shortest);
    for (let copy = 0; copy < piece.copies; copy++) items.push({ piece: piece.id, copy, first, last, looks });
    const own = outlineArea(piece.outline) * scale * scale;
    area += own * piece.copies;
    roots += Math.sqrt(own) * piece.copies;
  }

  const fixed: Fixed[] = [];
  const fix = (outline: Outline, kept: boolean) => {
    const centred = centredRing(outline, { turn: 0, flip: false, nap: 0 }, scale);
    if (!centred) return;
    fixed.push({ form: formNumber(centred.ring, kept), x: centred.cx, y: centred.cy });
  };
  let lockedTo = 0;
  let lockedArea = 0;
  for (const lock of problem.locked) {
    fix(lock.outline, true);
    for (const p of lock.outline) lockedTo = Math.max(lockedTo, p.x * scale);
    lockedArea += outlineArea(lock.outline) * scale * scale;
  }
  for (const keepOut of problem.keepOuts) fix(keepOut, true);
  for (const outside of surroundings(problem, scale)) fix(outside, false);

  return {
    scale,
    width,
    limit,
    least: Math.max((area + lockedArea) / width, longest, lockedTo),
    lockedTo,
    forms,
    clear,
    clearance: problem.clearance * scale,
    items,
    unplaceable,
    fixed,
    choiceForm: Int32Array.from(choice.form),
    choiceWay: choice.way,
    choiceX: Float64Array.from(choice.x),
    choiceY: Float64Array.from(choice.y),
    phaseX: Float64Array.from(choice.phaseX),
    phaseY: Float64Array.from(choice.phaseY),
    sizeX: Float64Array.from(choice.sizeX),
    sizeY: Float64Array.from(choice.sizeY),
    low: Float64Array.from(choice.low),
    high: Float64Array.from(choice.high),
    yardstick: items.length ? roots / items.length : width,
    area: area + lockedArea
  };
}

/**
 * Quanta per unit: 2 × a power of ten, so that decimals stay whole and box centres too, as fine as exact
 * arithmetic on doubles allows.
 */
function scaleOf(problem: SettleProblem): number {
  let most = Math.max(problem.width, problem.outline ? (problem.length ?? 0) : 0);
  for (const { outline } of [...problem.pieces, ...problem.locked]) most = Math.max(most, extent(outline));
  for (const keepOut of problem.keepOuts) most = Math.max(most, extent(keepOut));
  return 2 * 10 ** Math.floor(Math.log10(MOST / 2 / most));
}

/** How far, as a share of √area, an outline of many corners may be simplified in the search. */
function coarseness(problem: SettleProblem): number {
  let forms = 0;
  let corners = 0;
  for (const piece of problem.pieces) {
    const ways = piece.ways.length * (piece.tilt > 0 ? TILTS.length : 1);
    forms += ways;
    corners += ways * piece.outline.length;
  }
  const mean = corners / Math.max(1, forms);
  if (mean <= 20 && forms <= 200) return 0;
  return forms <= 60 ? 0.0005 : forms <= 240 ? 0.002 : forms <= 800 ? 0.005 : 0.01;
}

const TILTS = [0, 0.5, -0.5, 1, -1];

function waysOf(
  piece: SettlePiece,
  problem: SettleProblem,
  grouped: Map<string, boolean>,
  random: () => number
): Way[] {
  let ways = piece.ways.slice();
  if (piece.napGroup !== null) {
    let along = grouped.get(piece.napGroup);
    if (along === undefined) grouped.set(piece.napGroup, (along = random() < 0.5));
    const kept = ways.filter((way) => way.nap === 0 || way.nap > 0 === along);
    if (kept.length > 0) ways = kept;
  }
  if (piece.tilt <= 0) return ways;
  const tilted = TILTS.flatMap((share) =>
    ways.map((way) => ({ ...way, turn: snapTurn(way.turn + share * piece.tilt) }))
  );
  // A person's own tilt is kept as it is.
  for (const { piece: id, turn, flip } of problem.start) {
    if (id !== piece.id) continue;
    const near = ways.find((way) => way.flip === flip && turnBetween(way.turn, turn) <= piece.tilt);
    if (near) tilted.push({ ...near, turn });
  }
  return tilted;
}

/**
 * How far each group of lattices is moved: so that a piece that lies already stays where it is, else dealt.
 */
function phasesOf(problem: SettleProblem, random: () => number): Map<string, { x: number; y: number }> {
  const phases = new Map<string, { x: number; y: number }>();
  const pieces = new Map(problem.pieces.map((piece) => [piece.id, piece]));
  for (const placement of problem.start) {
    const lattice = pieces.get(placement.piece)?.lattice;
    if (!lattice?.group || phases.has(lattice.group)) continue;
    const anchor = place(lattice.anchor, placement);
    phases.set(lattice.group, {
      x: lattice.x ? anchor.x - lattice.x.at : 0,
      y: lattice.y ? anchor.y - lattice.y.at : 0
    });
  }
  for (const { lattice, onFold, outline } of problem.pieces) {
    if (!lattice?.group) continue;
    const known = phases.get(lattice.group);
    // A piece on the fold has no choice across.
    const folded =
      onFold && lattice.y ? lattice.anchor.y - Math.min(...outline.map((p) => p.y)) - lattice.y.at : null;
    if (known && folded === null) continue;
    phases.set(lattice.group, {
      x: known?.x ?? snap(random() * (lattice.x?.size ?? 0)),
      y: folded ?? snap(random() * (lattice.y?.size ?? 0))
    });
  }
  return phases;
}

/** How the groups run whose pieces lie already. */
function napsOfStart(problem: SettleProblem): Map<string, boolean> {
  const naps = new Map<string, boolean>();
  const pieces = new Map(problem.pieces.map((piece) => [piece.id, piece]));
  for (const { piece: id, turn } of problem.start) {
    const piece = pieces.get(id);
    if (!piece || piece.napGroup === null || naps.has(piece.napGroup)) continue;
    const way = piece.ways.find((one) => turnBetween(one.turn, turn) <= piece.tilt + 1e-3);
    if (way && way.nap !== 0) naps.set(piece.napGroup, way.nap > 0);
  }
  return naps;
}

/** The least turn from one angle to the other, 0 … 180. */
export function turnBetween(a: number, b: number): number {
  return Math.abs(((((a - b) % 360) + 540) % 360) - 180);
}

export function outlineArea(outline: Outline): number {
  let twice = 0;
  for (let i = 0, j = outline.length - 1; i < outline.length; j = i++)
    twice += outline[j]!.x * outline[i]!.y - outline[i]!.x * outline[j]!.y;
  return Math.abs(twice) / 2;
}

/** `placement` as a choice of `item` and the centre of its box; null if that is no way of the piece. */
export function placeOf(
  task: Task,
  item: Item,
  placement: SettlePlacement
): { choice: number; x: number; y: number } | null {
  const look = item.looks.find(
    ({ way }) => way.flip === placement.flip && turnBetween(way.turn, placement.turn) < 1e-3
  );
  return look
    ? {
        choice: look.choice,
        x: placement.x * task.scale + look.x,
        y: placement.y * task.scale + look.y
      }
    : null;
}
