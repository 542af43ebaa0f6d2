import type { Strip } from '$lib/cloth/strip';
import { cosSin } from '$lib/geometry/placement';
import type { Outline, Point } from '$lib/geometry/point';
import { signedTurn } from '$lib/units/angle';
import type { Degrees, Millimetres, SquareMillimetres } from '$lib/units/measure';
import type { LayDocument } from './document';
import { CLEARANCE_SLACK } from './findings-between';
import { panelOf, type LayPanel, type PanelBook } from './panel-book';
import { pieceArea } from './piece-area';
import { allowedTurns, grainTurns } from './turns';
import type { Readings } from './verdict';
import { layeredWidth } from './yields';

/*
 * Least length: the length below which no lay of these pieces can exist. Each bound is proven, the greatest counts:
 *  - area: pieces don't overlap, so they need at least their area;
 *  - blade: each piece grown by half the clearance overlaps no other and stays in the strip grown as much. A piece of area A
 *    grown by r covers at least (√A + r√π)² (Brunn and Minkowski), so that (width + c) × (length + c) is at least the sum of these;
 *  - longest: no piece can be shorter along the warp than it is at the best of its allowed turns;
 *  - side by side: on an upright line each piece takes what it covers there and the clearance, all of them at most the width and
 *    one clearance. A piece that takes more than j of k + 1 equal parts of that takes j of the k places that such pieces have
 *    beside each other (a dual feasible function: Lueker 1983, Fekete and Schepers 2001). With k = 1 these are the stretches of
 *    more than half the width, which follow one another along the warp.
 * It speaks of lays in which nothing overlaps and nothing hangs over a selvedge, not of the hundredth of a
 * millimetre that the check calls touching.
 */

/** How many copies of a panel all needs together ask for. */
interface Wanted {
  readonly panel: LayPanel;
  readonly count: number;
}

/** The least length of all needs, placed or not, rounded down to 0.001 mm, and the bound that it comes from. */
export function leastLength(
  document: Pick<LayDocument, 'strip' | 'garments' | 'needs'>,
  book: PanelBook
): Readings['leastLength'] {
  const { strip } = document;
  const wanted = wantedPanels(document, book);
  if (wanted.length === 0) return { length: 0, reason: { kind: 'nothing' } };

  const total = wanted.reduce((sum, { panel, count }) => sum + pieceArea(panel.shape) * count, 0);
  const width = layeredWidth(strip);
  let best: Readings['leastLength'] = {
    length: total / width,
    reason: { kind: 'area', area: total, width }
  };
  for (const { panel } of wanted) {
    // On a fold across the cloth a piece is as long as its half.
    const halved = strip.spread[0]!.fold === 'start' && panel.shape.foldLine !== null;
    const length = shortest(panel, strip) / (halved ? 2 : 1);
    if (length > best.length) best = { length, reason: { kind: 'longest', panel: panel.shape.name, length } };
  }
  const grown = withBlade(wanted, strip);
  if (grown > best.length)
    best = { length: grown, reason: { kind: 'blade', area: total, width, clearance: strip.clearance } };
  for (const places of PLACES) {
    const { length, panels } = sideBySide(wanted, strip, places);
    if (length > best.length) best = { length, reason: { kind: 'side-by-side', panels, places } };
  }
  return { ...best, length: Math.max(0, Math.floor(best.length * 1000 + 1e-6) / 1000) };
}

/** The area of all needs, placed or not. */
export function neededArea(
  document: Pick<LayDocument, 'garments' | 'needs'>,
  book: PanelBook
): SquareMillimetres {
  return wantedPanels(document, book).reduce(
    (sum, { panel, count }) => sum + pieceArea(panel.shape) * count,
    0
  );
}

function wantedPanels(
  { garments, needs }: Pick<LayDocument, 'garments' | 'needs'>,
  book: PanelBook
): Wanted[] {
  const byId = new Map(garments.map((garment) => [garment.id, garment]));
  const counts = new Map<LayPanel, number>();
  for (const need of needs) {
    const panel = panelOf(book, byId.get(need.garment), need.panel);
    if (panel) counts.set(panel, (counts.get(panel) ?? 0) + need.count);
  }
  return [...counts].map(([panel, count]) => ({ panel, count }));
}

/** What is worked out once a panel. */
interface Figures {
  readonly hull: Outline;
  readonly wide: Map<string, Millimetres>;
}
const figures = new WeakMap<LayPanel, Figures>();

function figuresOf(panel: LayPanel): Figures {
  let known = figures.get(panel);
  if (!known) {
    known = { hull: convexHull(panel.shape.cut), wide: new Map() };
    figures.set(panel, known);
  }
  return known;
}

/** The shortest that a panel can lie along the warp, at any turn within its tolerance, flipped or not. */
export function shortest(panel: LayPanel, strip: Strip): Millimetres {
  const { hull } = figuresOf(panel);
  const allowed = allowedTurns(panel, strip);
  const centres = allowed && allowed.length > 0 ? allowed : grainTurns(panel.turns);
  const spans: [Degrees, Degrees][] = centres
    ? centres.map((turn) => [turn - panel.grainTolerance, turn + panel.grainTolerance])
    : [[0, 180]];
  let least = Infinity;
  for (const [from, to] of spans)
    for (const turn of [from, to, ...turnsOnEdge(hull, from, to)])
      least = Math.min(least, extent(hull, turn));
  return least;
}

/**
 * Turns in from … to at which an edge of the hull stands upright. Between two of them the length along the warp is
 * that of one pair of corners, a cosine and so concave: its least value is at the ends.
 */
function turnsOnEdge(hull: Outline, from: Degrees, to: Degrees): Degrees[] {
  if (from === to) return [];
  const turns: Degrees[] = [];
  hull.forEach((a, i) => {
    const b = hull[(i + 1) % hull.length]!;
    const edge = (Math.atan2(b.y - a.y, b.x - a.x) * 180) / Math.PI;
    for (const upright of [90 - edge, 270 - edge]) {
      const turn = from + ((signedTurn(upright - from) + 360) % 360);
      if (turn <= to) turns.push(turn);
      // A flip mirrors: the same turn the other way round.
      const mirrored = from + ((signedTurn(-upright - from) + 360) % 360);
      if (mirrored <= to) turns.push(mirrored);
    }
  });
  return turns;
}

/** Length along x of `points` at `turn`, the shorter of unflipped and flipped. */
function extent(points: Outline, turn: Degrees): Millimetres {
  const radians = (turn * Math.PI) / 180;
  const exact = turn % 90 === 0;
  const [cos, sin] = exact ? cosSin(turn) : [Math.cos(radians), Math.sin(radians)];
  let [min, max, minFlipped, maxFlipped] = [Infinity, -Infinity, Infinity, -Infinity];
  for (const { x, y } of points) {
    const plain = x * cos - y * sin;
    const flipped = x * cos + y * sin;
    min = Math.min(min, plain);
    max = Math.max(max, plain);
    minFlipped = Math.min(minFlipped, flipped);
    maxFlipped = Math.max(maxFlipped, flipped);
  }
  return Math.min(max - min, maxFlipped - minFlipped);
}

/** Convex hull, counter-clockwise (Andrew, 1979: two monotone chains). */
function convexHull(points: Outline): Point[] {
  const sorted = points.toSorted((a, b) => a.x - b.x || a.y - b.y);
  const chain = (ordered: Outline): Point[] => {
    const kept: Point[] = [];
    for (const p of ordered) {
      while (kept.length >= 2) {
        const [a, b] = [kept.at(-2)!, kept.at(-1)!];
        if ((b.x - a.x) * (p.y - a.y) - (b.y - a.y) * (p.x - a.x) > 0) break;
        kept.pop();
      }
      kept.push(p);
    }
    return kept.slice(0, -1);
  };
  return [...chain(sorted), ...chain(sorted.toReversed())];
}

/** How many places side by side are looked at; more rarely bind. */
const PLACES = [1, 2, 3, 4] as const;

/** What the check surely keeps between two pieces. */
const surely = (clearance: Millimetres): Millimetres => Math.max(0, clearance - CLEARANCE_SLACK);

/** What the pieces need with half the clearance around each; 0 where the cloth does not lie in one zone without a fold. */
function withBlade(wanted: readonly Wanted[], strip: Strip): Millimetres {
  const [zone] = strip.spread;
  if (!zone || strip.spread.length > 1 || zone.fold !== 'none') return 0;
  const clearance = surely(strip.clearance);
  const rim = (clearance / 2) * Math.sqrt(Math.PI);
  const total = wanted.reduce(
    (sum, { panel, count }) =>
      sum + ((Math.sqrt(pieceArea(panel.shape)) + rim) ** 2 * count) / zone.layers.length,
    0
  );
  return total / (zone.to - zone.from + clearance) - clearance;
}

/**
 * What the pieces need when pieces that take more than a (`places` + 1)th of the width have so many places beside each other. On
 * several layers a placement gives as many pieces. Panels that may turn through a range count for nothing here: their
 * stretch at the best turn is not worked out.
 */
function sideBySide(
  wanted: readonly Wanted[],
  strip: Strip,
  places: number
): { length: Millimetres; panels: readonly string[] } {
  const [zone] = strip.spread;
  // A piece on a fold takes half of its width there.
  if (!zone || strip.spread.length > 1 || zone.fold !== 'none') return { length: 0, panels: [] };
  const clearance = surely(strip.clearance);
  const whole = zone.to - zone.from + clearance;
  const parts = Array.from({ length: places }, (_, j) => ((j + 1) * whole) / (places + 1) - clearance);
  let length = 0;
  const panels: string[] = [];
  for (const { panel, count } of wanted) {
    const turns = allowedTurns(panel, strip);
    if (!turns || turns.length === 0 || panel.grainTolerance > 0) continue;
    const stretch = Math.min(
      ...turns.map((turn) => parts.reduce((sum, part) => sum + wideStretch(panel, turn, part), 0) / places)
    );
    if (stretch <= 0) continue;
    length += (stretch * count) / zone.layers.length;
    panels.push(panel.shape.name);
  }
  return { length, panels };
}

/** For how much of its length a panel at `turn` covers more than `most` of the width; the less of flipped and not. */
function wideStretch(panel: LayPanel, turn: Degrees, most: Millimetres): Millimetres {
  const { wide } = figuresOf(panel);
  const key = `${turn}/${most}`;
  let known = wide.get(key);
  if (known === undefined) {
    const outlines = [panel.shape.cut, ...panel.shape.cutOuts];
    known = Math.min(...[false, true].map((flip) => stretchAbove(outlines, turn, flip, most)));
    wide.set(key, known);
  }
  return known;
}

/** Total length in x on which an upright line meets the outlines (even-odd) over more than `most`. */
function stretchAbove(
  outlines: readonly Outline[],
  turn: Degrees,
  flip: boolean,
  most: Millimetres
): Millimetres {
  const [cos, sin] = cosSin(turn);
  const edges: [Point, Point][] = [];
  for (const outline of outlines) {
    const turned = outline.map(({ x, y }) => {
      const up = flip ? -y : y;
      return { x: x * cos - up * sin, y: x * sin + up * cos };
    });
    turned.forEach((a, i) => {
      const b = turned[(i + 1) % turned.length]!;
      if (a.x !== b.x) edges.push(a.x < b.x ? [a, b] : [b, a]);
    });
  }
  const xs = [...new Set(edges.flatMap(([a, b]) => [a.x, b.x]))].sort((a, b) => a - b);
  let sum = 0;
  for (let i = 0; i + 1 < xs.length; i++) {
    const [from, to] = [xs[i]!, xs[i + 1]!];
    const across = edges.filter(([a, b]) => a.x <= from && b.x >= to);
    const atX = (x: number): number[] =>
      across.map(([a, b]) => a.y + ((b.y - a.y) * (x - a.x)) / (b.x - a.x));
    // No corner lies between, so the order at the middle is the order throughout.
    const middle = atX((from + to) / 2);
    const order = middle.map((_, k) => k).sort((p, q) => middle[p]! - middle[q]!);
    const covered = (ys: number[]): number =>
      order.reduce((length, edge, k) => length + (k % 2 === 0 ? -1 : 1) * ys[edge]!, 0);
    const [start, end] = [covered(atX(from)) - most, covered(atX(to)) - most];
    if (start > 0 && end > 0) sum += to - from;
    else if (start > 0 || end > 0) sum += ((to - from) * Math.max(start, end)) / Math.abs(start - end);
  }
  return sum;
}
