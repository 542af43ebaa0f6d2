import type { Laid } from './laid';

/**
 * Which pieces lie in which cell of a grid over the cloth, so that a move looks at its neighbours only.
 */
export type ClothCells = ReturnType<typeof createCells>;

/** @param mean the mean box of the pieces, by which the cells are sized */
export function createCells(laid: Laid, width: number, gap: number, mean: { x: number; y: number }) {
  const { x, y, form, halfX, halfY } = laid;
  const columnWidth = Math.max(1, 0.75 * mean.x);
  const rows = Math.max(1, Math.min(64, Math.round(width / Math.max(1, 0.75 * mean.y))));
  const rowHeight = width / rows;
  let columns = 0;
  /** How many pieces one cell has room for. */
  let room = 12;
  let cellItems = new Int32Array(0);
  let cellCount = new Int32Array(0);
  const stamp = new Int32Array(x.length);
  let stamped = 0;
  /** What the last call of `around` found. */
  const found = new Int32Array(x.length);

  const column = (v: number) => {
    const c = Math.floor(v / columnWidth);
    return c < 0 ? 0 : c >= columns ? columns - 1 : c;
  };
  const row = (v: number) => {
    const r = Math.floor(v / rowHeight);
    return r < 0 ? 0 : r >= rows ? rows - 1 : r;
  };

  /** Takes everything off a cloth of `length`. */
  function clear(length: number): void {
    const needed = Math.max(1, Math.ceil(length / columnWidth));
    if (needed <= columns) {
      cellCount.fill(0);
      return;
    }
    columns = needed + 4;
    cellItems = new Int32Array(columns * rows * room);
    cellCount = new Int32Array(columns * rows);
  }

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

  /** Puts every piece but i whose box reaches into left … right, low … high into `found` and gives their number. */
  function around(i: number, left: number, right: number, low: number, high: number): number {
    if (stamped === 0x7fffffff) {
      stamp.fill(0);
      stamped = 0;
    }
    const mark = ++stamped;
    stamp[i] = mark;
    let count = 0;
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
          if (
            x[j]! - halfX[g]! < right &&
            x[j]! + halfX[g]! > left &&
            y[j]! - halfY[g]! < high &&
            y[j]! + halfY[g]! > low
          )
            found[count++] = j;
        }
      }
    return count;
  }

  return { enter, leave, clear, around, found };
}
