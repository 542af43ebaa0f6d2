import type { Effort, Field } from './field';
import { copyLay, emptyLay, type Lay } from './laid';
import { shuffle } from './random';
import { createShake } from './shake';
import type { Task } from './task';

/** What the outside tells the search while it runs, and reads from it. */
export interface Course {
  /** The share of the time that is gone, 0 … 1: the last quarter only squeezes the best lay. */
  share: number;
  /** The least shrink worth trying while exploring: 0.01 for seconds, 0.004 for many minutes. */
  floor: number;
  /** The best lay without overlaps. */
  readonly best: Lay;
  /** A better lay found elsewhere, to go on from. */
  offered: Lay | null;
  /** How often the best has changed. */
  version: number;
}

/** How many near misses are remembered. */
const POOL = 10;
/** How often they are shaken before another length is tried. */
const SHAKES = 200;
/** From this share of the time on the best lay is only squeezed. */
const SQUEEZE = 0.75;
const EFFORT: Effort = { anywhere: 10, nearby: 6 };

/**
 * Shorter and shorter lays, for ever: shrink the best one, let the pieces settle apart, repair what nearly came
 * apart, shake what does not. It yields after each pass over the overlapping pieces.
 *
 * Outer loop after Gardeyn, Vanden Berghe and Wauters 2025: explore with larger steps and with swaps of large
 * pieces after a failure, then squeeze with small ones.
 */
export function* search(
  task: Task,
  field: Field,
  random: () => number,
  course: Course
): Generator<void, void, void> {
  const n = field.count;
  const order = new Int32Array(n);
  const trial = emptyLay(n);
  const nearest = emptyLay(n);
  const disturb = createShake(task, random);
  let nearestLoss = Infinity;

  function accept(): void {
    field.save(course.best);
    course.best.length = field.extent();
    course.version++;
  }

  /** Takes over a better lay from elsewhere; true if there was one. */
  function adopt(): boolean {
    const { offered } = course;
    course.offered = null;
    if (!offered || offered.length >= course.best.length) return false;
    copyLay(offered, course.best);
    course.version++;
    return true;
  }

  /** One pass: each overlapping item, in random order, to the best place found for it. */
  function pass(): void {
    let count = 0;
    for (let i = 0; i < n; i++) if (field.pairs.overlaps[i]! > 0) order[count++] = i;
    shuffle(order, count, random);
    for (let k = 0; k < count; k++) if (field.pairs.overlaps[order[k]!]! > 0) field.move(order[k]!, EFFORT);
  }

  /**
   * Moves overlapping pieces until none is left (true) or hope is (false). `nearest` is the best that was seen.
   */
  function* separate(strikes: number, patience: number): Generator<void, boolean, void> {
    const target = field.length();
    field.pairs.resetWeights();
    nearestLoss = field.pairs.totalLoss();
    field.save(nearest);
    let struck = 0;
    for (;;) {
      let idle = 0;
      let improved = false;
      while (idle < patience) {
        pass();
        yield;
        if (field.pairs.count() === 0) return true;
        if (course.offered && course.offered.length <= target) return false;
        field.pairs.reweigh();
        const loss = field.pairs.totalLoss();
        if (loss < nearestLoss * 0.98) {
          idle = 0;
          improved = true;
        } else idle++;
        if (loss < nearestLoss) {
          nearestLoss = loss;
          field.save(nearest);
        }
      }
      struck = improved ? 0 : struck + 1;
      if (struck >= strikes) return false;
      field.load(nearest);
    }
  }

  /** Moves what lies right of a random cut to the left until the lay is `length` long. */
  function shrink(from: Lay, length: number): Lay {
    copyLay(from, trial);
    const by = trial.length - length;
    const cut = random() * trial.length;
    for (let i = 0; i < n; i++) if (trial.x[i]! > cut) trial.x[i]! -= by;
    trial.length = length;
    return trial;
  }

  /** Opens a near miss where it presses most, by a little more than that, as long as it stays a gain. */
  function* repair(): Generator<void, boolean, void> {
    for (const factor of [1.5, 3, 6]) {
      field.load(nearest);
      const { i, j, loss } = field.pairs.worstPair();
      if (i < 0) return false;
      const depth = (loss * task.yardstick) / Math.sqrt(pieceSize(i) * (j < n ? pieceSize(j) : 1));
      const length = nearest.length + factor * depth;
      if (length >= course.best.length * 0.9999) return false;
      copyLay(nearest, trial);
      const cut = j < n ? (nearest.x[i]! + nearest.x[j]!) / 2 : nearest.x[i]!;
      for (let k = 0; k < n; k++) if (trial.x[k]! >= cut) trial.x[k]! += factor * depth;
      trial.length = length;
      if (!field.load(trial)) return false;
      if (yield* separate(1, 40)) {
        accept();
        return true;
      }
      if (course.offered) return false;
    }
    return false;
  }

  const pieceSize = (i: number) =>
    Math.sqrt(task.forms[task.choiceForm[task.items[i]!.first]!]!.area) / task.yardstick;

  /** One attempt at a lay shorter by `step`; true if the best got better. */
  function* shorten(step: number, strikes: number, patience: number): Generator<void, boolean, void> {
    const length = Math.max(task.least, course.best.length * (1 - step));
    if (!field.load(shrink(course.best, length))) {
      yield;
      return false;
    }
    if (yield* separate(strikes, patience)) {
      accept();
      return true;
    }
    return false;
  }

  /** Near misses of one length, the best first. */
  const pool: { lay: Lay; loss: number }[] = [];

  function remember(): void {
    const lay = emptyLay(n);
    copyLay(nearest, lay);
    pool.push({ lay, loss: nearestLoss });
    pool.sort((a, b) => a.loss - b.loss);
    if (pool.length > POOL) pool.pop();
  }

  function* shakeApart(): Generator<void, boolean, void> {
    pool.length = 0;
    remember();
    for (let tries = 0; tries < SHAKES && !course.offered && course.share < SQUEEZE; tries++) {
      // Biased towards the best.
      const pick = pool[Math.floor(random() * random() * pool.length)]!;
      copyLay(pick.lay, trial);
      disturb(trial);
      if (!field.load(trial)) return false;
      if (yield* separate(3, 60)) {
        accept();
        return true;
      }
      const closest = nearestLoss < pool[0]!.loss;
      remember();
      if (closest && !course.offered && (yield* repair())) return true;
    }
    return false;
  }

  let step = 0.04;
  let squeeze = 0.003;
  if (n === 0) return;
  for (;;) {
    if (adopt()) continue;
    if (course.best.length <= task.least * (1 + 1e-9)) {
      yield;
      continue;
    }
    if (course.share >= SQUEEZE) {
      if (yield* shorten(squeeze, 2, 60)) continue;
      squeeze = Math.max(0.0001, squeeze * 0.7);
      if (squeeze === 0.0001) squeeze = 0.003;
      continue;
    }
    if (yield* shorten(step, 3, 60)) {
      step = Math.min(0.04, step * 1.2);
      continue;
    }
    if (course.offered) continue;
    if (yield* repair()) {
      step = Math.max(course.floor, step * 0.6);
      continue;
    }
    if (course.offered) continue;
    if (step > course.floor) {
      step = Math.max(course.floor, step * 0.6);
      continue;
    }
    // Stuck: shake the near misses of this length until one comes apart.
    yield* shakeApart();
  }
}
