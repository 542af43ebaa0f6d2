import { createField, copyLay, emptyLay, type Lay } from './field';
import { firstLay } from './first-lay';
import { createStore } from './no-fit-store';
import type { SettlePlacement, SettleProblem, SettleResult } from './problem';
import { randomFrom } from './random';
import { search, type Course } from './search';
import { taskOf } from './task';

/** Bytes of no-fit tables that one solver keeps. */
const TABLE_CAP = 120e6;

export interface Solver {
  /** Looks at about `budget` more positions. `share` says how much of the time is gone, 0 … 1. */
  step(budget: number, share: number): void;
  result(): SettleResult;
  /** Counts the improvements so far: a change means that `result` has something new. */
  version(): number;
  /** The best lay as plain numbers, to hand to another solver of the same problem and seed of choices. */
  lay(): Float64Array;
  /** Goes on from a better lay found by another solver. */
  offer(lay: Float64Array): void;
  readonly least: number;
}

/**
 * A solver that owns no time: the caller steps it as long as it likes, and each step leaves the best lay so far. One
 * seed and the same steps give the same lays.
 */
export function createSolver(problem: SettleProblem, options: { seed: number; floor?: number }): Solver {
  const random = randomFrom(options.seed);
  const task = taskOf(problem, randomFrom(0x5e771e));
  const store = createStore(task.forms, task.clear, task.clearance, TABLE_CAP);
  const field = createField(task, store, random);
  const n = task.items.length;
  const course: Course = {
    share: 0,
    floor: options.floor ?? 0.006,
    best: firstLay(task, random, null, null),
    offered: null,
    version: 1
  };
  const run = search(task, field, random, course);
  const incoming: Lay = emptyLay(n);

  return {
    least: task.least / task.scale,
    step(budget, share) {
      course.share = share;
      const until = field.looked() + budget;
      do {
        store.trim();
        if (run.next().done) return;
        if (course.best.length <= task.least * (1 + 1e-9)) return;
      } while (field.looked() < until);
    },
    version: () => course.version,
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
      const { best } = course;
      const placements: SettlePlacement[] = task.items.map((item, i) => {
        const c = best.choice[i]!;
        const way = task.choiceWay[c]!;
        return {
          piece: item.piece,
          copy: item.copy,
          x: (best.x[i]! - task.choiceX[c]!) / task.scale,
          y: (best.y[i]! - task.choiceY[c]!) / task.scale,
          turn: way.turn,
          flip: way.flip
        };
      });
      return {
        placements,
        length: best.length / task.scale,
        density: task.area / (task.width * best.length),
        leftOver: [],
        evaluations: field.looked()
      };
    }
  };
}
