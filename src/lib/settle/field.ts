import type { NoFitStore } from './no-fit-store';
import { CELL_INSIDE, CELL_OUTSIDE, EDGE, HEAD, insideAtCorner, SIZES } from './no-fit-table';
import type { Task } from './task';

/** Where every item lies, to be kept and gone back to. */
export interface Lay {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly choice: Int32Array;
  length: number;
}

export function emptyLay(count: number): Lay {
  return { x: new Float64Array(count), y: new Float64Array(count), choice: new Int32Array(count), length: 0 };
}

export function copyLay(from: Lay, to: Lay): void {
  to.x.set(from.x);
  to.y.set(from.y);
  to.choice.set(from.choice);
  to.length = from.length;
}

/** How many lines a descent remembers. */
const LINES = 16;
/** How many neighbours one list holds at first. */
const NEAR = 64;
/** An overlap of less than so many quanta is none: the no-fit borders themselves are rounded to one. */
const TOUCH = 0.05;
const STEPS = 8;
/** Stands for the table of a neighbour that has none yet. */
const ROUGH = -1;

/** How many places a move looks at, in the choice that the piece has and in another one. */
export interface Effort {
  anywhere: number;
  nearby: number;
}

/**
 * The lay under search: where pieces lie, which pairs overlap and how badly, and the move that takes one piece to
 * a better place. Overlap is penetration depth (the shortest way apart) × the fourth root of both areas, after
 * Imamichi, Yagiura and Nagamochi 2009; the weight of a pair grows while it goes on overlapping (guided local
 * search, Umetani et al. 2009, Gardeyn, Vanden Berghe and Wauters 2025).
 *
 * Everything is in flat arrays and nothing is allocated while it runs.
 */
export type Field = ReturnType<typeof createField>;

export function createField(task: Task, store: NoFitStore, random: () => number) {
  const n = task.items.length;
  const all = n + task.fixed.length;
  const { choiceForm, sizeX, sizeY, phaseX, phaseY, onFold, forms } = task;
  const { tables } = store;
  const unit = task.yardstick;

  const x = new Float64Array(all);
  const y = new Float64Array(all);
  const form = new Int32Array(all);
  const choice = new Int32Array(n);
  const size = new Float64Array(all);
  const halfX = Float64Array.from(forms, (f) => f.hx);
  const halfY = Float64Array.from(forms, (f) => f.hy);
  const gap = task.clearance;
  task.items.forEach((item, i) => {
    size[i] = Math.sqrt(Math.sqrt(forms[choiceForm[item.first]!]!.area) / unit);
  });
  task.fixed.forEach((fixed, k) => {
    x[n + k] = fixed.x;
    y[n + k] = fixed.y;
    form[n + k] = fixed.form;
    size[n + k] = Math.max(1, Math.min(2, Math.sqrt(Math.sqrt(forms[fixed.form]!.area) / unit)));
  });

  // Pairs: row i, column j. Loss and weight of pairs of items stand in both rows.
  const loss = new Float32Array(n * all);
  const weight = new Float32Array(n * all).fill(1);
  const overlaps = new Int32Array(n);
  let heavy = new Int32Array(1024);
  let heavyCount = 0;
  /** length, total loss, colliding pairs, positions looked at. */
  const state = new Float64Array(4);
  const LENGTH = 0;
  const PAIRS = 2;
  const LOOKED = 3;

  // ---- Which items lie in which cell of the cloth.
  let meanX = 0;
  let meanY = 0;
  for (let i = 0; i < n; i++) {
    meanX += 2 * halfX[choiceForm[task.items[i]!.first]!]!;
    meanY += 2 * halfY[choiceForm[task.items[i]!.first]!]!;
  }
  const columnWidth = Math.max(1, (0.75 * meanX) / Math.max(1, n));
  const rows = Math.max(
    1,
    Math.min(64, Math.round(task.width / Math.max(1, (0.75 * meanY) / Math.max(1, n))))
  );
  const rowHeight = task.width / rows;
  let columns = 0;
  let room = 12;
  let cellItems = new Int32Array(0);
  let cellCount = new Int32Array(0);
  const stamp = new Int32Array(all);
  let stamped = 0;

  const column = (v: number) => {
    const c = Math.floor(v / columnWidth);
    return c < 0 ? 0 : c >= columns ? columns - 1 : c;
  };
  const row = (v: number) => {
    const r = Math.floor(v / rowHeight);
    return r < 0 ? 0 : r >= rows ? rows - 1 : r;
  };

  function enter(i: number): void {
    const hx = halfX[form[i]!]! + gap;
    const hy = halfY[form[i]!]! + gap;
    const c1 = column(x[i]! + hx);
    const r0 = row(y[i]! - hy);
    const r1 = row(y[i]! + hy);
    for (let c = column(x[i]! - hx); c <= c1; c++)
      for (let r = r0; r <= r1; r++) {
        const cell = c * rows + r;
        if (cellCount[cell]! === room) widenCells();
        cellItems[cell * room + cellCount[cell]!] = i;
        cellCount[cell]!++;
      }
  }

  function leave(i: number): void {
    const hx = halfX[form[i]!]! + gap;
    const hy = halfY[form[i]!]! + gap;
    const c1 = column(x[i]! + hx);
    const r0 = row(y[i]! - hy);
    const r1 = row(y[i]! + hy);
    for (let c = column(x[i]! - hx); c <= c1; c++)
      for (let r = r0; r <= r1; r++) {
        const cell = c * rows + r;
        const base = cell * room;
        const last = --cellCount[cell]!;
        let k = base;
        while (cellItems[k] !== i) k++;
        cellItems[k] = cellItems[base + last]!;
      }
  }

  function widenCells(): void {
    const old = cellItems;
    const oldRoom = room;
    room *= 2;
    cellItems = new Int32Array(columns * rows * room);
    for (let cell = 0; cell < columns * rows; cell++)
      for (let k = 0; k < cellCount[cell]!; k++) cellItems[cell * room + k] = old[cell * oldRoom + k]!;
  }

  // ---- The neighbours of one place, side by side.
  let capacity = NEAR;
  let nearItem = new Int32Array(NEAR);
  let nearTable = new Int32Array(NEAR);
  /** Per neighbour: x, y, sign, weight, box x0, y0, x1, y1, cells per unit x, y. */
  const NW = 10;
  let near = new Float64Array(NEAR * NW);
  let nearCount = 0;
  /** The part of the cloth for which the list is complete: centres from x0, y0 to x1, y1. */
  const region = new Float64Array(4);

  /** With so many forms a table for every pair that a sample touches would take all the time. */
  const sparing = forms.length > 400;

  function gather(
    i: number,
    f: number,
    px: number,
    py: number,
    reachX: number,
    reachY: number,
    roughly = false
  ): void {
    const hx = halfX[f]! + gap;
    const hy = halfY[f]! + gap;
    const left = px - reachX - hx;
    const right = px + reachX + hx;
    const low = py - reachY - hy;
    const high = py + reachY + hy;
    region[0] = px - reachX;
    region[1] = py - reachY;
    region[2] = px + reachX;
    region[3] = py + reachY;
    if (stamped === 0x7fffffff) {
      stamp.fill(0);
      stamped = 0;
    }
    const mark = ++stamped;
    stamp[i] = mark;
    nearCount = 0;
    const c1 = column(right);
    const r0 = row(low);
    const r1 = row(high);
    for (let c = column(left); c <= c1; c++)
      for (let r = r0; r <= r1; r++) {
        const cell = c * rows + r;
        const base = cell * room;
        const end = base + cellCount[cell]!;
        for (let k = base; k < end; k++) {
          const j = cellItems[k]!;
          if (stamp[j] === mark) continue;
          stamp[j] = mark;
          const g = form[j]!;
          const jx = x[j]!;
          const jy = y[j]!;
          if (
            jx - halfX[g]! >= right ||
            jx + halfX[g]! <= left ||
            jy - halfY[g]! >= high ||
            jy + halfY[g]! <= low
          )
            continue;
          addNear(i, j, f, g, roughly);
        }
      }
  }

  function addNear(i: number, j: number, f: number, g: number, roughly: boolean): void {
    const k = nearCount++;
    if (k === capacity) widenNear();
    const word = roughly ? store.known(g, f) : store.find(g, f);
    if (word < 0) {
      addRough(k, i, j, f, g);
      return;
    }
    const id = word >> 1;
    nearItem[k] = j;
    nearTable[k] = id;
    const a = k * NW;
    const h = id * HEAD;
    const { head } = tables;
    near[a] = x[j]!;
    near[a + 1] = y[j]!;
    near[a + 2] = word & 1 ? -1 : 1;
    near[a + 3] = (weight[i * all + j]! * size[i]! * size[j]!) / unit;
    near[a + 4] = head[h]!;
    near[a + 5] = head[h + 1]!;
    near[a + 6] = head[h + 2]!;
    near[a + 7] = head[h + 3]!;
    near[a + 8] = head[h + 4]!;
    near[a + 9] = head[h + 5]!;
  }

  /** A neighbour whose no-fit table does not stand yet, taken for an ellipse in its box. */
  function addRough(k: number, i: number, j: number, f: number, g: number): void {
    const a = k * NW;
    const w = halfX[f]! + halfX[g]! + gap;
    const h = halfY[f]! + halfY[g]! + gap;
    nearItem[k] = j;
    nearTable[k] = ROUGH;
    near[a] = x[j]!;
    near[a + 1] = y[j]!;
    near[a + 2] = 1;
    near[a + 3] = (weight[i * all + j]! * size[i]! * size[j]!) / unit;
    near[a + 4] = -w;
    near[a + 5] = -h;
    near[a + 6] = w;
    near[a + 7] = h;
  }

  function widenNear(): void {
    capacity *= 2;
    const items = new Int32Array(capacity);
    items.set(nearItem);
    nearItem = items;
    const ids = new Int32Array(capacity);
    ids.set(nearTable);
    nearTable = ids;
    const wide = new Float64Array(capacity * NW);
    wide.set(near);
    near = wide;
  }

  /**
   * The weighted loss of the item at (px, py) against the neighbours in the list, as far as `bound`. Keeps what
   * each overlap looks like if `hits` is asked for.
   */
  let hitCount = 0;
  let hitItem = new Int32Array(NEAR);
  /** Per overlap: depth, border place x, y, normal x, y, line constant, weight. */
  const HW = 6;
  let hit = new Float64Array(NEAR * HW);

  function weigh(px: number, py: number, bound: number): number {
    state[LOOKED]!++;
    const { sizes, edges } = tables;
    const info = near;
    const ids = nearTable;
    const count = nearCount;
    let sum = 0;
    for (let k = 0; k < count; k++) {
      const a = k * NW;
      const sign = info[a + 2]!;
      const dx = (px - info[a]!) * sign;
      const x0 = info[a + 4]!;
      if (dx <= x0 || dx >= info[a + 6]!) continue;
      const dy = (py - info[a + 1]!) * sign;
      const y0 = info[a + 5]!;
      if (dy <= y0 || dy >= info[a + 7]!) continue;
      const id = ids[k]!;
      if (id === ROUGH) {
        const u = dx / x0;
        const v = dy / y0;
        const within = 1 - Math.sqrt(u * u + v * v);
        if (within > 0) sum -= within * (x0 > y0 ? x0 : y0) * info[a + 3]!;
        if (sum >= bound) return sum;
        continue;
      }
      const s = id * SIZES;
      const cell =
        sizes[s + 2]! + (((dx - x0) * info[a + 8]!) | 0) + sizes[s + 3]! * (((dy - y0) * info[a + 9]!) | 0);
      let word = tables.cells[cell]!;
      if (word === 0) word = tables.fill(id, cell);
      const kind = word & 3;
      if (kind === CELL_OUTSIDE) continue;
      const lists = tables.lists;
      const start = word >> 2;
      const end = start + lists[start]!;
      const first = sizes[s]!;
      let nearest = Infinity;
      let edge = 0;
      let where = 0;
      for (let l = start + 1; l <= end; l++) {
        const b = (first + lists[l]!) * EDGE;
        const ex = dx - edges[b]!;
        const ey = dy - edges[b + 1]!;
        const ux = edges[b + 2]!;
        const uy = edges[b + 3]!;
        let t = (ex * ux + ey * uy) * edges[b + 4]!;
        const at = t < 0 ? 1 : t > 1 ? 2 : 0;
        t = t < 0 ? 0 : t > 1 ? 1 : t;
        const ox = ex - t * ux;
        const oy = ey - t * uy;
        const d = ox * ox + oy * oy;
        if (d < nearest) {
          nearest = d;
          edge = b;
          where = at;
        }
      }
      if (kind !== CELL_INSIDE) {
        if (where === 0) {
          if ((dx - edges[edge]!) * edges[edge + 5]! + (dy - edges[edge + 1]!) * edges[edge + 6]! >= 0)
            continue;
        } else if (!insideAtCorner(edges, edge, where, first, sizes[s + 1]!, dx, dy)) continue;
      }
      const depth = Math.sqrt(nearest);
      if (depth < TOUCH) continue;
      sum += depth * info[a + 3]!;
      if (sum >= bound) return sum;
    }
    return sum;
  }

  /** As `weigh`, and keeps every overlap: its depth and the line of the border that is nearest. */
  function inspect(px: number, py: number): number {
    const { sizes, edges } = tables;
    let sum = 0;
    hitCount = 0;
    for (let k = 0; k < nearCount; k++) {
      const a = k * NW;
      const sign = near[a + 2]!;
      const dx = (px - near[a]!) * sign;
      const dy = (py - near[a + 1]!) * sign;
      if (dx <= near[a + 4]! || dx >= near[a + 6]! || dy <= near[a + 5]! || dy >= near[a + 7]!) continue;
      const id = nearTable[k]!;
      const s = id * SIZES;
      const cell =
        sizes[s + 2]! +
        (((dx - near[a + 4]!) * near[a + 8]!) | 0) +
        sizes[s + 3]! * (((dy - near[a + 5]!) * near[a + 9]!) | 0);
      let word = tables.cells[cell]!;
      if (word === 0) word = tables.fill(id, cell);
      if ((word & 3) === CELL_OUTSIDE) continue;
      const lists = tables.lists;
      const start = word >> 2;
      const end = start + lists[start]!;
      const first = sizes[s]!;
      let nearest = Infinity;
      let edge = 0;
      let where = 0;
      let toX = 0;
      let toY = 0;
      for (let l = start + 1; l <= end; l++) {
        const b = (first + lists[l]!) * EDGE;
        const ex = dx - edges[b]!;
        const ey = dy - edges[b + 1]!;
        const ux = edges[b + 2]!;
        const uy = edges[b + 3]!;
        let t = (ex * ux + ey * uy) * edges[b + 4]!;
        const at = t < 0 ? 1 : t > 1 ? 2 : 0;
        t = t < 0 ? 0 : t > 1 ? 1 : t;
        const ox = ex - t * ux;
        const oy = ey - t * uy;
        const d = ox * ox + oy * oy;
        if (d < nearest) {
          nearest = d;
          edge = b;
          where = at;
          toX = -ox;
          toY = -oy;
        }
      }
      if ((word & 3) !== CELL_INSIDE) {
        if (where === 0) {
          if ((dx - edges[edge]!) * edges[edge + 5]! + (dy - edges[edge + 1]!) * edges[edge + 6]! >= 0)
            continue;
        } else if (!insideAtCorner(edges, edge, where, first, sizes[s + 1]!, dx, dy)) continue;
      }
      const depth = Math.sqrt(nearest);
      if (depth < TOUCH) continue;
      if (hitCount * HW >= hit.length) widenHits();
      const h = hitCount * HW;
      hitItem[hitCount++] = nearItem[k]!;
      hit[h] = depth;
      hit[h + 1] = px + toX * sign;
      hit[h + 2] = py + toY * sign;
      const nx = edges[edge + 5]! * sign;
      const ny = edges[edge + 6]! * sign;
      hit[h + 3] = nx;
      hit[h + 4] = ny;
      hit[h + 5] = nx * (near[a]! + edges[edge]! * sign) + ny * (near[a + 1]! + edges[edge + 1]! * sign);
      sum += depth * near[a + 3]!;
    }
    return sum;
  }

  function widenHits(): void {
    const items = new Int32Array(hitItem.length * 2);
    items.set(hitItem);
    hitItem = items;
    const wide = new Float64Array(hit.length * 2);
    wide.set(hit);
    hit = wide;
  }

  // ---- The box of a choice: left, low, right, high.
  const box = new Float64Array(4);
  function boxOf(c: number): boolean {
    const f = choiceForm[c]!;
    box[0] = halfX[f]!;
    box[1] = halfY[f]!;
    box[2] = state[LENGTH]! - halfX[f]!;
    box[3] = onFold[c] ? halfY[f]! : task.width - halfY[f]!;
    return box[2]! >= box[0]!;
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

  /** Best place found by a descent: x, y, value. */
  const found = new Float64Array(3);
  const line = new Float64Array(LINES * 3);

  /** The value of (px, py), from the list if it covers the place. */
  function look(i: number, f: number, px: number, py: number, bound: number): number {
    if (px < region[0]! || px > region[2]! || py < region[1]! || py > region[3]!)
      gather(i, f, px, py, halfX[f]! * 0.4, halfY[f]! * 0.4);
    return weigh(px, py, bound);
  }

  function tryPlace(i: number, c: number, px: number, py: number): void {
    const qx = onLattice(px, phaseX[c]!, sizeX[c]!, box[0]!, box[2]!);
    const qy = onLattice(py, phaseY[c]!, sizeY[c]!, box[1]!, box[3]!);
    if (qx !== qx || qy !== qy) return;
    const value = look(i, choiceForm[c]!, qx, qy, found[2]!);
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
    gather(i, f, found[0]!, found[1]!, halfX[f]! * 0.4, halfY[f]! * 0.4);
    for (let step = 0; step < STEPS; step++) {
      const px = found[0]!;
      const py = found[1]!;
      if (px < region[0]! || px > region[2]! || py < region[1]! || py > region[3]!)
        gather(i, f, px, py, halfX[f]! * 0.4, halfY[f]! * 0.4);
      inspect(px, py);
      const hits = hitCount;
      if (hits === 0) {
        found[2] = 0;
        return;
      }
      const before = found[2]!;
      const fresh = lines;
      let deepest = 0;
      for (let h = 0; h < hits; h++) {
        const nx = hit[h * HW + 3]!;
        const ny = hit[h * HW + 4]!;
        const k = hit[h * HW + 5]!;
        if (hit[h * HW]! > deepest) deepest = hit[h * HW]!;
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
      const far = Math.min(reach, 4 * deepest + 1e-3 * unit);
      for (let h = 0; h < hits && h < 8; h++) {
        const qx = hit[h * HW + 1]!;
        const qy = hit[h * HW + 2]!;
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

  /** The two best samples of a move: x, y, value, choice. */
  const kept = new Float64Array(8);

  function sample(i: number, c: number, px: number, py: number): void {
    const qx = onLattice(px, phaseX[c]!, sizeX[c]!, box[0]!, box[2]!);
    const qy = onLattice(py, phaseY[c]!, sizeY[c]!, box[1]!, box[3]!);
    if (qx !== qx || qy !== qy) return;
    gather(i, choiceForm[c]!, qx, qy, 0, 0, sparing);
    const value = weigh(qx, qy, kept[6]!);
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
    if (!boxOf(c)) return;
    const width = box[2]! - box[0]!;
    const height = box[3]! - box[1]!;
    const f = choiceForm[c]!;
    for (let s = 0; s < effort.anywhere; s++)
      sample(i, c, box[0]! + random() * width, box[1]! + random() * height);
    for (let s = 0; s < effort.nearby; s++)
      sample(i, c, x[i]! + (2 * random() - 1) * halfX[f]!, y[i]! + (2 * random() - 1) * halfY[f]!);
  }

  /** Takes item i to the best place found for it; true if it moved. */
  function move(i: number, effort: Effort): boolean {
    const own = choice[i]!;
    const { first, last } = task.items[i]!;
    gather(i, form[i]!, x[i]!, y[i]!, halfX[form[i]!]! * 0.4, halfY[form[i]!]! * 0.4);
    const current = weigh(x[i]!, y[i]!, Infinity);
    if (current === 0) return false;
    let bestX = x[i]!;
    let bestY = y[i]!;
    let bestChoice = own;
    let best = current;
    if (boxOf(own)) {
      found[0] = bestX;
      found[1] = bestY;
      found[2] = current;
      descend(i, own);
      bestX = found[0]!;
      bestY = found[1]!;
      best = found[2]!;
    }
    if (best > 0) {
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
        boxOf(c);
        found[0] = kept[k]!;
        found[1] = kept[k + 1]!;
        found[2] = value;
        if (sparing) {
          gather(i, choiceForm[c]!, kept[k]!, kept[k + 1]!, 0, 0);
          found[2] = weigh(kept[k]!, kept[k + 1]!, Infinity);
        }
        descend(i, c);
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
    leave(i);
    choice[i] = c;
    form[i] = choiceForm[c]!;
    x[i] = px;
    y[i] = py;
    enter(i);
    clearRow(i);
    judge(i, false);
  }

  function clearRow(i: number): void {
    if (overlaps[i] === 0) return;
    const base = i * all;
    for (let j = 0; j < all; j++) {
      if (loss[base + j] === 0) continue;
      loss[base + j] = 0;
      state[PAIRS]!--;
      if (j < n) {
        loss[j * all + i] = 0;
        overlaps[j]!--;
      }
    }
    overlaps[i] = 0;
  }

  /** Notes the overlaps of item i, with `lowerOnly` those with items before it and with what is fixed. */
  function judge(i: number, lowerOnly: boolean): void {
    gather(i, form[i]!, x[i]!, y[i]!, 0, 0);
    inspect(x[i]!, y[i]!);
    for (let h = 0; h < hitCount; h++) {
      const j = hitItem[h]!;
      if (lowerOnly && j > i && j < n) continue;
      const value = (hit[h * HW]! * size[i]! * size[j]!) / unit;
      loss[i * all + j] = value;
      overlaps[i]!++;
      state[PAIRS]!++;
      if (j < n) {
        loss[j * all + i] = value;
        overlaps[j]!++;
      }
    }
  }

  /**
   * Lays everything as in `lay`, each piece moved into the strip and onto its lattice, and works out all overlaps.
   * False, with nothing changed, if the length leaves some piece no place.
   */
  function load(lay: Lay): boolean {
    const former = state[LENGTH]!;
    state[LENGTH] = lay.length;
    for (let i = 0; i < n; i++) {
      const c = lay.choice[i]!;
      const fits = boxOf(c);
      placedX[i] = onLattice(lay.x[i]!, phaseX[c]!, sizeX[c]!, box[0]!, box[2]!);
      placedY[i] = onLattice(lay.y[i]!, phaseY[c]!, sizeY[c]!, box[1]!, box[3]!);
      if (fits && placedX[i] === placedX[i] && placedY[i] === placedY[i]) continue;
      state[LENGTH] = former;
      return false;
    }
    const needed = Math.max(1, Math.ceil(lay.length / columnWidth));
    if (needed > columns) {
      columns = needed + 4;
      cellItems = new Int32Array(columns * rows * room);
      cellCount = new Int32Array(columns * rows);
    } else cellCount.fill(0);
    for (let i = 0; i < n; i++) {
      x[i] = placedX[i]!;
      y[i] = placedY[i]!;
      choice[i] = lay.choice[i]!;
      form[i] = choiceForm[choice[i]!]!;
    }
    for (let j = 0; j < all; j++) enter(j);
    for (let i = 0; i < n; i++) if (overlaps[i]! > 0) loss.fill(0, i * all, (i + 1) * all);
    overlaps.fill(0);
    state[PAIRS] = 0;
    for (let i = 0; i < n; i++) judge(i, true);
    return true;
  }
  const placedX = new Float64Array(n);
  const placedY = new Float64Array(n);

  function save(lay: Lay): void {
    for (let i = 0; i < n; i++) {
      lay.x[i] = x[i]!;
      lay.y[i] = y[i]!;
      lay.choice[i] = choice[i]!;
    }
    lay.length = state[LENGTH]!;
  }

  /** The greatest x of any item. */
  function extent(): number {
    let most = task.lockedTo;
    for (let i = 0; i < n; i++) most = Math.max(most, x[i]! + halfX[form[i]!]!);
    return most;
  }

  function totalLoss(): number {
    let total = 0;
    for (let i = 0; i < n; i++) {
      if (overlaps[i] === 0) continue;
      const base = i * all;
      for (let j = 0; j < i; j++) total += loss[base + j]!;
      for (let j = n; j < all; j++) total += loss[base + j]!;
    }
    return total;
  }

  /** The overlapping pair with the greatest loss: item, other, loss; −1 if there is none. */
  function worstPair(): { i: number; j: number; loss: number } {
    const worst = { i: -1, j: -1, loss: 0 };
    for (let i = 0; i < n; i++) {
      if (overlaps[i] === 0) continue;
      for (let j = 0; j < all; j++) {
        if (loss[i * all + j]! <= worst.loss) continue;
        worst.loss = loss[i * all + j]!;
        worst.i = i;
        worst.j = j;
      }
    }
    return worst;
  }

  /** The greatest depth, in quanta, to which item i overlaps another. */
  function deepest(i: number): number {
    let most = 0;
    for (let j = 0; j < all; j++) {
      const value = loss[i * all + j]!;
      if (value > 0) most = Math.max(most, (value * unit) / (size[i]! * size[j]!));
    }
    return most;
  }

  function resetWeights(): void {
    for (let k = 0; k < heavyCount; k++) {
      const pair = heavy[k]!;
      weight[pair] = 1;
      const i = Math.floor(pair / all);
      const j = pair % all;
      if (j < n) weight[j * all + i] = 1;
    }
    heavyCount = 0;
  }

  /** Raises the weight of every pair that overlaps, most for the deepest, and lets the others sink back to 1. */
  function reweigh(): void {
    let most = 0;
    for (let i = 0; i < n; i++) {
      if (overlaps[i] === 0) continue;
      const base = i * all;
      for (let j = 0; j < all; j++) if (loss[base + j]! > most) most = loss[base + j]!;
    }
    if (most === 0) return;
    let left = 0;
    for (let k = 0; k < heavyCount; k++) {
      const pair = heavy[k]!;
      if (loss[pair]! > 0) {
        heavy[left++] = pair;
        continue;
      }
      const value = Math.max(1, weight[pair]! * 0.95);
      setWeight(pair, value);
      if (value > 1) heavy[left++] = pair;
    }
    heavyCount = left;
    for (let i = 0; i < n; i++) {
      if (overlaps[i] === 0) continue;
      const base = i * all;
      for (let j = 0; j < all; j++) {
        const value = loss[base + j]!;
        if (value === 0 || (j < i && j < n)) continue;
        const pair = base + j;
        if (weight[pair] === 1) {
          if (heavyCount === heavy.length) {
            const wide = new Int32Array(heavy.length * 2);
            wide.set(heavy);
            heavy = wide;
          }
          heavy[heavyCount++] = pair;
        }
        setWeight(pair, Math.min(1e12, weight[pair]! * (1.2 + (0.8 * value) / most)));
      }
    }
  }

  function setWeight(pair: number, value: number): void {
    weight[pair] = value;
    const i = Math.floor(pair / all);
    const j = pair % all;
    if (j < n) weight[j * all + i] = value;
  }

  return {
    count: n,
    x,
    y,
    choice,
    overlaps,
    move,
    put,
    load,
    save,
    extent,
    totalLoss,
    worstPair,
    deepest,
    reweigh,
    resetWeights,
    /** Loss of the pair (i, j), unweighted, in yardsticks. */
    lossOf: (i: number, j: number) => loss[i * all + j]!,
    /** How many pairs overlap. */
    pairs: () => state[PAIRS]!,
    /** Positions looked at since the start. */
    looked: () => state[LOOKED]!,
    length: () => state[LENGTH]!
  };
}
