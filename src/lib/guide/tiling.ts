import type { Box, Outline, Point } from '$lib/geometry/point';
import { boundingBox, boxesMeet, locate, meetingPoint } from '$lib/geometry/polygon';
import type { Millimetres } from '$lib/units/measure';
import { LONGEST_SIDE, type Paper } from './papers';

/*
 * How a stretch of cloth is cut up into sheets. A sheet shows its **window**, a rectangle of the cloth; windows of
 * neighbours share the overlap. Beside the window a sheet keeps a band at its left and one at its foot for the checks
 * and the words; when sheets are taped up, the band towards a neighbour is trimmed off.
 */

/** Widths of the bands beside the window, inside the margins. */
export const FOOT_BAND: Millimetres = 14;
export const SIDE_BAND: Millimetres = 9;

/** What printing leaves of a paper. */
export interface SheetRules {
  readonly margin: Millimetres;
  readonly overlap: Millimetres;
}

/** One sheet of the grid. Rows count from the near selvedge, columns from the cloth's start. */
export interface Tile {
  readonly row: number;
  readonly column: number;
  /** 'B3': row B, column 3. */
  readonly label: string;
  /** What it shows, in cloth coordinates. */
  readonly window: Box;
  /** Whether it is left out, having nothing of a piece that no other sheet shows. */
  readonly blank: boolean;
}

export interface Tiling {
  /** The page of every sheet. */
  readonly page: { readonly width: Millimetres; readonly height: Millimetres };
  readonly rules: SheetRules;
  readonly rows: number;
  readonly columns: number;
  /** From column to column, and from row to row. */
  readonly step: { readonly x: Millimetres; readonly y: Millimetres };
  /** Row by row, blank ones too. */
  readonly tiles: readonly Tile[];
}

/** A row's letter: A to Z, then AA, AB … */
export function rowLetters(row: number): string {
  const letter = String.fromCharCode(65 + (row % 26));
  return row < 26 ? letter : rowLetters(Math.floor(row / 26) - 1) + letter;
}

/** The window of the tile in `row` and `column`, with the tile's own part: the window less what the next tiles show too. */
function ownPart(window: Box, tiling: Omit<Tiling, 'tiles'>, row: number, column: number): Box {
  return {
    ...window,
    maxX: column === tiling.columns - 1 ? window.maxX : window.minX + tiling.step.x,
    maxY: row === tiling.rows - 1 ? window.maxY : window.minY + tiling.step.y
  };
}

/** Whether any of `outline`'s surface lies in `box`. */
export function reaches(outline: Outline, bounds: Box, box: Box): boolean {
  if (!boxesMeet(bounds, box)) return false;
  if (outline.some((p) => p.x > box.minX && p.x < box.maxX && p.y > box.minY && p.y < box.maxY)) return true;
  const corners = cornersOf(box);
  if (corners.some((corner) => locate(outline, corner) === 'inside')) return true;
  return outline.some((a, i) => {
    const b = outline[(i + 1) % outline.length]!;
    if (!boxesMeet(boundingBox([a, b]), box)) return false;
    return corners.some((c, k) => meetingPoint(a, b, c, corners[(k + 1) % 4]!) !== null);
  });
}

function cornersOf(box: Box): Point[] {
  return [
    { x: box.minX, y: box.minY },
    { x: box.maxX, y: box.minY },
    { x: box.maxX, y: box.maxY },
    { x: box.minX, y: box.maxY }
  ];
}

/** How many windows of `window` with `overlap` cover `length`. */
function count(length: Millimetres, window: Millimetres, overlap: Millimetres): number {
  return Math.max(1, Math.ceil((length - overlap) / (window - overlap) - 1e-9));
}

/** A grid of windows of one size over `extent`, blank ones marked. */
function grid(
  extent: Box,
  outlines: readonly Outline[],
  rules: SheetRules,
  window: { width: Millimetres; height: Millimetres }
): Tiling {
  const columns = count(extent.maxX - extent.minX, window.width, rules.overlap);
  const rows = count(extent.maxY - extent.minY, window.height, rules.overlap);
  const frame = {
    page: {
      width: window.width + SIDE_BAND + 2 * rules.margin,
      height: window.height + FOOT_BAND + 2 * rules.margin
    },
    rules,
    rows,
    columns,
    step: { x: window.width - rules.overlap, y: window.height - rules.overlap }
  };
  const bounds = outlines.map((outline) => boundingBox(outline));
  const tiles = Array.from({ length: rows * columns }, (_, i): Tile => {
    const row = Math.floor(i / columns);
    const column = i % columns;
    const minX = extent.minX + column * frame.step.x;
    const minY = extent.minY + row * frame.step.y;
    const box = { minX, minY, maxX: minX + window.width, maxY: minY + window.height };
    const own = ownPart(box, frame, row, column);
    return {
      row,
      column,
      label: `${rowLetters(row)}${column + 1}`,
      window: box,
      blank: !outlines.some((outline, k) => reaches(outline, bounds[k]!, own))
    };
  });
  return { ...frame, tiles };
}

/** The window that `width` × `height` of paper leaves. */
function windowOf(width: Millimetres, height: Millimetres, rules: SheetRules) {
  return {
    width: width - 2 * rules.margin - SIDE_BAND,
    height: height - 2 * rules.margin - FOOT_BAND
  };
}

/** The sheets of a tiling that are printed. */
export function printed(tiling: Tiling): Tile[] {
  return tiling.tiles.filter((tile) => !tile.blank);
}

/** `length` in the fewest equal windows of at most `longest`. */
function equalShare(length: Millimetres, longest: Millimetres, overlap: Millimetres): Millimetres {
  const n = count(length, longest, overlap);
  return (length + (n - 1) * overlap) / n;
}

/**
 * `extent` on sheets of `paper`, upright or on its side, whichever needs fewer printed sheets (then less paper, then
 * upright). From a roll, along or across the cloth, each strip as long as needed up to what a page may have.
 */
export function tileOnPaper(
  extent: Box,
  outlines: readonly Outline[],
  paper: Paper,
  rules: SheetRules
): Tiling {
  const length = extent.maxX - extent.minX;
  const width = extent.maxY - extent.minY;
  const longest = windowOf(LONGEST_SIDE, LONGEST_SIDE, rules);
  const ways =
    paper.height === null
      ? [
          {
            width: equalShare(length, longest.width, rules.overlap),
            height: windowOf(0, paper.width, rules).height
          },
          {
            width: windowOf(paper.width, 0, rules).width,
            height: equalShare(width, longest.height, rules.overlap)
          }
        ]
      : [windowOf(paper.width, paper.height, rules), windowOf(paper.height, paper.width, rules)];
  const tilings = ways.map((window) => grid(extent, outlines, rules, window));
  const cost = (tiling: Tiling): number => printed(tiling).length;
  const sheet = (tiling: Tiling): number => tiling.page.width * tiling.page.height;
  return tilings.reduce((best, next) =>
    cost(next) < cost(best) ||
    (cost(next) === cost(best) && sheet(next) * cost(next) < sheet(best) * cost(best) - 1)
      ? next
      : best
  );
}

const LEAST_WINDOW: Millimetres = 156;

/** `extent` on one page of its own size, or on equal pages where it is longer or wider than a page may be. */
export function tileWhole(extent: Box, outlines: readonly Outline[], rules: SheetRules): Tiling {
  const longest = windowOf(LONGEST_SIDE, LONGEST_SIDE, rules);
  return grid(extent, outlines, rules, {
    // The checks and the words need room beside a very small piece.
    width: Math.max(LEAST_WINDOW, equalShare(extent.maxX - extent.minX, longest.width, rules.overlap)),
    height: Math.max(LEAST_WINDOW, equalShare(extent.maxY - extent.minY, longest.height, rules.overlap))
  });
}

/** A mark that two neighbouring sheets both carry at the same place of the cloth. */
export interface JoinMark {
  readonly at: Point;
  /** The two sheets, 'A1' and 'A2'. */
  readonly between: readonly [string, string];
  /** Along which the seam of the two sheets runs. */
  readonly seam: 'x' | 'y';
}

/** The join marks of every pair of printed neighbours: two on each shared side, in the middle of the overlap. */
export function joinMarks(tiling: Tiling): JoinMark[] {
  const { columns, rows, rules, tiles } = tiling;
  const marks: JoinMark[] = [];
  for (const tile of tiles) {
    if (tile.blank) continue;
    const { window: w } = tile;
    const right = tile.column + 1 < columns ? tiles[tile.row * columns + tile.column + 1]! : null;
    const above = tile.row + 1 < rows ? tiles[(tile.row + 1) * columns + tile.column]! : null;
    for (const share of [0.25, 0.75]) {
      if (right && !right.blank)
        marks.push({
          at: { x: w.maxX - rules.overlap / 2, y: w.minY + share * (w.maxY - w.minY) },
          between: [tile.label, right.label],
          seam: 'y'
        });
      if (above && !above.blank)
        marks.push({
          at: { x: w.minX + share * (w.maxX - w.minX), y: w.maxY - rules.overlap / 2 },
          between: [tile.label, above.label],
          seam: 'x'
        });
    }
  }
  return marks;
}

/** Four targets in the outermost corners of the printed sheets, and what a tape must read between them. */
export interface TapedUpChecks {
  /** A near the start, B near the end, C far end, D far start. */
  readonly targets: readonly { readonly name: 'A' | 'B' | 'C' | 'D'; readonly at: Point }[];
  readonly checks: readonly {
    readonly name: string;
    readonly from: string;
    readonly to: string;
    readonly length: Millimetres;
  }[];
}

/** How far inside its window's corner a target lies. */
const TARGET_INSET: Millimetres = 8;

/** Beyond this the taped-up sheets are not to be cut by. */
export const TAPED_UP_LIMIT: Millimetres = 2;

/** The taped-up checks of a tiling with at least one printed sheet. */
export function tapedUpChecks(tiling: Tiling, extent: Box): TapedUpChecks {
  const shown = printed(tiling);
  const clamp = (value: number, low: number, high: number): number => Math.min(Math.max(value, low), high);
  const outermost = (name: 'A' | 'B' | 'C' | 'D', sx: 1 | -1, sy: 1 | -1) => {
    const places = shown.map(({ window: w }) => ({
      // On paper that reaches past the cloth the target stays on the cloth's edge.
      x: clamp(sx < 0 ? w.minX : Math.min(w.maxX, extent.maxX), w.minX + TARGET_INSET, w.maxX - TARGET_INSET),
      y: clamp(sy < 0 ? w.minY : Math.min(w.maxY, extent.maxY), w.minY + TARGET_INSET, w.maxY - TARGET_INSET)
    }));
    const at = places.reduce((best, next) =>
      sx * next.x + sy * next.y > sx * best.x + sy * best.y + 1e-9 ? next : best
    );
    return { name, at };
  };
  const targets = [
    outermost('A', -1, -1),
    outermost('B', 1, -1),
    outermost('C', 1, 1),
    outermost('D', -1, 1)
  ] as const;
  const [a, b, c, d] = targets;
  const check = (name: string, from: (typeof targets)[number], to: (typeof targets)[number]) => ({
    name,
    from: from.name,
    to: to.name,
    length: Math.hypot(to.at.x - from.at.x, to.at.y - from.at.y)
  });
  return {
    targets,
    checks: [
      check('full length', a, b),
      check('full width', a, d),
      check('diagonal', a, c),
      check('diagonal', b, d)
    ]
  };
}

/** The printed sheets in groups that hang together by their sides, largest first. */
export function groups(tiling: Tiling): Tile[][] {
  const waiting = new Map(printed(tiling).map((tile) => [`${tile.row}/${tile.column}`, tile]));
  const found: Tile[][] = [];
  for (const tile of printed(tiling)) {
    const group: Tile[] = [];
    const open = [`${tile.row}/${tile.column}`];
    for (let key = open.pop(); key !== undefined; key = open.pop()) {
      const next = waiting.get(key);
      if (!next) continue;
      waiting.delete(key);
      group.push(next);
      const { row, column } = next;
      open.push(
        `${row}/${column - 1}`,
        `${row}/${column + 1}`,
        `${row - 1}/${column}`,
        `${row + 1}/${column}`
      );
    }
    if (group.length > 0) found.push(group);
  }
  return found.sort((a, b) => b.length - a.length);
}
