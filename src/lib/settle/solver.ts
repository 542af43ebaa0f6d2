import { placeOutline } from '$lib/geometry/placement';
import { createField, type Field } from './field';
import { firstLay } from './first-lay';
import { copyLay, emptyLay, type Lay } from './laid';
import { createStore } from './no-fit-store';
import type { SettlePlacement, SettleProblem, SettleResult } from './problem';
import { randomFrom } from './random';
import { search, type Course } from './search';
import { towardsSide } from './side';
import { outlineArea, placeOf, taskOf, type Task } from './task';

/** Bytes of no-fit tables that one solver keeps. */
const TABLE_CAP = 120e6;

/** What a pass counts for at least. */
const PASS_LEAST = 50;

export interface Solver {
  /** Looks at about `budget` more positions. `share` says how much of the time is gone, 0 … 1. */
  step(budget: number, share: number): void;
  result(): SettleResult;
  /** Counts the improvements so far: a change means that `result` has something new. */
  version(): number;
  /** Positions looked at so far. */
  evaluations(): number;
  /** Whether no better lay can exist. */
  done(): boolean;
  /** Length of the best lay, pieces that do not fit the cloth included. */
  length(): number;
  /** The best lay as plain numbers, to hand to another solver of the same problem and seed of choices. */
  lay(): Float64Array;
  /** Goes on from a better lay found by another solver. */
  offer(lay: Float64Array): void;
  readonly least: number;
}

/**
 * A solver that owns no time: the caller steps it as long as it likes, and each step leaves the best lay so far. One
 * seed and the same steps give the same lays. Solvers of one problem and `deal` may exchange lays.
 *
 * @param options.floor the least shrink tried while exploring: 0.01 for seconds, 0.006 for a minute, 0.004 for many
 * @param options.deal deals the nap of groups that may lie either way
 */
export function createSolver(
  problem: SettleProblem,
  options: { seed: number; floor?: number; deal?: number }
): Solver {
  const random = randomFrom(options.seed);
  const task = dealt(problem, options.deal ?? 0);
  const store = createStore(task.forms, task.clear, task.clearance, TABLE_CAP);
  const field = createField(task, store, random);
  const n = task.items.length;
  const course: Course = {
    share: 0,
    floor: options.floor ?? 0.006,
    best: beginning(problem, task, field, random),
    offered: null,
    version: 1
  };
  const run = search(task, field, random, course);
  const incoming: Lay = emptyLay(n);
  let told: { version: number; lay: Lay; kept: Uint8Array | null } | null = null;

  /** The best lay, cut down to what fits if it is longer than it may be. */
  function fitting(): { lay: Lay; kept: Uint8Array | null } {
    if (told?.version !== course.version) {
      const { limit } = task;
      const lay = emptyLay(n);
      copyLay(course.best, lay);
      const over = limit !== null && course.best.length > limit + 1;
      told = { version: course.version, lay, kept: over ? cutDown(task, lay, limit) : null };
    }
    return told;
  }

  return {
    least: task.least / task.scale,
    step(budget, share) {
      course.share = share;
      const until = field.looked() + budget;
      // Each pass counts for something, so that a step ends even where nothing is left to look at.
      for (let passes = 0; field.looked() + passes * PASS_LEAST < until; passes++) {
        store.trim();
        if (closed(task, course) || run.next().done) return;
      }
    },
    evaluations: () => field.looked(),
    done: () => n === 0 || closed(task, course),
    version: () => course.version,
    length: () => course.best.length / task.scale,
    lay() {
      const { x, y, choice, length } = course.best;
      const packed = new Float64Array(3 * n + 1);
      packed[0] = length;
      packed.set(x, 1);
      packed.set(y, 1 + n);
      packed.set(choice, 1 + 2 * n);
      return packed;
    },
    offer(packed) {
      if (packed[0]! >= course.best.length) return;
      incoming.x.set(packed.subarray(1, 1 + n));
      incoming.y.set(packed.subarray(1 + n, 1 + 2 * n));
      for (let i = 0; i < n; i++) incoming.choice[i] = packed[1 + 2 * n + i]!;
      incoming.length = packed[0]!;
      if (!course.offered) course.offered = emptyLay(n);
      copyLay(incoming, course.offered);
    },
    result() {
      const { lay, kept } = fitting();
      return resultOf(problem, task, lay, kept, field.looked());
    }
  };
}

/** How many deals of naps and places in the repeat are tried; the one with the shortest first lay is kept. */
const DEALS = 6;
/** With more pieces a first lay for each deal would keep the person waiting. */
const FEW_PIECES = 300;

/** The problem as a task, with a good one of several deals where something may be dealt. */
function dealt(problem: SettleProblem, deal: number): Task {
  const open = problem.pieces.some((piece) => piece.napGroup !== null || piece.lattice?.group);
  const first = taskOf(problem, randomFrom(deal));
  if (!open || first.items.length > FEW_PIECES) return first;
  let best = first;
  let shortest = firstLay(first, randomFrom(deal), 0.04, null, null).length;
  for (let k = 1; k < DEALS; k++) {
    const task = taskOf(problem, randomFrom(deal + k * 7919));
    const { length } = firstLay(task, randomFrom(deal), 0.04, null, null);
    // A deal that leaves pieces no way to lie is none.
    if (task.unplaceable.length > best.unplaceable.length) continue;
    if (length >= shortest && task.unplaceable.length === best.unplaceable.length) continue;
    best = task;
    shortest = length;
  }
  return best;
}

function closed(task: Task, course: Course): boolean {
  return course.best.length <= task.least * (1 + 1e-9);
}

/** Where the search starts: the lay that it is given, completed, or a first lay made at once. */
function beginning(problem: SettleProblem, task: Task, field: Field, random: () => number): Lay {
  if (problem.start.length === 0) return firstLay(task, random, 0.04, null, null);
  const n = task.items.length;
  const lay = emptyLay(n);
  const kept = new Uint8Array(n);
  const given = new Map(problem.start.map((one) => [`${one.piece}#${one.copy}`, one]));
  task.items.forEach((item, i) => {
    const placement = given.get(`${item.piece}#${item.copy}`);
    const place = placement && placeOf(task, item, placement);
    if (!place || !insideOf(task, place)) return;
    kept[i] = 1;
    lay.choice[i] = place.choice;
    lay.x[i] = place.x;
    lay.y[i] = place.y;
  });
  // What overlaps by more than touching is taken up again, the worst first, and laid anew.
  const touching = problem.touching * task.scale * 0.9;
  for (;;) {
    const trial = emptyLay(n);
    copyLay(lay, trial);
    firstLay(task, random, 0.04, kept, trial);
    field.load(trial);
    let worst = -1;
    for (let i = 0; i < n; i++)
      if (
        kept[i] &&
        field.pairs.deepest(i) * task.yardstick > touching &&
        (worst < 0 || field.pairs.overlaps[i]! > field.pairs.overlaps[worst]!)
      )
        worst = i;
    if (worst < 0) return trial;
    kept[worst] = 0;
  }
}

function insideOf(task: Task, place: { choice: number; x: number; y: number }): boolean {
  const { hx } = task.forms[task.choiceForm[place.choice]!]!;
  return (
    place.x >= hx - 1 && place.y >= task.low[place.choice]! - 1 && place.y <= task.high[place.choice]! + 1
  );
}

/** Takes up what lies beyond `limit`, the rest stays; pieces that find a gap are laid into it. Marks what is laid. */
function cutDown(task: Task, lay: Lay, limit: number): Uint8Array {
  const n = task.items.length;
  const kept = new Uint8Array(n);
  const end = (i: number) => lay.x[i]! + task.forms[task.choiceForm[lay.choice[i]!]!]!.hx;
  for (let i = 0; i < n; i++) kept[i] = end(i) <= limit + 1 ? 1 : 0;
  firstLay(task, () => 0.5, 0, kept, lay);
  let length = task.lockedTo;
  for (let i = 0; i < n; i++) {
    kept[i] = end(i) <= limit + 1 ? 1 : 0;
    if (kept[i]) length = Math.max(length, end(i));
  }
  lay.length = length;
  return kept;
}

function resultOf(
  problem: SettleProblem,
  task: Task,
  lay: Lay,
  kept: Uint8Array | null,
  evaluations: number
): SettleResult {
  const placements: SettlePlacement[] = [];
  const leftOver: { piece: string; copy: number }[] = task.unplaceable.slice();
  const areas = new Map(problem.pieces.map((piece) => [piece.id, outlineArea(piece.outline)]));
  let area = problem.locked.reduce((sum, { outline }) => sum + outlineArea(outline), 0);
  task.items.forEach(({ piece, copy }, i) => {
    if (kept && !kept[i]) {
      leftOver.push({ piece, copy });
      return;
    }
    const c = lay.choice[i]!;
    const { turn, flip } = task.choiceWay[c]!;
    placements.push({
      piece,
      copy,
      x: (lay.x[i]! - task.choiceX[c]!) / task.scale,
      y: (lay.y[i]! - task.choiceY[c]!) / task.scale,
      turn,
      flip
    });
    area += areas.get(piece)!;
  });
  // Simplified outlines reach a little farther than the true ones.
  const length = placements.length === 0 ? task.lockedTo / task.scale : usedLength(problem, placements);
  return {
    placements: towardsSide(problem, placements),
    length,
    density: length > 0 ? area / (problem.width * length) : 0,
    leftOver,
    evaluations
  };
}

function usedLength(problem: SettleProblem, placements: readonly SettlePlacement[]): number {
  const outlines = new Map(problem.pieces.map((piece) => [piece.id, piece.outline]));
  let most = 0;
  for (const { outline } of problem.locked) for (const p of outline) most = Math.max(most, p.x);
  for (const placement of placements)
    for (const p of placeOutline(outlines.get(placement.piece)!, placement)) most = Math.max(most, p.x);
  return most;
}
