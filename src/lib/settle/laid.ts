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

/**
 * Where everything lies now: the items of the task, then what is fixed. Flat arrays that all parts of the search read,
 * by item; `halfX` and `halfY` are by form.
 */
export interface Laid {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly form: Int32Array;
  /** Fourth root of the area, in yardsticks: overlaps of large pieces are the hardest to mend and count for more. */
  readonly size: Float64Array;
  readonly halfX: Float64Array;
  readonly halfY: Float64Array;
}

export function laidOf(task: Task): Laid {
  const { forms, choiceForm, yardstick, items, fixed } = task;
  const n = items.length;
  const all = n + fixed.length;
  const laid: Laid = {
    x: new Float64Array(all),
    y: new Float64Array(all),
    form: new Int32Array(all),
    size: new Float64Array(all),
    halfX: Float64Array.from(forms, (form) => form.hx),
    halfY: Float64Array.from(forms, (form) => form.hy)
  };
  const rooted = (form: number) => Math.sqrt(Math.sqrt(forms[form]!.area) / yardstick);
  items.forEach((item, i) => {
    laid.size[i] = rooted(choiceForm[item.first]!);
  });
  fixed.forEach((one, k) => {
    laid.x[n + k] = one.x;
    laid.y[n + k] = one.y;
    laid.form[n + k] = one.form;
    laid.size[n + k] = Math.max(1, Math.min(2, rooted(one.form)));
  });
  return laid;
}

/** The mean box of the task's items. */
export function meanBox(task: Task): { x: number; y: number } {
  let x = 0;
  let y = 0;
  for (const item of task.items) {
    const form = task.forms[task.choiceForm[item.first]!]!;
    x += 2 * form.hx;
    y += 2 * form.hy;
  }
  const count = Math.max(1, task.items.length);
  return { x: x / count, y: y / count };
}
