import type { Laid } from './laid';
import { HIT, type Nearby } from './nearby';
import type { Task } from './task';

/** How many lines a descent remembers. */
const LINES = 16;
const STEPS = 8;

/**
 * From a place downhill to the least loss around it, inside the strip and on the lattice of the piece.
 */
export type Descent = ReturnType<typeof createDescent>;

export function createDescent(task: Task, laid: Laid, nearby: Nearby) {
  const { choiceForm, sizeX, sizeY, phaseX, phaseY, low, high, yardstick } = task;
  const { halfX, halfY } = laid;
  /** Where the centre of a piece may be: left, low, right, high. */
  const box = new Float64Array(4);
  /** The place to begin with, and the best one found: x, y, loss. */
  const found = new Float64Array(3);
  const line = new Float64Array(LINES * 3);

  /** Sets the box of choice c on a strip of `length`; false if there is none. */
  function boxOf(c: number, length: number): boolean {
    const f = choiceForm[c]!;
    box[0] = halfX[f]!;
    box[1] = low[c]!;
    box[2] = length - halfX[f]!;
    box[3] = high[c]!;
    return box[2]! >= box[0]!;
  }

  /** The x that choice c may take nearest to v, in its box and on its lattice; NaN if there is none. */
  const snapX = (c: number, v: number) => onLattice(v, phaseX[c]!, sizeX[c]!, box[0]!, box[2]!);
  const snapY = (c: number, v: number) => onLattice(v, phaseY[c]!, sizeY[c]!, box[1]!, box[3]!);

  /** Lists the neighbours that the next steps may meet. */
  function reachOut(i: number, f: number, px: number, py: number): void {
    nearby.gather(i, f, px, py, halfX[f]! * 0.4, halfY[f]! * 0.4, false);
  }

  function tryPlace(i: number, c: number, px: number, py: number): void {
    const qx = snapX(c, px);
    const qy = snapY(c, py);
    if (qx !== qx || qy !== qy) return;
    if (!nearby.covers(qx, qy)) reachOut(i, choiceForm[c]!, qx, qy);
    const value = nearby.weigh(qx, qy, found[2]!);
    if (value < found[2]!) {
      found[0] = qx;
      found[1] = qy;
      found[2] = value;
    }
  }

  /**
   * From `found` downhill. The least loss around lies where borders of no-fit regions cross each other or the
   * box, so those places are tried: out of each overlap by the shortest way, where two of the borders met so
   * far cross, and where they cross the box.
   */
  function descend(i: number, c: number): void {
    const f = choiceForm[c]!;
    const reach = 0.5 * (halfX[f]! + halfY[f]!);
    let lines = 0;
    const latticed = sizeX[c]! > 0 || sizeY[c]! > 0;
    reachOut(i, f, found[0]!, found[1]!);
    for (let step = 0; step < STEPS; step++) {
      const px = found[0]!;
      const py = found[1]!;
      if (!nearby.covers(px, py)) reachOut(i, f, px, py);
      nearby.inspect(px, py);
      const count = nearby.hits.count;
      const hit = nearby.hits.data;
      if (count === 0) {
        found[2] = 0;
        return;
      }
      const before = found[2]!;
      const fresh = lines;
      let deepest = 0;
      for (let h = 0; h < count; h++) {
        const nx = hit[h * HIT + 3]!;
        const ny = hit[h * HIT + 4]!;
        const k = hit[h * HIT + 5]!;
        if (hit[h * HIT]! > deepest) deepest = hit[h * HIT]!;
        let known = false;
        for (let l = 0; l < lines && !known; l++)
          known =
            Math.abs(line[l * 3]! - nx) + Math.abs(line[l * 3 + 1]! - ny) < 1e-9 &&
            Math.abs(line[l * 3 + 2]! - k) < 1e-3;
        if (known || lines === LINES) continue;
        line[lines * 3] = nx;
        line[lines * 3 + 1] = ny;
        line[lines * 3 + 2] = k;
        lines++;
      }
      const far = Math.min(reach, 4 * deepest + 1e-3 * yardstick);
      for (let h = 0; h < count && h < 8; h++) {
        const qx = hit[h * HIT + 1]!;
        const qy = hit[h * HIT + 2]!;
        tryPlace(i, c, qx, qy);
        if (latticed) {
          if (sizeX[c]! > 0) {
            tryPlace(i, c, qx - 0.5 * sizeX[c]!, qy);
            tryPlace(i, c, qx + 0.5 * sizeX[c]!, qy);
          }
          if (sizeY[c]! > 0) {
            tryPlace(i, c, qx, qy - 0.5 * sizeY[c]!);
            tryPlace(i, c, qx, qy + 0.5 * sizeY[c]!);
          }
        }
        if (found[2]! === 0) return;
      }
      for (let a = fresh; a < lines; a++) {
        const ax = line[a * 3]!;
        const ay = line[a * 3 + 1]!;
        const ak = line[a * 3 + 2]!;
        for (let b = 0; b < a; b++) {
          const bx = line[b * 3]!;
          const by = line[b * 3 + 1]!;
          const across = ax * by - ay * bx;
          if (across < 1e-4 && across > -1e-4) continue;
          const bk = line[b * 3 + 2]!;
          const qx = (ak * by - bk * ay) / across;
          const qy = (ax * bk - bx * ak) / across;
          if (Math.abs(qx - px) > far || Math.abs(qy - py) > far) continue;
          tryPlace(i, c, qx, qy);
          if (found[2]! === 0) return;
        }
        // Where the line crosses the sides of the box, or the lines of the lattice through this place.
        if (ay > 1e-6 || ay < -1e-6) {
          const onLeft = sizeX[c]! > 0 ? px : box[0]!;
          const onRight = sizeX[c]! > 0 ? px : box[2]!;
          if (px - onLeft < far) tryPlace(i, c, onLeft, (ak - ax * onLeft) / ay);
          if (onRight - px < far) tryPlace(i, c, onRight, (ak - ax * onRight) / ay);
        }
        if (ax > 1e-6 || ax < -1e-6) {
          const onLow = sizeY[c]! > 0 ? py : box[1]!;
          const onHigh = sizeY[c]! > 0 ? py : box[3]!;
          if (py - onLow < far) tryPlace(i, c, (ak - ay * onLow) / ax, onLow);
          if (onHigh - py < far) tryPlace(i, c, (ak - ay * onHigh) / ax, onHigh);
        }
        if (found[2]! === 0) return;
      }
      if (!(found[2]! < before * (1 - 1e-6))) return;
    }
  }

  return { boxOf, snapX, snapY, descend, reachOut, found, box };
}

/** The place of the lattice nearest to v within low … high; NaN if there is none. */
function onLattice(v: number, phase: number, step: number, low: number, high: number): number {
  if (step === 0) return v < low ? low : v > high ? high : v;
  let k = Math.round((v - phase) / step);
  const least = Math.ceil((low - phase) / step - 1e-9);
  const most = Math.floor((high - phase) / step + 1e-9);
  if (least > most) return NaN;
  k = k < least ? least : k > most ? most : k;
  return phase + k * step;
}
