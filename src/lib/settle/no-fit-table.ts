import type { Ring } from './no-fit';

/** Numbers kept per edge: start x, y; direction x, y; 1/length²; outward unit normal x, y; corner flags. */
export const EDGE = 8;
/** Numbers kept per table: box x0, y0, x1, y1; cells per unit of x and of y. */
export const HEAD = 6;
/** Whole numbers kept per table: first edge, edge count, first cell, cells a side. */
export const SIZES = 4;

/** What a cell says of every place in it. Kept in the two low bits; above them the start of its list. */
export const CELL_OUTSIDE = 1;
export const CELL_INSIDE = 2;

/**
 * The no-fit regions in the form that the search reads: for a relative position it finds in a few dozen
 * nanoseconds whether two pieces overlap there, how deep, and the nearest place of the region's border.
 *
 * Over the box of a region lies a grid of G × G cells; a cell holds the edges that can be nearest from some
 * place in it (every other edge is farther from its centre than the nearest one by more than its diagonal).
 * Cells are filled when first asked for.
 */
export interface NoFitTables {
  head: Float64Array;
  sizes: Int32Array;
  edges: Float64Array;
  /** 0 while the cell is not filled, else list start × 4 + kind. */
  cells: Int32Array;
  /** Per list: its length, then edge numbers within the table. */
  lists: Uint16Array;
  count: number;
  /** Adds a region and gives its number. */
  add(rings: readonly Ring[]): number;
  /** Fills cell number `cell` of table `id` and gives its word. */
  fill(id: number, cell: number): number;
  bytes(): number;
  clear(): void;
}

export function createTables(): NoFitTables {
  let edgeCount = 0;
  let cellCount = 0;
  let listCount = 0;
  let distances = new Float64Array(256);

  const tables: NoFitTables = {
    head: new Float64Array(HEAD * 64),
    sizes: new Int32Array(SIZES * 64),
    edges: new Float64Array(EDGE * 2048),
    cells: new Int32Array(4096),
    lists: new Uint16Array(16384),
    count: 0,
    add,
    fill,
    bytes: () => edgeCount * EDGE * 8 + cellCount * 4 + listCount * 2 + tables.count * (HEAD * 8 + SIZES * 4),
    clear() {
      edgeCount = cellCount = listCount = 0;
      tables.count = 0;
      tables.cells.fill(0);
    }
  };

  function add(rings: readonly Ring[]): number {
    const id = tables.count++;
    if ((id + 1) * HEAD > tables.head.length) {
      tables.head = grown(tables.head, (id + 1) * HEAD);
      tables.sizes = grown(tables.sizes, (id + 1) * SIZES);
    }
    let total = 0;
    for (const ring of rings) total += ring.xs.length;
    if ((edgeCount + total) * EDGE > tables.edges.length)
      tables.edges = grown(tables.edges, (edgeCount + total) * EDGE);
    let x0 = Infinity;
    let y0 = Infinity;
    let x1 = -Infinity;
    let y1 = -Infinity;
    let at = edgeCount * EDGE;
    const edges = tables.edges;
    for (const { xs, ys } of rings) {
      const n = xs.length;
      for (let i = 0; i < n; i++) {
        const j = i + 1 < n ? i + 1 : 0;
        const x = xs[i]!;
        const y = ys[i]!;
        const dx = xs[j]! - x;
        const dy = ys[j]! - y;
        const length = Math.sqrt(dx * dx + dy * dy);
        edges[at] = x;
        edges[at + 1] = y;
        edges[at + 2] = dx;
        edges[at + 3] = dy;
        edges[at + 4] = 1 / (length * length);
        edges[at + 5] = dy / length;
        edges[at + 6] = -dx / length;
        edges[at + 7] = (reflex(xs, ys, i) ? 1 : 0) + (reflex(xs, ys, j) ? 2 : 0);
        at += EDGE;
        if (x < x0) x0 = x;
        if (x > x1) x1 = x;
        if (y < y0) y0 = y;
        if (y > y1) y1 = y;
      }
    }
    markPinches(edges, edgeCount, total);
    const side = Math.min(24, Math.max(4, Math.ceil(2 * Math.sqrt(total))));
    const h = id * HEAD;
    tables.head[h] = x0;
    tables.head[h + 1] = y0;
    tables.head[h + 2] = x1;
    tables.head[h + 3] = y1;
    // A hair less than the side, so that rounding never counts one cell too far.
    tables.head[h + 4] = (side / (x1 - x0)) * (1 - 1e-12);
    tables.head[h + 5] = (side / (y1 - y0)) * (1 - 1e-12);
    const s = id * SIZES;
    tables.sizes[s] = edgeCount;
    tables.sizes[s + 1] = total;
    tables.sizes[s + 2] = cellCount;
    tables.sizes[s + 3] = side;
    edgeCount += total;
    cellCount += side * side;
    if (cellCount > tables.cells.length) tables.cells = grown(tables.cells, cellCount);
    if (total > distances.length) distances = new Float64Array(total * 2);
    return id;
  }

  function fill(id: number, cell: number): number {
    const { head, sizes, edges } = tables;
    const h = id * HEAD;
    const s = id * SIZES;
    const first = sizes[s]!;
    const total = sizes[s + 1]!;
    const side = sizes[s + 3]!;
    const local = cell - sizes[s + 2]!;
    const width = 1 / head[h + 4]!;
    const height = 1 / head[h + 5]!;
    const cx = head[h]! + ((local % side) + 0.5) * width;
    const cy = head[h + 1]! + (Math.floor(local / side) + 0.5) * height;
    // A hair wider than the cell, so that rounding at its border leaves no edge out.
    const radius = 0.5001 * Math.sqrt(width * width + height * height);
    let nearest = Infinity;
    let inside = false;
    for (let e = 0; e < total; e++) {
      const b = (first + e) * EDGE;
      const px = cx - edges[b]!;
      const py = cy - edges[b + 1]!;
      const dx = edges[b + 2]!;
      const dy = edges[b + 3]!;
      const t = (px * dx + py * dy) * edges[b + 4]!;
      const c = t < 0 ? 0 : t > 1 ? 1 : t;
      const ox = px - c * dx;
      const oy = py - c * dy;
      const distance = Math.sqrt(ox * ox + oy * oy);
      distances[e] = distance;
      if (distance < nearest) {
        nearest = distance;
        inside =
          t < 0 || t > 1
            ? insideAtCorner(edges, b, t < 0 ? 1 : 2, first, total, cx, cy)
            : ox * edges[b + 5]! + oy * edges[b + 6]! < 0;
      }
    }
    const kind = nearest > radius ? (inside ? CELL_INSIDE : CELL_OUTSIDE) : 3;
    if (kind === CELL_OUTSIDE) return (tables.cells[cell] = CELL_OUTSIDE);
    const start = listCount;
    if (start + total + 1 > tables.lists.length) tables.lists = grown(tables.lists, start + total + 1);
    const lists = tables.lists;
    const limit = nearest + 2 * radius;
    let length = 0;
    for (let e = 0; e < total; e++) if (distances[e]! <= limit) lists[start + ++length] = e;
    lists[start] = length;
    listCount += length + 1;
    return (tables.cells[cell] = start * 4 + kind);
  }

  return tables;
}

/**
 * Whether a place is inside, given that the corner at the start (1) or end (2) of the edge at `b` is nearest to it:
 * a reflex corner is nearest only from inside. Where the border touches itself it takes a count of crossings.
 */
export function insideAtCorner(
  edges: Float64Array,
  b: number,
  end: number,
  first: number,
  total: number,
  px: number,
  py: number
): boolean {
  const flags = edges[b + 7]!;
  if ((flags & (end * 4)) === 0) return (flags & end) !== 0;
  let inside = false;
  for (let e = first * EDGE; e < (first + total) * EDGE; e += EDGE) {
    const y = edges[e + 1]!;
    const dy = edges[e + 3]!;
    if (y <= py !== y + dy <= py && edges[e]! + ((py - y) / dy) * edges[e + 2]! > px) inside = !inside;
  }
  return inside;
}

/** Marks the corners at which the border of a region touches itself: two edges start in one place. */
function markPinches(edges: Float64Array, first: number, total: number): void {
  for (let i = first * EDGE; i < (first + total) * EDGE; i += EDGE)
    for (let j = first * EDGE; j < i; j += EDGE) {
      if (edges[i] !== edges[j] || edges[i + 1] !== edges[j + 1]) continue;
      const x = edges[i]!;
      const y = edges[i + 1]!;
      for (let k = first * EDGE; k < (first + total) * EDGE; k += EDGE) {
        if (edges[k] === x && edges[k + 1] === y) edges[k + 7] = edges[k + 7]! | 4;
        if (edges[k]! + edges[k + 2]! === x && edges[k + 1]! + edges[k + 3]! === y)
          edges[k + 7] = edges[k + 7]! | 8;
      }
    }
}

/** Whether the region turns away from itself at corner i: then the place nearest to it lies inside. */
function reflex(xs: Float64Array, ys: Float64Array, i: number): boolean {
  const n = xs.length;
  const p = i > 0 ? i - 1 : n - 1;
  const q = i + 1 < n ? i + 1 : 0;
  return (xs[i]! - xs[p]!) * (ys[q]! - ys[i]!) - (ys[i]! - ys[p]!) * (xs[q]! - xs[i]!) < 0;
}

function grown<T extends Float64Array | Int32Array | Uint16Array>(old: T, needed: number): T {
  const bigger = new (old.constructor as new (length: number) => T)(Math.max(needed, old.length * 2));
  bigger.set(old);
  return bigger;
}
