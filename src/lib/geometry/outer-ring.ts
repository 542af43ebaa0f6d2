import { area, isSimple, side, withoutRepeats } from './polygon';
import { snapPoint, type Outline, type Point } from './point';

/*
 * What is left of a closed line that crosses itself when its loops are taken away: the outer border of all that it runs round
 * counter-clockwise more often than clockwise (winding number above 0). It works on whole thousandths of a millimetre, so that
 * every sign is exact: crossings are rounded to the grid, and edges are bent through the corners that they pass within a grid
 * step until none is left that crosses another.
 */

interface Edges {
  /** Node coordinates in whole thousandths. */
  readonly xs: number[];
  readonly ys: number[];
  /** Directed edges between nodes. */
  list: [number, number][];
}

/** An edge is bent through a node that it passes as near as this, in thousandths: half the diagonal of a grid square. */
const PASSES = 0.71;

/**
 * The simple, counter-clockwise outline round the largest region that `raw` winds round positively; on the 0.001 mm grid, without
 * points in straight runs. Holes and separate smaller regions are left out. null when there is no such region.
 */
export function outerRing(raw: Outline): Point[] | null {
  const snapped = withoutRepeats(raw.map(snapPoint));
  if (isSimple(snapped)) return area(snapped) > 0 ? withoutStraightPoints(snapped) : null;
  const edges = arrange(snapped);
  let largest: Point[] | null = null;
  let size = 0;
  for (const ring of rings(edges, borderEdges(edges))) {
    const points = ring.map((node) => ({ x: edges.xs[node]! / 1000, y: edges.ys[node]! / 1000 }));
    const ringArea = area(points);
    if (ringArea > size) {
      largest = points;
      size = ringArea;
    }
  }
  return largest && withoutStraightPoints(largest);
}

/** A simple outline on the grid without the points that lie exactly on the straight line between their neighbours. */
export function withoutStraightPoints(outline: Outline): Point[] {
  const whole = outline.map(({ x, y }) => ({ x: Math.round(x * 1000), y: Math.round(y * 1000) }));
  return outline.filter((_, i) => {
    const before = whole[(i + whole.length - 1) % whole.length]!;
    const at = whole[i]!;
    const after = whole[(i + 1) % whole.length]!;
    return side(before.x, before.y, at.x, at.y, after.x, after.y) !== 0;
  });
}

/** Cuts all edges where they meet, until they meet in nodes only. */
function arrange(outline: Outline): Edges {
  const edges: Edges = { xs: [], ys: [], list: [] };
  const names = new Map<string, number>();
  const node = (x: number, y: number): number => {
    const name = `${x} ${y}`;
    let index = names.get(name);
    if (index === undefined) {
      index = edges.xs.length;
      names.set(name, index);
      edges.xs.push(x);
      edges.ys.push(y);
    }
    return index;
  };
  const corners = outline.map(({ x, y }) => node(Math.round(x * 1000), Math.round(y * 1000)));
  edges.list = corners.map((corner, i) => [corner, corners[(i + 1) % corners.length]!]);
  // Each round bends edges by a grid step at most; two or three rounds settle real outlines.
  for (let round = 0; round < 20; round++) {
    const cuts = findCuts(edges, node);
    if (cuts.size === 0) return edges;
    edges.list = edges.list.flatMap(([u, v], i) => {
      const along = cuts.get(i);
      if (!along) return [[u, v]];
      const [dx, dy] = [edges.xs[v]! - edges.xs[u]!, edges.ys[v]! - edges.ys[u]!];
      const order = [...along].sort(
        (p, q) => (edges.xs[p]! - edges.xs[q]!) * dx + (edges.ys[p]! - edges.ys[q]!) * dy
      );
      const stops = [u, ...order, v];
      return stops.slice(1).map((stop, k): [number, number] => [stops[k]!, stop]);
    });
  }
  throw new Error('The outline folds over itself too finely to be told apart on the 0.001 mm grid');
}

/** For each edge (by number) the nodes at which it must be cut. */
function findCuts(edges: Edges, node: (x: number, y: number) => number): Map<number, Set<number>> {
  const { xs, ys, list } = edges;
  const cuts = new Map<number, Set<number>>();
  const cut = (edge: number, at: number) => {
    const [u, v] = list[edge]!;
    if (at === u || at === v) return;
    const known = cuts.get(edge);
    if (known) known.add(at);
    else cuts.set(edge, new Set([at]));
  };
  const left = ([u, v]: readonly [number, number]) => Math.min(xs[u]!, xs[v]!);
  const right = ([u, v]: readonly [number, number]) => Math.max(xs[u]!, xs[v]!);
  const order = list.map((_, i) => i).sort((p, q) => left(list[p]!) - left(list[q]!));
  let active: number[] = [];
  for (const i of order) {
    const one = list[i]!;
    active = active.filter((j) => right(list[j]!) >= left(one) - 1);
    for (const j of active) {
      const two = list[j]!;
      const [a, b] = one;
      const [c, d] = two;
      if (Math.max(ys[a]!, ys[b]!) < Math.min(ys[c]!, ys[d]!) - 1) continue;
      if (Math.max(ys[c]!, ys[d]!) < Math.min(ys[a]!, ys[b]!) - 1) continue;
      let touch = false;
      for (const [edge, from, to, ends] of [
        [i, a, b, [c, d]],
        [j, c, d, [a, b]]
      ] as const)
        for (const end of ends)
          if (end !== from && end !== to && passes(edges, from, to, end)) {
            cut(edge, end);
            touch = true;
          }
      if (touch || a === c || a === d || b === c || b === d) continue;
      const sc = side(xs[a]!, ys[a]!, xs[b]!, ys[b]!, xs[c]!, ys[c]!);
      const sd = side(xs[a]!, ys[a]!, xs[b]!, ys[b]!, xs[d]!, ys[d]!);
      const sa = side(xs[c]!, ys[c]!, xs[d]!, ys[d]!, xs[a]!, ys[a]!);
      const sb = side(xs[c]!, ys[c]!, xs[d]!, ys[d]!, xs[b]!, ys[b]!);
      if (sc > 0 === sd > 0 || sa > 0 === sb > 0) continue;
      const t = sa / (sa - sb);
      const at = node(Math.round(xs[a]! + (xs[b]! - xs[a]!) * t), Math.round(ys[a]! + (ys[b]! - ys[a]!) * t));
      cut(i, at);
      cut(j, at);
    }
    active.push(i);
  }
  return cuts;
}

/** Whether the edge from → to passes node `by` within a grid step, between its ends. */
function passes({ xs, ys }: Edges, from: number, to: number, by: number): boolean {
  const dx = xs[to]! - xs[from]!;
  const dy = ys[to]! - ys[from]!;
  const px = xs[by]! - xs[from]!;
  const py = ys[by]! - ys[from]!;
  const along = px * dx + py * dy;
  const length = dx * dx + dy * dy;
  if (along <= 0 || along >= length) return false;
  return Math.abs(px * dy - py * dx) <= PASSES * Math.sqrt(length);
}

/** The edges between winding number above 0 (on their left) and not. */
function borderEdges({ xs, ys, list }: Edges): [number, number][] {
  // Edges that run over each other are one edge with a count; those that cancel vanish.
  const counts = new Map<string, { u: number; v: number; count: number }>();
  for (const [u, v] of list) {
    if (u === v) continue;
    const [low, high, count] = u < v ? [u, v, 1] : [v, u, -1];
    const name = `${low} ${high}`;
    const known = counts.get(name);
    if (known) known.count += count;
    else counts.set(name, { u: low, v: high, count });
  }
  const net = [...counts.values()].filter(({ count }) => count !== 0);
  const border: [number, number][] = [];
  for (const edge of net) {
    const { u, v, count } = edge;
    const level = ys[u] === ys[v];
    const mx = (xs[u]! + xs[v]!) / 2;
    const my = (ys[u]! + ys[v]!) / 2;
    // A ray from the middle: to the right, or upwards from a level edge. It starts just beside the edge.
    let winding = 0;
    for (const other of net) {
      if (other === edge) continue;
      const px = xs[other.u]!;
      const py = ys[other.u]!;
      const qx = xs[other.v]!;
      const qy = ys[other.v]!;
      if (level ? px > mx === qx > mx : py > my === qy > my) continue;
      // Beyond the start of the ray or behind it as a whole: no need to ask for the side.
      const start = level ? my : mx;
      const low = level ? Math.min(py, qy) : Math.min(px, qx);
      if ((level ? Math.max(py, qy) : Math.max(px, qx)) < start) continue;
      const leftwards = level ? qx < px : qy > py;
      const ahead = low > start || side(px, py, qx, qy, mx, my) > 0 === leftwards;
      if (ahead) winding += leftwards ? other.count : -other.count;
    }
    const rayOnLeft = level ? xs[v]! > xs[u]! : ys[v]! < ys[u]!;
    const onLeft = rayOnLeft ? winding : winding + count;
    const onRight = rayOnLeft ? winding - count : winding;
    if (onLeft > 0 && onRight <= 0) border.push([u, v]);
    else if (onRight > 0 && onLeft <= 0) border.push([v, u]);
  }
  return border;
}

/** Closed rings of nodes along `border`, each visiting no node twice. */
function rings({ xs, ys }: Edges, border: [number, number][]): number[][] {
  const leaving = new Map<number, number[]>();
  for (const [u, v] of border) {
    const known = leaving.get(u);
    if (known) known.push(v);
    else leaving.set(u, [v]);
  }
  const heading = (u: number, v: number) => Math.atan2(ys[v]! - ys[u]!, xs[v]! - xs[u]!);
  const found: number[][] = [];
  for (const [start, first] of border) {
    const options = leaving.get(start)!;
    if (!options.includes(first)) continue;
    options.splice(options.indexOf(first), 1);
    const path = [start];
    let before = start;
    let at = first;
    for (;;) {
      const seen = path.indexOf(at);
      if (seen >= 0) {
        // A ring closes here; what came before it goes on.
        found.push(path.splice(seen));
        if (path.length === 0) break;
      }
      path.push(at);
      const next = leaving.get(at)!;
      if (next.length === 0) break;
      // The region lies to the left: its border goes on along the first edge clockwise from where we came.
      const back = heading(at, before);
      const turn = (to: number) => {
        const angle = (back - heading(at, to)) % (2 * Math.PI);
        return angle <= 0 ? angle + 2 * Math.PI : angle;
      };
      const best = next.reduce((least, to) => (turn(to) < turn(least) ? to : least));
      next.splice(next.indexOf(best), 1);
      before = at;
      at = best;
    }
  }
  return found;
}
