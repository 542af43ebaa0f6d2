import type { Ring } from './no-fit';

/** The cells that an outline touches, column by column: triples of column, lowest row, highest row. */
export type Runs = Int32Array;

/** A share of a cell by which an edge may reach into it unseen, so that borders on the grid touch one side only. */
const HAIR = 1e-6;

/** Every cell of side `cell` that the inside of `ring`, moved by (ox, oy), touches. */
export function runsOf(ring: Ring, ox: number, oy: number, cell: number): Runs {
  const n = ring.xs.length;
  const xs = new Float64Array(n);
  const ys = new Float64Array(n);
  let low = Infinity;
  let high = -Infinity;
  for (let i = 0; i < n; i++) {
    xs[i] = (ring.xs[i]! + ox) / cell;
    ys[i] = (ring.ys[i]! + oy) / cell;
    low = Math.min(low, xs[i]!);
    high = Math.max(high, xs[i]!);
  }
  const runs: number[] = [];
  for (let c = Math.floor(low + HAIR); c < high - HAIR; c++) {
    const spans = spansIn(xs, ys, c);
    spans.sort((a, b) => a[0] - b[0]);
    let from = NaN;
    let to = -Infinity;
    for (const [a, b] of spans) {
      if (a <= to + 1) {
        to = Math.max(to, b);
        continue;
      }
      if (to !== -Infinity) runs.push(c, from, to);
      from = a;
      to = b;
    }
    if (to !== -Infinity) runs.push(c, from, to);
  }
  return Int32Array.from(runs);
}

/** Rows touched in the column from c to c + 1: by an edge in it, or by the inside along its middle. */
function spansIn(xs: Float64Array, ys: Float64Array, c: number): [number, number][] {
  const n = xs.length;
  const spans: [number, number][] = [];
  const crossings: number[] = [];
  const left = c + HAIR;
  const right = c + 1 - HAIR;
  const middle = c + 0.5;
  for (let i = 0, j = n - 1; i < n; j = i++) {
    let ax = xs[j]!;
    let ay = ys[j]!;
    let bx = xs[i]!;
    let by = ys[i]!;
    if (ax <= middle !== bx <= middle) crossings.push(ay + ((middle - ax) / (bx - ax)) * (by - ay));
    if (ax > bx) [ax, ay, bx, by] = [bx, by, ax, ay];
    if (bx <= left || ax >= right) continue;
    const slope = bx > ax ? (by - ay) / (bx - ax) : 0;
    const y1 = ax < left ? ay + (left - ax) * slope : ay;
    const y2 = bx > right ? by - (bx - right) * slope : by;
    const from = Math.floor(Math.min(y1, y2) + HAIR);
    const to = Math.ceil(Math.max(y1, y2) - HAIR) - 1;
    if (to >= from) spans.push([from, to]);
  }
  crossings.sort((a, b) => a - b);
  for (let k = 0; k + 1 < crossings.length; k += 2) {
    const from = Math.floor(crossings[k]! + HAIR);
    const to = Math.ceil(crossings[k + 1]! - HAIR) - 1;
    if (to >= from) spans.push([from, to]);
  }
  return spans;
}

/**
 * The cloth as columns of bits, set where something lies. Beside each column stand the columns in which a bit says
 * that one of the next 2, 4, 8 … rows is taken, so that a run of any height is tested for every row at once.
 */
export interface Raster {
  readonly rows: number;
  occupy(runs: Runs, column: number, row: number): void;
  /** The lowest row from `least` to `most` at which `runs` is free with its first column at `column`; −1 if there is none. */
  freeRow(runs: Runs, column: number, least: number, most: number): number;
}

/** @param pad rows below and above the cloth that runs may reach into */
export function createRaster(rows: number, pad: number): Raster {
  const words = Math.ceil((rows + 2 * pad) / 32) + 1;
  const levels = Math.ceil(Math.log2(rows + 2 * pad + 1)) + 1;
  const stride = words * levels;
  let columns = 256;
  let bits = new Int32Array(columns * stride);
  const blocked = new Int32Array(words);

  function occupy(runs: Runs, column: number, row: number): void {
    let last = -1;
    for (let k = 0; k < runs.length; k += 3) {
      const c = runs[k]! + column;
      if (c < 0) continue;
      if (c >= columns) {
        columns = Math.max(columns * 2, c + 1);
        const wide = new Int32Array(columns * stride);
        wide.set(bits);
        bits = wide;
      }
      const base = c * stride;
      const from = Math.max(0, runs[k + 1]! + row);
      const to = Math.min(rows - 1, runs[k + 2]! + row);
      for (let r = from + pad; r <= to + pad; r++) bits[base + (r >> 5)]! |= 1 << (r & 31);
      if (last >= 0 && last !== c) raise(last);
      last = c;
    }
    if (last >= 0) raise(last);
  }

  /** Works out the higher columns of column c. */
  function raise(c: number): void {
    for (let level = 1; level < levels; level++) {
      const to = c * stride + level * words;
      const from = to - words;
      const shift = 1 << (level - 1);
      const whole = shift >> 5;
      const part = shift & 31;
      for (let w = 0; w < words; w++) {
        const a = w + whole < words ? bits[from + w + whole]! : 0;
        const b = w + whole + 1 < words ? bits[from + w + whole + 1]! : 0;
        bits[to + w] = bits[from + w]! | (part === 0 ? a : (a >>> part) | (b << (32 - part)));
      }
    }
  }

  function freeRow(runs: Runs, column: number, least: number, most: number): number {
    if (most < least || least < 0) return -1;
    const used = (most >> 5) + 1;
    blocked.fill(0);
    // Rows below the lowest possible one count as blocked too.
    for (let w = 0; w < least >> 5; w++) blocked[w] = -1;
    const lowest = (1 << (least & 31)) - 1;
    // Rows above the highest possible one count as blocked.
    blocked[used - 1]! |= (most & 31) === 31 ? 0 : -1 << ((most & 31) + 1);
    blocked[least >> 5]! |= lowest;
    for (let k = 0; k < runs.length; k += 3) {
      const c = runs[k]! + column;
      if (c < 0 || c >= columns) continue;
      const low = runs[k + 1]! + pad;
      const high = runs[k + 2]! + pad;
      const level = 31 - Math.clz32(high - low + 1);
      const base = c * stride + level * words;
      block(base, low, used);
      const second = high + 1 - (1 << level);
      if (second !== low) block(base, second, used);
      let all = -1;
      for (let w = 0; w < used; w++) all &= blocked[w]!;
      if (all === -1) return -1;
    }
    for (let w = 0; w < used; w++) {
      const free = ~blocked[w]!;
      if (free !== 0) return w * 32 + (31 - Math.clz32(free & -free));
    }
    return -1;
  }

  /** Blocks every row whose row + shift is taken. */
  function block(base: number, shift: number, used: number): void {
    const whole = shift >> 5;
    const part = shift & 31;
    for (let w = 0; w < used && w + whole < words; w++) {
      const a = bits[base + w + whole]!;
      const b = w + whole + 1 < words ? bits[base + w + whole + 1]! : 0;
      blocked[w]! |= part === 0 ? a : (a >>> part) | (b << (32 - part));
    }
  }

  return { rows, occupy, freeRow };
}
