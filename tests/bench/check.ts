/*
 * How long the check of a lay takes beside a naive run of the general polygon library over every pair, and the live check of
 * 50 dragged pieces. Prints a table; asserts nothing about time. Run: npx tsx tests/bench/check.ts
 */
import polygonClipping, { type Polygon } from 'polygon-clipping';
import { noShrinkage } from '$lib/cloth/shrinkage';
import { noSplices } from '$lib/cloth/what-to-buy';
import { openSpread } from '$lib/cloth/strip';
import { placeOutline } from '$lib/geometry/placement';
import { snapPoint, type Point } from '$lib/geometry/point';
import { check } from '$lib/lay/check';
import type { LayDocument, LayPlacement } from '$lib/lay/document';
import { createLive } from '$lib/lay/live';
import { panelKey, type LayPanel, type PanelBook } from '$lib/lay/panel-book';

/** Seeded, so that every run checks the same lay (mulberry32, public domain). */
function seeded(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4_294_967_296;
  };
}

const PIECES = 300;
const POINTS = 100;
const KINDS = 30;
const random = seeded(2026);

function wavy(): Point[] {
  const [a, b, c] = [random() * 12, random() * 8, random() * 6.28];
  return Array.from({ length: POINTS }, (_, i) => {
    const angle = (2 * Math.PI * i) / POINTS;
    const radius = 70 + a * Math.sin(3 * angle + c) + b * Math.sin(7 * angle);
    return snapPoint({ x: radius * 1.3 * Math.cos(angle), y: radius * Math.sin(angle) });
  });
}

function panelOf(id: string, cut: Point[]): LayPanel {
  const middle = { x: 0, y: 0 };
  return {
    shape: {
      panel: id,
      name: `Piece ${id}`,
      hand: 'left',
      symmetric: true,
      cut,
      sew: cut,
      cutOuts: [],
      notches: [],
      drillHoles: [],
      internalLines: [],
      grain: { from: middle, to: { x: 50, y: 0 } },
      matchPoints: [],
      label: middle,
      foldLine: null
    },
    role: 'main',
    howMany: PIECES / KINDS,
    paired: false,
    turns: 'bothWays',
    grainTolerance: 0,
    grainConfirmed: true
  };
}

const panels = Array.from({ length: KINDS }, (_, i) => panelOf(`${i}`, wavy()));
const book: PanelBook = Object.fromEntries(panels.map((one) => [panelKey('style', one.shape.panel), one]));

/** Rows of pieces whose boxes reach into each other; `apart` mm beyond what makes them overlap. */
function layOf(pitchX: number, pitchY: number): LayDocument {
  const placements: LayPlacement[] = Array.from({ length: PIECES }, (_, i) => ({
    id: `p${i}`,
    panel: `${i % KINDS}`,
    garment: 'g',
    x: 110 + pitchX * Math.floor(i / 8) + (i % 2) * 20,
    y: 95 + pitchY * (i % 8),
    turn: i % 3 === 0 ? 180 : 0,
    flip: i % 5 === 0,
    locked: false
  }));
  return {
    schema: 3,
    strip: {
      spread: openSpread(1500),
      usableWidth: 1500,
      fullWidth: 1520,
      length: null,
      nap: 'none',
      sidesAlike: true,
      repeat: { along: null, across: null },
      flaws: [],
      given: null,
      shrinkage: noShrinkage,
      splices: noSplices,
      wholeRepeats: false,
      endAllowance: { start: 20, end: 20 },
      reserve: 0,
      buyStep: 100,
      clearance: 3
    },
    garments: [{ id: 'g', orderItem: 'i', styleVersion: 'style', label: 'Bench' }],
    needs: panels.map((one) => ({
      garment: 'g',
      panel: one.shape.panel,
      hand: 'either' as const,
      count: PIECES / KINDS
    })),
    placements,
    rules: { matchGroups: [], matchTolerance: 1, mayCoverFlaws: [] }
  };
}

/** Every pair through the general library, the way one would write it first. */
function naive(document: LayDocument): number {
  const polygons = document.placements.map((one): Polygon => [
    placeOutline(book[panelKey('style', one.panel)]!.shape.cut, one).map(({ x, y }) => [x, y])
  ]);
  let overlaps = 0;
  for (let i = 0; i < polygons.length; i++)
    for (let j = i + 1; j < polygons.length; j++)
      if (polygonClipping.intersection(polygons[i]!, polygons[j]!).length > 0) overlaps++;
  return overlaps;
}

function times(runs: number, work: () => unknown): number[] {
  work();
  return Array.from({ length: runs }, () => {
    const start = performance.now();
    work();
    return performance.now() - start;
  }).sort((a, b) => a - b);
}

const at = (sorted: number[], share: number): number =>
  sorted[Math.min(sorted.length - 1, Math.floor(sorted.length * share))]!;
const ms = (value: number): string => `${value.toFixed(2)} ms`;

console.log(`Check of ${PIECES} pieces of ${POINTS} points`);
for (const [name, document] of [
  ['apart, boxes overlapping', layOf(205, 178)],
  ['some overlaps', layOf(196, 160)]
] as const) {
  const verdict = check(document, book);
  const found = verdict.findings.filter(({ kind }) => kind === 'overlap').length;
  const ours = times(20, () => check(document, book));
  const [start, overlaps] = [performance.now(), naive(document)];
  const theirs = performance.now() - start;
  console.table({
    [name]: {
      'findings (overlaps)': `${verdict.findings.length} (${found})`,
      'check median': ms(at(ours, 0.5)),
      'check p95': ms(at(ours, 0.95)),
      'naive pairs': ms(theirs),
      'naive overlaps': overlaps,
      ratio: `${(theirs / at(ours, 0.5)).toFixed(0)} ×`
    }
  });
}

console.log(`Live check, ${PIECES} pieces of ${POINTS} points on the cloth`);
const document = layOf(205, 178);
for (const count of [1, 10, 50]) {
  const live = createLive(document, book);
  const held = document.placements.slice(120, 120 + count);
  const ids = held.map(({ id }) => id);
  let step = 0;
  const drag = times(200, () => {
    step++;
    live.moveTo(
      ids,
      held.map((one) => ({
        ...one,
        x: one.x + 400 * Math.sin(step / 17),
        y: one.y + 200 * Math.sin(step / 11)
      }))
    );
  });
  console.table({
    [`${count} dragged`]: { median: ms(at(drag, 0.5)), p95: ms(at(drag, 0.95)), worst: ms(at(drag, 1)) }
  });
}
