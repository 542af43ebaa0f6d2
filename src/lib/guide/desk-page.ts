import type { Millimetres } from '$lib/units/measure';
import {
  fitText,
  line,
  pen,
  words,
  type Layer,
  type Lettering,
  type Mark,
  type Page,
  type Weight
} from './drawing';

/*
 * The pages that are read at a desk (ticket, overview, map): one layer, margins all round, filled from the top.
 */

export const DESK_MARGIN: Millimetres = 12;

export interface Desk {
  readonly name: string;
  readonly width: Millimetres;
  readonly height: Millimetres;
}

/** A page under way: marks, and how far down it is filled. */
export class DeskPage {
  readonly marks: Mark[] = [];
  /** Drawings with a window of their own, behind the marks. */
  readonly drawings: Layer[] = [];
  /** The next free height, from the foot of the paper. */
  top: Millimetres;
  readonly left = DESK_MARGIN;
  readonly right: Millimetres;
  readonly foot: Millimetres = DESK_MARGIN + 6;

  constructor(
    readonly desk: Desk,
    readonly name: string,
    readonly lettering: Lettering
  ) {
    this.top = desk.height - DESK_MARGIN;
    this.right = desk.width - DESK_MARGIN;
  }

  get width(): Millimetres {
    return this.right - this.left;
  }

  /** Puts words with their baseline at `y`, cut off at `room`. */
  put(
    text: string,
    x: Millimetres,
    y: Millimetres,
    size: Millimetres,
    more: { weight?: Weight; align?: 'start' | 'middle' | 'end'; room?: Millimetres; shade?: number } = {}
  ): void {
    const { weight = 'regular', align = 'start', shade = 0, room } = more;
    const shown = room === undefined ? text : fitText(text, size, room, weight, this.lettering);
    this.marks.push(words({ x, y }, shown, size, { weight, align, shade }));
  }

  /** Puts bold words, smaller where `room` is short, down to 3 mm; only then cut off. */
  putSmaller(text: string, x: Millimetres, y: Millimetres, size: Millimetres, room: Millimetres): void {
    const fits = Math.max(3, Math.min(size, room / this.lettering.width(text, 1, 'bold')));
    this.put(text, x, y, fits, { weight: 'bold', room: room + 0.01 });
  }

  /** A line over the page at the next free height. */
  rule(width: Millimetres = 0.25, shade = 0): void {
    this.marks.push(
      line(
        [
          { x: this.left, y: this.top },
          { x: this.right, y: this.top }
        ],
        pen(width, [], shade)
      )
    );
  }

  /** The title of a desk page, and what it belongs to. */
  title(text: string, identity: string): void {
    const size = 7;
    this.put(text, this.left, this.top - size * 0.7, size, { weight: 'bold' });
    const taken = this.lettering.width(text, size, 'bold') + 8;
    this.put(identity, this.right, this.top - size * 0.7, 3.6, { align: 'end', room: this.width - taken });
    this.top -= size * 0.7 + 3;
    this.rule();
    this.top -= 4;
  }

  /** The page; `notice` stands at its foot. */
  done(notice: string): Page {
    this.put(notice, this.left, DESK_MARGIN, 3.2, { room: this.width });
    return {
      width: this.desk.width,
      height: this.desk.height,
      name: this.name,
      layers: [...this.drawings, { origin: { x: 0, y: 0 }, scale: 1, window: null, marks: this.marks }]
    };
  }
}

export interface TableColumn {
  /** Words over this column and those after it that have none: 'head of the grain line'. */
  readonly group?: string;
  readonly word: string;
  readonly width: Millimetres;
  readonly align: 'start' | 'end';
  readonly weight?: Weight;
}

const ROW: Millimetres = 6.2;
const SIZE: Millimetres = 3.5;

/** Sets a table from `page.top` down; a full page calls `next` for another one. Gives the last page. */
export function setTable(
  first: DeskPage,
  columns: readonly TableColumn[],
  rows: readonly (readonly string[])[],
  next: (full: DeskPage) => DeskPage
): DeskPage {
  let page = first;
  const cells = (texts: readonly string[], y: number, head: boolean): void => {
    let x = page.left;
    columns.forEach((column, i) => {
      const weight = head ? 'regular' : (column.weight ?? 'regular');
      page.put(
        texts[i] ?? '',
        column.align === 'end' ? x + column.width - 1.5 : x + 0.5,
        y,
        head ? 2.9 : SIZE,
        { align: column.align, room: column.width - 2, weight }
      );
      x += column.width;
    });
  };
  const grouped = columns.some((column) => column.group);
  const head = (): void => {
    if (grouped) {
      let x = page.left;
      for (const { group, width } of columns) {
        if (group) page.put(group, x + 4, page.top - 3.2, 3.1, { weight: 'bold' });
        x += width;
      }
      page.top -= 4.4;
    }
    cells(
      columns.map((column) => column.word),
      page.top - 3.5,
      true
    );
    page.top -= 5;
    page.rule();
  };
  if (page.top - (grouped ? 9.4 : 5) - ROW < page.foot) page = next(page);
  head();
  for (const row of rows) {
    if (page.top - ROW < page.foot) {
      page = next(page);
      head();
    }
    cells(row, page.top - ROW + 1.9, false);
    page.top -= ROW;
    page.rule(0.2, 0.7);
  }
  return page;
}
