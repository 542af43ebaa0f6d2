import { Clipper64, ClipType, FillRule, type Path64, type Paths64 } from 'clipper2-ts';

/** A closed outline on whole numbers: xs[i], ys[i], counter-clockwise, no two neighbouring edges in line. */
export interface Ring {
  readonly xs: Float64Array;
  readonly ys: Float64Array;
}

/**
 * Where B must not be: every p such that B moved by p overlaps A, as rings with that region to their left. The
 * region is the Minkowski sum of A and −B. Its border is a part of the convolution of the two outlines, whose
 * winding number around p counts the common regions of A and B + p (Guibas, Ramshaw and Stolfi 1983, 'A kinetic
 * framework for computational geometry', from memory); one union by that number finds it.
 *
 * Coordinates are whole numbers below 2²⁴ in size, so that every turn is decided exactly.
 */
export function noFitRings(a: Ring, b: Ring): Ring[] {
  const paths = convolution(a, b);
  const clipper = new Clipper64();
  clipper.preserveCollinear = false;
  clipper.addSubject(paths);
  const solution: Paths64 = [];
  clipper.execute(ClipType.Union, FillRule.NonZero, solution);
  return solution.map(ringOf).filter((ring) => ring.xs.length >= 3);
}

function ringOf(path: Path64): Ring {
  return { xs: Float64Array.from(path, (p) => p.x), ys: Float64Array.from(path, (p) => p.y) };
}

/**
 * The convolution of A and −B as closed paths. Each edge of one outline is carried by the corners of the other
 * whose turn its direction lies within, backwards by a reflex corner. Ties of parallel edges are broken as if A
 * were turned a hair clockwise, the same for both kinds, so that every path closes.
 */
function convolution(a: Ring, b: Ring): Paths64 {
  const n = a.xs.length;
  const m = b.xs.length;
  const adx = new Float64Array(n);
  const ady = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    adx[i] = a.xs[(i + 1) % n]! - a.xs[i]!;
    ady[i] = a.ys[(i + 1) % n]! - a.ys[i]!;
  }
  const bdx = new Float64Array(m);
  const bdy = new Float64Array(m);
  for (let j = 0; j < m; j++) {
    bdx[j] = b.xs[j]! - b.xs[(j + 1) % m]!;
    bdy[j] = b.ys[j]! - b.ys[(j + 1) % m]!;
  }
  const from: number[] = [];
  const to: number[] = [];
  for (let j = 0; j < m; j++) {
    const p = (j + m - 1) % m;
    const convex = bdx[p]! * bdy[j]! - bdy[p]! * bdx[j]! > 0;
    const [u, v] = convex ? [p, j] : [j, p];
    for (let i = 0; i < n; i++) {
      const dx = adx[i]!;
      const dy = ady[i]!;
      if (bdx[u]! * dy - bdy[u]! * dx <= 0 || dx * bdy[v]! - dy * bdx[v]! < 0) continue;
      const here = i * m + j;
      const next = ((i + 1) % n) * m + j;
      from.push(convex ? here : next);
      to.push(convex ? next : here);
    }
  }
  for (let i = 0; i < n; i++) {
    const p = (i + n - 1) % n;
    const convex = adx[p]! * ady[i]! - ady[p]! * adx[i]! > 0;
    const [u, v] = convex ? [p, i] : [i, p];
    for (let j = 0; j < m; j++) {
      const dx = bdx[j]!;
      const dy = bdy[j]!;
      if (adx[u]! * dy - ady[u]! * dx < 0 || dx * ady[v]! - dy * adx[v]! <= 0) continue;
      const here = i * m + j;
      const next = i * m + ((j + 1) % m);
      from.push(convex ? here : next);
      to.push(convex ? next : here);
    }
  }
  const count = from.length;
  const head = new Int32Array(n * m).fill(-1);
  const chain = new Int32Array(count);
  for (let k = 0; k < count; k++) {
    chain[k] = head[from[k]!]!;
    head[from[k]!] = k;
  }
  const paths: Paths64 = [];
  for (let start = 0; start < n * m; start++) {
    while (head[start]! >= 0) {
      const path: Path64 = [];
      let node = start;
      do {
        const i = Math.floor(node / m);
        const j = node % m;
        path.push({ x: a.xs[i]! - b.xs[j]!, y: a.ys[i]! - b.ys[j]! });
        const k = head[node]!;
        if (k < 0) throw new Error(`The convolution does not close at corners ${i} and ${j}`);
        head[node] = chain[k]!;
        node = to[k]!;
      } while (node !== start);
      untwist(path);
      if (path.length >= 3) paths.push(path);
    }
  }
  return paths;
}

/** Takes out corners in line, and ways that run back over themselves: they change no winding number. */
function untwist(path: Path64): void {
  for (let i = 0; path.length >= 3 && i < path.length;) {
    const n = path.length;
    const p = path[(i + n - 1) % n]!;
    const q = path[(i + 1) % n]!;
    const c = path[i]!;
    if ((c.x - p.x) * (q.y - c.y) - (c.y - p.y) * (q.x - c.x) !== 0) {
      i++;
      continue;
    }
    path.splice(i, 1);
    i = Math.max(0, i - 2);
  }
}
