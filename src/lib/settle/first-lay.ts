import { inflated } from './form';
import { emptyLay, type Lay } from './laid';
import { createRaster, runsOf, type Runs } from './raster';
import type { Task } from './task';

/**
 * A lay without overlaps, made at once: the largest piece first, each to the place of least right edge on a grid of
 * cells that every outline covers generously, trying all its ways. Items whose `kept` is set stay as `lay` has them.
 */
export function firstLay(
  task: Task,
  random: () => number,
  disorder: number,
  kept: Uint8Array | null,
  lay: Lay | null
): Lay {
  const rows = Math.max(48, Math.min(480, Math.round((task.width / task.yardstick) * 14)));
  const cell = task.width / rows;
  const raster = createRaster(rows, Math.ceil(task.clearance / cell) + 2);
  const result = lay ?? emptyLay(task.items.length);
  for (const fixed of task.fixed)
    raster.occupy(runsOf(task.forms[fixed.form]!.ring, fixed.x, fixed.y, cell), 0, 0);
  const shapes = new Map<number, Shape>();
  const shapeOf = (choice: number): Shape => {
    const latticed = task.sizeX[choice]! > 0 || task.sizeY[choice]! > 0;
    const key = task.choiceForm[choice]! * 2 + (latticed ? 1 : 0);
    let shape = shapes.get(key);
    if (!shape) shapes.set(key, (shape = shapeFrom(task, task.choiceForm[choice]!, latticed, cell)));
    return shape;
  };
  let length = task.lockedTo;
  const order: number[] = [];
  task.items.forEach((item, i) => {
    if (!kept?.[i]) {
      order.push(i);
      return;
    }
    const form = task.forms[task.choiceForm[result.choice[i]!]!]!;
    raster.occupy(runsOf(form.ring, result.x[i]!, result.y[i]!, cell), 0, 0);
    length = Math.max(length, result.x[i]! + form.hx);
  });
  const rank = new Map(
    order.map((i) => {
      const form = task.forms[task.choiceForm[task.items[i]!.first]!]!;
      return [i, 4 * form.hx * form.hy * (1 + disorder * (random() - 0.5))];
    })
  );
  order.sort((a, b) => rank.get(b)! - rank.get(a)!);
  /** The same shape never fits farther left than it did before. */
  const tried = new Map<number, number>();
  for (const i of order) {
    const { first, last } = task.items[i]!;
    let best = Infinity;
    let bestChoice = first;
    let bestColumn = 0;
    let bestRow = 0;
    for (let c = first; c < last; c++) {
      const shape = shapeOf(c);
      const key = c;
      for (let column = tried.get(key) ?? 0; column * cell + shape.width < best; column++) {
        if (
          !onGrid(task.phaseX[c]!, task.sizeX[c]!, column * cell + task.forms[task.choiceForm[c]!]!.hx, cell)
        )
          continue;
        const row = freeRow(task, c, shape, column, raster, cell);
        if (row < 0) continue;
        tried.set(key, column);
        best = column * cell + shape.width;
        bestChoice = c;
        bestColumn = column;
        bestRow = row;
        break;
      }
    }
    const form = task.forms[task.choiceForm[bestChoice]!]!;
    const shape = shapeOf(bestChoice);
    raster.occupy(shape.body, bestColumn, bestRow);
    result.choice[i] = bestChoice;
    result.x[i] = snapped(bestColumn * cell + form.hx, task.phaseX[bestChoice]!, task.sizeX[bestChoice]!);
    result.y[i] = Math.min(
      snapped(
        Math.max(bestRow * cell + form.hy, task.low[bestChoice]!),
        task.phaseY[bestChoice]!,
        task.sizeY[bestChoice]!
      ),
      task.high[bestChoice]!
    );
    length = Math.max(length, result.x[i]! + form.hx);
  }
  result.length = length;
  return result;
}

interface Shape {
  /** The cells of the piece with the clearance around it: what must be free. */
  readonly asks: Runs;
  /** The cells of the piece: what it takes. */
  readonly body: Runs;
  readonly height: number;
  readonly width: number;
}

function shapeFrom(task: Task, number: number, latticed: boolean, cell: number): Shape {
  const form = task.forms[number]!;
  const wide = task.clearance > 0 ? inflated(form.ring, task.clearance) : form.ring;
  let asks = runsOf(wide, form.hx, form.hy, cell);
  let body = runsOf(form.ring, form.hx, form.hy, cell);
  // A piece on a lattice lies anywhere within its cell: it takes the next column and row too.
  if (latticed) {
    asks = smeared(asks);
    body = smeared(body);
  }
  return { asks, body, height: Math.ceil((2 * form.hy) / cell - 1e-6), width: 2 * form.hx };
}

function smeared(runs: Runs): Runs {
  const more = new Int32Array(runs.length * 2);
  for (let k = 0; k < runs.length; k += 3) {
    for (const [side, at] of [
      [0, k],
      [1, runs.length + k]
    ] as const) {
      more[at] = runs[k]! + side;
      more[at + 1] = runs[k + 1]!;
      more[at + 2] = runs[k + 2]! + 1;
    }
  }
  return more;
}

function snapped(v: number, phase: number, size: number): number {
  return size === 0 ? v : phase + Math.ceil((v - phase) / size - 1e-9) * size;
}

/** Whether a line of the lattice falls into the cell that starts at v. */
function onGrid(phase: number, size: number, v: number, cell: number): boolean {
  return size === 0 || snapped(v, phase, size) < v + cell;
}

function freeRow(
  task: Task,
  choice: number,
  shape: Shape,
  column: number,
  raster: ReturnType<typeof createRaster>,
  cell: number
): number {
  const size = task.sizeY[choice]!;
  const { hy } = task.forms[task.choiceForm[choice]!]!;
  const low = task.low[choice]!;
  const high = task.high[choice]!;
  if (size === 0) {
    const least = Math.ceil((low - hy) / cell - 1e-6);
    const most = Math.floor((high - hy) / cell + 1e-6);
    return raster.freeRow(
      shape.asks,
      column,
      least,
      Math.max(least, Math.min(most, raster.rows - shape.height))
    );
  }
  // The few rows that a line of the lattice falls into, each by itself.
  for (let y = snapped(low, task.phaseY[choice]!, size); y <= high; y += size) {
    const row = Math.floor((y - hy) / cell + 1e-9);
    const moved = shape.asks.slice();
    for (let k = 0; k < moved.length; k += 3) {
      moved[k + 1]! += row;
      moved[k + 2]! += row;
    }
    if (raster.freeRow(moved, column, 0, 0) === 0) return row;
  }
  return -1;
}
