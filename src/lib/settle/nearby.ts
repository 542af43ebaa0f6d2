import type { ClothCells } from './cloth-cells';
import type { Laid } from './laid';
import type { NoFitStore } from './no-fit-store';
import { CELL_INSIDE, CELL_OUTSIDE, EDGE, HEAD, insideAtCorner, SIZES } from './no-fit-table';

/** How many neighbours one list holds at first. */
const NEAR = 64;
/** Numbers kept per neighbour: x, y, sign, weight, box x0, y0, x1, y1, cells per unit x, y. */
const NW = 10;
/** Numbers kept per overlap: depth; the nearest place of the border x, y; normal x, y and constant of its line. */
export const HIT = 6;
/** An overlap of less than so many quanta is none: the no-fit borders themselves are rounded to one. */
const TOUCH = 0.05;
/** Stands for the table of a neighbour that has none yet. */
const ROUGH = -1;

/**
 * The pieces around one place, side by side in flat arrays, and what a piece that lay there would lose: the depth of
 * each overlap (the shortest way apart, after Imamichi, Yagiura and Nagamochi 2009) × the fourth root of both areas × the
 * weight of the pair.
 *
 * This is where the search spends its time. Nothing is allocated once the lists are long enough.
 */
export type Nearby = ReturnType<typeof createNearby>;

/** @param weight of pairs, row i, column j */
export function createNearby(
  laid: Laid,
  cells: ClothCells,
  weight: Float32Array,
  store: NoFitStore,
  gap: number,
  unit: number
) {
  const { x, y, form, size, halfX, halfY } = laid;
  const all = x.length;
  const { tables } = store;
  const looked = new Float64Array(1);

  let capacity = NEAR;
  let nearItem = new Int32Array(NEAR);
  let nearTable = new Int32Array(NEAR);
  let near = new Float64Array(NEAR * NW);
  let nearCount = 0;
  /** The part of the cloth for which the list is complete: centres from x0, y0 to x1, y1. */
  const region = new Float64Array(4);
  /** What `inspect` found. */
  const hits = { count: 0, item: new Int32Array(NEAR), data: new Float64Array(NEAR * HIT) };

  /**
   * Lists the neighbours of item i in form f for centres up to a reach from (px, py). `roughly` takes pairs whose no-fit
   * table does not stand yet for ellipses, instead of building it.
   */
  function gather(
    i: number,
    f: number,
    px: number,
    py: number,
    reachX: number,
    reachY: number,
    roughly: boolean
  ): void {
    const wide = halfX[f]! + gap + reachX;
    const high = halfY[f]! + gap + reachY;
    region[0] = px - reachX;
    region[1] = py - reachY;
    region[2] = px + reachX;
    region[3] = py + reachY;
    nearCount = 0;
    const count = cells.around(i, px - wide, px + wide, py - high, py + high);
    for (let k = 0; k < count; k++) {
      const j = cells.found[k]!;
      addNear(i, j, f, form[j]!, roughly);
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

  /** The weighted loss at (px, py) against the neighbours in the list; as soon as it reaches `bound` that is enough. */
  function weigh(px: number, py: number, bound: number): number {
    looked[0]!++;
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
    hits.count = 0;
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
      if (hits.count * HIT >= hits.data.length) widenHits();
      const h = hits.count * HIT;
      const hit = hits.data;
      hits.item[hits.count++] = nearItem[k]!;
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
    const item = new Int32Array(hits.item.length * 2);
    item.set(hits.item);
    hits.item = item;
    const data = new Float64Array(hits.data.length * 2);
    data.set(hits.data);
    hits.data = data;
  }

  /** Whether the list is complete for (px, py). */
  const covers = (px: number, py: number) =>
    px >= region[0]! && px <= region[2]! && py >= region[1]! && py <= region[3]!;

  return { gather, weigh, inspect, covers, hits, looked: () => looked[0]! };
}
