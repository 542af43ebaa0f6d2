import { createCells } from './cloth-cells';
import { createDescent } from './descent';
import { laidOf, meanBox, type Lay } from './laid';
import { createNearby, HIT } from './nearby';
import type { NoFitStore } from './no-fit-store';
import { createPairs } from './pairs';
import type { Task } from './task';

/** How many places a move looks at, in the choice that the piece has and in another one. */
export interface Effort {
  readonly anywhere: number;
  readonly nearby: number;
}

/** With more forms a table for every pair that a sample touches would take all the time. */
const FEW_FORMS = 400;

/**
 * The lay under search: where pieces lie, which of them overlap, and the move that takes one piece to a better place.
 */
export type Field = ReturnType<typeof createField>;

export function createField(task: Task, store: NoFitStore, random: () => number) {
  const n = task.items.length;
  const all = n + task.fixed.length;
  const { choiceForm, yardstick } = task;
  const sparing = task.forms.length > FEW_FORMS;

  const laid = laidOf(task);
  const { x, y, form, size, halfX, halfY } = laid;
  const choice = new Int32Array(n);
  const cells = createCells(laid, task.width, task.clearance, meanBox(task));
  const pairs = createPairs(n, size);
  const nearby = createNearby(laid, cells, pairs.weight, store, task.clearance, yardstick);
  const descent = createDescent(task, laid, nearby);
  const { box, found } = descent;
  /** The length of the strip. */
  const strip = new Float64Array(1);

  /** The two best samples of a move: x, y, loss, choice. */
  const kept = new Float64Array(8);

  function sample(i: number, c: number, px: number, py: number): void {
    const qx = descent.snapX(c, px);
    const qy = descent.snapY(c, py);
    if (qx !== qx || qy !== qy) return;
    nearby.gather(i, choiceForm[c]!, qx, qy, 0, 0, sparing);
    const value = nearby.weigh(qx, qy, kept[6]!);
    if (value >= kept[6]!) return;
    const at = value < kept[2]! ? 0 : 4;
    if (at === 0) {
      kept[4] = kept[0]!;
      kept[5] = kept[1]!;
      kept[6] = kept[2]!;
      kept[7] = kept[3]!;
    }
    kept[at] = qx;
    kept[at + 1] = qy;
    kept[at + 2] = value;
    kept[at + 3] = c;
  }

  function sampleChoice(i: number, c: number, effort: Effort): void {
    if (!descent.boxOf(c, strip[0]!)) return;
    const width = box[2]! - box[0]!;
    const height = box[3]! - box[1]!;
    const f = choiceForm[c]!;
    for (let s = 0; s < effort.anywhere; s++)
      sample(i, c, box[0]! + random() * width, box[1]! + random() * height);
    for (let s = 0; s < effort.nearby; s++)
      sample(i, c, x[i]! + (2 * random() - 1) * halfX[f]!, y[i]! + (2 * random() - 1) * halfY[f]!);
  }

  /**
   * Takes item i to the best place found for it: downhill from where it is, and from the best of some random places,
   * also in one other choice. True if it moved.
   */
  function move(i: number, effort: Effort): boolean {
    const own = choice[i]!;
    const { first, last } = task.items[i]!;
    descent.reachOut(i, form[i]!, x[i]!, y[i]!);
    const current = nearby.weigh(x[i]!, y[i]!, Infinity);
    if (current === 0) return false;
    let bestX = x[i]!;
    let bestY = y[i]!;
    let bestChoice = own;
    let best = current;
    if (descent.boxOf(own, strip[0]!)) {
      found[0] = bestX;
      found[1] = bestY;
      found[2] = current;
      descent.descend(i, own);
      bestX = found[0]!;
      bestY = found[1]!;
      best = found[2]!;
    }
    if (best > 0) {
      // Samples worse than twice the best are not worth a descent.
      kept[2] = kept[6] = 2 * best;
      sampleChoice(i, own, effort);
      if (last - first > 1) {
        let other = first + Math.floor(random() * (last - first - 1));
        if (other >= own) other++;
        sampleChoice(i, other, effort);
      }
      for (let k = 0; k < 8; k += 4) {
        const value = kept[k + 2]!;
        if (value >= 2 * best) continue;
        const c = kept[k + 3]!;
        descent.boxOf(c, strip[0]!);
        found[0] = kept[k]!;
        found[1] = kept[k + 1]!;
        found[2] = value;
        if (sparing) {
          nearby.gather(i, choiceForm[c]!, kept[k]!, kept[k + 1]!, 0, 0, false);
          found[2] = nearby.weigh(kept[k]!, kept[k + 1]!, Infinity);
        }
        descent.descend(i, c);
        if (found[2]! >= best) continue;
        best = found[2]!;
        bestX = found[0]!;
        bestY = found[1]!;
        bestChoice = c;
        if (best === 0) break;
      }
    }
    if (best >= current) return false;
    put(i, bestChoice, bestX, bestY);
    return true;
  }

  /** Lays item i there and works out its overlaps anew. */
  function put(i: number, c: number, px: number, py: number): void {
    cells.leave(i);
    choice[i] = c;
    form[i] = choiceForm[c]!;
    x[i] = px;
    y[i] = py;
    cells.enter(i);
    pairs.clearRow(i);
    judge(i, false);
  }

  /** Notes the overlaps of item i, with `lowerOnly` those with items before it and with what is fixed. */
  function judge(i: number, lowerOnly: boolean): void {
    nearby.gather(i, form[i]!, x[i]!, y[i]!, 0, 0, false);
    nearby.inspect(x[i]!, y[i]!);
    const { count, item, data } = nearby.hits;
    for (let h = 0; h < count; h++) {
      const j = item[h]!;
      if (lowerOnly && j > i && j < n) continue;
      pairs.note(i, j, (data[h * HIT]! * size[i]! * size[j]!) / yardstick);
    }
  }

  const placedX = new Float64Array(n);
  const placedY = new Float64Array(n);

  /**
   * Lays everything as in `lay`, each piece moved into the strip and onto its lattice, and works out all overlaps.
   * False, with nothing changed, if the length leaves some piece no place.
   */
  function load(lay: Lay): boolean {
    for (let i = 0; i < n; i++) {
      const c = lay.choice[i]!;
      if (!descent.boxOf(c, lay.length)) return false;
      const px = descent.snapX(c, lay.x[i]!);
      const py = descent.snapY(c, lay.y[i]!);
      if (px !== px || py !== py) return false;
      placedX[i] = px;
      placedY[i] = py;
    }
    strip[0] = lay.length;
    cells.clear(lay.length);
    for (let i = 0; i < n; i++) {
      x[i] = placedX[i]!;
      y[i] = placedY[i]!;
      choice[i] = lay.choice[i]!;
      form[i] = choiceForm[choice[i]!]!;
    }
    for (let j = 0; j < all; j++) cells.enter(j);
    pairs.clear();
    for (let i = 0; i < n; i++) judge(i, true);
    return true;
  }

  function save(lay: Lay): void {
    lay.x.set(x.subarray(0, n));
    lay.y.set(y.subarray(0, n));
    lay.choice.set(choice);
    lay.length = strip[0]!;
  }

  /** The greatest x of any item. */
  function extent(): number {
    let most = task.lockedTo;
    for (let i = 0; i < n; i++) most = Math.max(most, x[i]! + halfX[form[i]!]!);
    return most;
  }

  return {
    count: n,
    pairs,
    move,
    load,
    save,
    extent,
    /** Positions looked at since the start. */
    looked: nearby.looked,
    length: () => strip[0]!
  };
}
