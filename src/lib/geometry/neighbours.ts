import Flatbush from 'flatbush';
import type { Millimetres } from '$lib/units/measure';
import { boxesMeet, growBox } from './polygon';
import type { Box } from './point';

/*
 * Which boxes are near which: the first, coarse question before outlines are looked at.
 */

/** Boxes that stay where they are. */
export class BoxIndex {
  readonly #tree: Flatbush | null;

  constructor(boxes: readonly Box[]) {
    this.#tree = boxes.length > 0 ? new Flatbush(boxes.length) : null;
    for (const box of boxes) this.#tree?.add(box.minX, box.minY, box.maxX, box.maxY);
    this.#tree?.finish();
  }

  /** Numbers of the boxes that come within `reach` of `box` along both axes; in ascending order. */
  near(box: Box, reach: Millimetres = 0): number[] {
    const { minX, minY, maxX, maxY } = growBox(box, reach);
    return this.#tree?.search(minX, minY, maxX, maxY).sort((a, b) => a - b) ?? [];
  }
}

/** Every pair i < j of boxes that come within `reach` of each other along both axes, in ascending order. */
export function neighbourPairs(boxes: readonly Box[], reach: Millimetres = 0): [number, number][] {
  const index = new BoxIndex(boxes);
  return boxes.flatMap((box, i) =>
    index
      .near(box, reach)
      .filter((j) => j > i)
      .map((j): [number, number] => [i, j])
  );
}

/** Boxes that move, while a piece is dragged or pieces are settled: square cells, each listing what touches it. */
export class BoxGrid<Key> {
  readonly #cell: Millimetres;
  readonly #boxes = new Map<Key, Box>();
  readonly #cells = new Map<string, Set<Key>>();

  /** `cell` is about as large as a usual box; a wrong guess costs time only. */
  constructor(cell: Millimetres = 250) {
    if (!(cell > 0)) throw new RangeError(`A cell must have a size, got ${cell}`);
    this.#cell = cell;
  }

  /** Puts `key` at `box`, wherever it was before. */
  set(key: Key, box: Box): void {
    this.delete(key);
    this.#boxes.set(key, box);
    this.#visit(box, (name) => {
      const cell = this.#cells.get(name);
      if (cell) cell.add(key);
      else this.#cells.set(name, new Set([key]));
    });
  }

  delete(key: Key): void {
    const box = this.#boxes.get(key);
    if (!box) return;
    this.#boxes.delete(key);
    this.#visit(box, (name) => {
      const cell = this.#cells.get(name);
      cell?.delete(key);
      if (cell?.size === 0) this.#cells.delete(name);
    });
  }

  /** Everything within `reach` of `box` along both axes. */
  near(box: Box, reach: Millimetres = 0): Key[] {
    const wide = growBox(box, reach);
    const found = new Set<Key>();
    this.#visit(wide, (name) => {
      for (const key of this.#cells.get(name) ?? [])
        if (boxesMeet(this.#boxes.get(key)!, wide)) found.add(key);
    });
    return [...found];
  }

  #visit(box: Box, each: (name: string) => void): void {
    const size = this.#cell;
    for (let i = Math.floor(box.minX / size); i <= Math.floor(box.maxX / size); i++)
      for (let j = Math.floor(box.minY / size); j <= Math.floor(box.maxY / size); j++) each(`${i} ${j}`);
  }
}
