import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { Clipper, FillRule, type Path64, type Paths64 } from 'clipper2-ts';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { area } from '$lib/geometry/polygon';
import type { Point } from '$lib/geometry/point';
import { makeGuide } from '$lib/guide/guide';
import { guideChoiceSchema } from '$lib/guide/guide-choice';
import type { LayDocument } from '$lib/lay/document';
import { guideFonts, placedCuts, sampleDocument, sampleInput } from '../unit/guide/sample-lay';
import { readGuide, type ReadPage, type ReadPoint } from './read-guide';

/*
 * True size, proven from outside: the PDF is read back by pdf.js, the sheets are put together by their join marks as a
 * person would, and what they show is compared with the revision's outlines. Unit of the page: ISO 32000-1:2008, 8.3.2.3
 * (1/72 inch). Areas are united by Clipper2. What is printed is measured again in poppler's raster.
 */

/** How the guide draws cut lines. */
const CUT_WIDTH = 0.5;

interface Sheet {
  readonly label: string;
  readonly page: ReadPage;
  readonly window: { minX: number; minY: number; maxX: number; maxY: number };
  /** What has to be added to a place on this paper to get the place on the cloth. */
  offset: ReadPoint | null;
}

const rowOf = (label: string) => label.replace(/\d+$/, '');
const columnOf = (label: string) => Number(/\d+$/.exec(label)![0]);
const nextRow = (row: string) => String.fromCharCode(row.charCodeAt(0) + 1);

/** The sheets of a guide, not yet put together: pages with a window and a large label. */
function sheetsOf(pages: readonly ReadPage[]): Sheet[] {
  return pages.flatMap((page) => {
    const label = page.texts.find(({ text }) => /^[A-Z]+\d+$/.test(text))?.text;
    const window = page.paths.find((one) => one.clip && one.painted === 'stroked' && one.width > 0.49)?.clip;
    const told = page.texts.some(({ text }) => text.startsWith('Corner: '));
    return label && window && told ? [{ label, page, window, offset: null }] : [];
  });
}

/** Middles of the join marks' rings that lie in the window's overlap on one side, in order along it. */
function rings(sheet: Sheet, side: 'left' | 'right' | 'bottom' | 'top', overlap: number): ReadPoint[] {
  const { minX, minY, maxX, maxY } = sheet.window;
  return sheet.page.paths
    .filter((one) => one.closed && one.points.length === 24 && one.painted === 'stroked' && one.width < 0.3)
    .map(({ points }) => ({
      x: points.reduce((sum, p) => sum + p.x, 0) / 24,
      y: points.reduce((sum, p) => sum + p.y, 0) / 24
    }))
    .filter(({ x, y }) =>
      side === 'left'
        ? Math.abs(x - minX - overlap / 2) < 0.2
        : side === 'right'
          ? Math.abs(x - maxX + overlap / 2) < 0.2
          : side === 'bottom'
            ? Math.abs(y - minY - overlap / 2) < 0.2
            : Math.abs(y - maxY + overlap / 2) < 0.2
    )
    .sort((a, b) => a.x + a.y - b.x - b.y);
}

/** Puts the sheets together by their join marks, starting from one that says where it lies. */
function tapeUp(sheets: readonly Sheet[], overlap: number): void {
  const byLabel = new Map(sheets.map((sheet) => [sheet.label, sheet]));
  const first = sheets[0]!;
  const told = first.page.texts.find(({ text }) => text.startsWith('Corner: '))!.text;
  const [, sx, x, sy, y] = /^Corner: zero ([−+]) ([\d.]+) mm, near selvedge ([−+]) ([\d.]+) mm$/.exec(told)!;
  first.offset = {
    x: (sx === '−' ? -1 : 1) * Number(x) - first.window.minX,
    y: (sy === '−' ? -1 : 1) * Number(y) - first.window.minY
  };
  const open = [first];
  for (let sheet = open.pop(); sheet; sheet = open.pop()) {
    const row = rowOf(sheet.label);
    const column = columnOf(sheet.label);
    const neighbours = [
      [`${row}${column + 1}`, 'right', 'left'],
      [`${row}${column - 1}`, 'left', 'right'],
      [`${nextRow(row)}${column}`, 'top', 'bottom'],
      [`${String.fromCharCode(row.charCodeAt(0) - 1)}${column}`, 'bottom', 'top']
    ] as const;
    for (const [label, here, there] of neighbours) {
      const next = byLabel.get(label);
      if (!next || next.offset) continue;
      const a = rings(sheet, here, overlap);
      const b = rings(next, there, overlap);
      expect([label, a.length, b.length]).toEqual([label, 2, 2]);
      next.offset = { x: sheet.offset!.x + a[0]!.x - b[0]!.x, y: sheet.offset!.y + a[0]!.y - b[0]!.y };
      // The second mark says that neither sheet is turned or stretched.
      expect(
        Math.hypot(a[1]!.x - b[1]!.x + a[0]!.x * -1 + b[0]!.x, a[1]!.y - b[1]!.y - a[0]!.y + b[0]!.y)
      ).toBeLessThan(0.002);
      open.push(next);
    }
  }
}

/** Distance from `p` to the straight line a → b. */
function distance(p: ReadPoint, a: ReadPoint, b: ReadPoint): number {
  const dx = b.x - a.x;
  const dy = b.y - a.y;
  const length = dx * dx + dy * dy;
  const t = length === 0 ? 0 : Math.min(1, Math.max(0, ((p.x - a.x) * dx + (p.y - a.y) * dy) / length));
  return Math.hypot(a.x + t * dx - p.x, a.y + t * dy - p.y);
}

const edgesOf = (points: readonly ReadPoint[]) =>
  points.map((a, i) => [a, points[(i + 1) % points.length]!] as const);

/** The part of a → b in a rectangle (Liang and Barsky's parameters), or null. */
function seen(
  a: ReadPoint,
  b: ReadPoint,
  w: { minX: number; minY: number; maxX: number; maxY: number }
): readonly [ReadPoint, ReadPoint] | null {
  let low = 0;
  let high = 1;
  for (const [p, q] of [
    [a.x - b.x, a.x - w.minX],
    [b.x - a.x, w.maxX - a.x],
    [a.y - b.y, a.y - w.minY],
    [b.y - a.y, w.maxY - a.y]
  ] as const) {
    if (p === 0) {
      if (q < 0) return null;
    } else if (p < 0) low = Math.max(low, q / p);
    else high = Math.min(high, q / p);
  }
  if (low > high) return null;
  const at = (t: number) => ({ x: a.x + t * (b.x - a.x), y: a.y + t * (b.y - a.y) });
  return [at(low), at(high)];
}

interface Reassembled {
  /** Straight bits of cut line that the sheets show, on the cloth. */
  readonly lines: (readonly [ReadPoint, ReadPoint])[];
  /** Whole pieces, united from what each window shows of them. */
  readonly pieces: ReadPoint[][];
}

const GRID = 10_000;

function reassemble(sheets: readonly Sheet[]): Reassembled {
  const lines: (readonly [ReadPoint, ReadPoint])[] = [];
  const parts: Paths64 = [];
  for (const { page, window, offset } of sheets) {
    const move = (p: ReadPoint) => ({ x: p.x + offset!.x, y: p.y + offset!.y });
    const frame: Path64 = [
      [window.minX, window.minY],
      [window.maxX, window.minY],
      [window.maxX, window.maxY],
      [window.minX, window.maxY]
    ].map(([x, y]) => {
      const p = move({ x: x!, y: y! });
      return { x: Math.round(p.x * GRID), y: Math.round(p.y * GRID) };
    });
    for (const one of page.paths) {
      if (!one.closed || one.painted !== 'stroked' || one.dashed || Math.abs(one.width - CUT_WIDTH) > 0.01)
        continue;
      expect(one.clip).toEqual(window);
      for (const [a, b] of edgesOf(one.points)) {
        const bit = seen(a, b, window);
        if (bit) lines.push([move(bit[0]), move(bit[1])]);
      }
      const outline = one.points
        .map(move)
        .map(({ x, y }) => ({ x: Math.round(x * GRID), y: Math.round(y * GRID) }));
      parts.push(...Clipper.intersect([outline], [frame], FillRule.NonZero));
    }
  }
  const united = Clipper.union(parts, FillRule.NonZero);
  return { lines, pieces: united.map((one) => one.map(({ x, y }) => ({ x: x / GRID, y: y / GRID }))) };
}

/** Greatest distance of the outlines' points, a millimetre apart, from the nearest of `lines`. */
function farthest(outlines: readonly (readonly ReadPoint[])[], lines: Reassembled['lines']): number {
  const cell = 20;
  const grid = new Map<string, (readonly [ReadPoint, ReadPoint])[]>();
  for (const line of lines) {
    const [a, b] = line;
    const steps = Math.max(1, Math.ceil(Math.hypot(b.x - a.x, b.y - a.y) / (cell / 2)));
    const keys = new Set<string>();
    for (let i = 0; i <= steps; i++) {
      const x = Math.floor((a.x + ((b.x - a.x) * i) / steps) / cell);
      const y = Math.floor((a.y + ((b.y - a.y) * i) / steps) / cell);
      for (let dx = -1; dx <= 1; dx++) for (let dy = -1; dy <= 1; dy++) keys.add(`${x + dx}/${y + dy}`);
    }
    for (const key of keys) grid.set(key, [...(grid.get(key) ?? []), line]);
  }
  let worst = 0;
  for (const outline of outlines)
    for (const [a, b] of edgesOf(outline)) {
      const steps = Math.max(1, Math.ceil(Math.hypot(b.x - a.x, b.y - a.y)));
      for (let i = 0; i < steps; i++) {
        const p = { x: a.x + ((b.x - a.x) * i) / steps, y: a.y + ((b.y - a.y) * i) / steps };
        const near = grid.get(`${Math.floor(p.x / cell)}/${Math.floor(p.y / cell)}`) ?? [];
        worst = Math.max(worst, Math.min(...near.map(([c, d]) => distance(p, c, d))));
      }
    }
  return worst;
}

/** Cut outlines and cut-outs as the revision has them. */
function truth(document: LayDocument): Point[][] {
  return [...placedCuts(document).values()];
}

async function made(document: LayDocument, choice: object): Promise<Uint8Array> {
  // Cut-outs are left to the unit tests: here every closed cut line is a piece.
  const input = sampleInput(document);
  const panels = Object.fromEntries(
    Object.entries(input.panels).map(([key, panel]) => [
      key,
      { ...panel, shape: { ...panel.shape, cutOuts: [] } }
    ])
  );
  return (await makeGuide({ ...input, panels }, guideChoiceSchema.parse(choice), guideFonts())).bytes;
}

const long = sampleDocument(3, 1720);
/** Just so long that one page still holds it. */
const onePage = sampleDocument(3, 1665);

describe('the sheets, taped up by their join marks', () => {
  for (const [name, document, choice, overlap] of [
    ['A4', sampleDocument(), { kind: 'sheets', paper: 'A4' }, 15],
    ['Letter', sampleDocument(), { kind: 'sheets', paper: 'Letter' }, 15],
    ['A1 over 5 m', long, { kind: 'sheets', paper: 'A1' }, 15],
    ['A0 over 5 m', long, { kind: 'sheets', paper: 'A0' }, 15],
    ['a roll of 36 in over 5 m', long, { kind: 'sheets', paper: 'Roll 36 in' }, 15],
    ['pages of the cloth’s size over 8 m', sampleDocument(5), { kind: 'whole', overlap: 30 }, 30],
    [
      'a paper of any size',
      sampleDocument(),
      {
        kind: 'sheets',
        paper: 'custom',
        custom: { width: 333.3, height: 477.7 },
        margin: 7.3,
        overlap: 11.1
      },
      11.1
    ]
  ] as const)
    it(`show every piece whole, within 0.1 mm and 0.01 % of its area: ${name}`, async () => {
      const sheets = sheetsOf(await readGuide(await made(document, choice)));
      expect(sheets.length).toBeGreaterThan(1);
      tapeUp(sheets, overlap);
      expect(sheets.filter(({ offset }) => offset === null).map(({ label }) => label)).toEqual([]);
      const { lines, pieces } = reassemble(sheets);
      const outlines = truth(document);

      const missing = farthest(outlines, lines);
      const surplus = farthest(
        lines.map(([a, b]) => [a, b]),
        outlines.flatMap((outline) => edgesOf(outline))
      );
      expect(Math.max(missing, surplus)).toBeLessThan(0.1);

      expect(pieces).toHaveLength(outlines.length);
      const sorted = (list: readonly (readonly ReadPoint[])[]) =>
        list.map((one) => area(one)).sort((a, b) => a - b);
      sorted(pieces).forEach((got, i) => {
        const wanted = sorted(outlines)[i]!;
        expect(Math.abs(got - wanted) / wanted).toBeLessThan(1e-4);
      });
      console.log(
        `${name}: ${sheets.length} sheets, ${pieces.length} pieces, ` +
          `deviation ${Math.max(missing, surplus).toFixed(4)} mm, area ${(Math.max(...sorted(pieces).map((got, i) => Math.abs(got / sorted(outlines)[i]! - 1))) * 100).toFixed(6)} %`
      );
    });

  it('show a piece that crosses at least four sheets on each of them', async () => {
    const document = { ...sampleDocument(), placements: sampleDocument().placements.slice(0, 1) };
    const sheets = sheetsOf(await readGuide(await made(document, { kind: 'sheets', paper: 'A4' })));
    tapeUp(sheets, 15);
    expect(sheets.length).toBeGreaterThanOrEqual(4);
    const { pieces } = reassemble(sheets);
    expect(pieces).toHaveLength(1);
  });

  it('keep a left piece left: a mirrored outline would be far off', async () => {
    const document = { ...sampleDocument(), placements: sampleDocument().placements.slice(2, 3) };
    const mirrored = {
      ...document,
      placements: document.placements.map((one) => ({ ...one, flip: true, y: 300 }))
    };
    const sheets = sheetsOf(await readGuide(await made(document, { kind: 'sheets', paper: 'A4' })));
    tapeUp(sheets, 15);
    const { lines } = reassemble(sheets);
    expect(farthest(truth(document), lines)).toBeLessThan(0.1);
    expect(farthest(truth(mirrored), lines)).toBeGreaterThan(5);
  });
});

const poppler = spawnSync('pdftoppm', ['-v']).error === undefined;

describe.skipIf(!poppler)('printed by another program (poppler; skipped where pdftoppm is absent)', () => {
  const folder = mkdtempSync(path.join(tmpdir(), 'raster-'));
  afterAll(() => rmSync(folder, { recursive: true }));
  let pages: ReadPage[];
  let file: string;
  const DPI = 600;
  const px = (mm: number) => (mm / 25.4) * DPI;

  beforeAll(async () => {
    const bytes = await made(onePage, { kind: 'whole' });
    file = path.join(folder, 'whole.pdf');
    writeFileSync(file, bytes);
    pages = await readGuide(bytes);
  });

  /** Ink (0 to 1) of a crop, summed over rows or columns; x and y are mm from the page's lower left corner. */
  function crop(page: number, x: number, y: number, width: number, height: number, sum: 'columns' | 'rows') {
    const paper = pages[page - 1]!;
    const left = Math.round(px(x));
    const top = Math.round(px(paper.height - y - height));
    const [w, h] = [Math.round(px(width)), Math.round(px(height))];
    const args = ['-r', DPI, '-gray', '-f', page, '-l', page, '-x', left, '-y', top, '-W', w, '-H', h, file];
    const image = execFileSync('pdftoppm', args.map(String), { maxBuffer: 1 << 28 });
    const head = /^P5\s+(\d+)\s+(\d+)\s+255\s/.exec(image.subarray(0, 40).toString('latin1'))!;
    const [columns, rows] = [Number(head[1]), Number(head[2])];
    const ink = new Array<number>(sum === 'columns' ? columns : rows).fill(0);
    for (let r = 0; r < rows; r++)
      for (let c = 0; c < columns; c++)
        ink[sum === 'columns' ? c : r]! += 1 - image[head[0].length + r * columns + c]! / 255;
    return { ink, left, top };
  }

  /** Where the middle of the ink lies, in pixels of the page. */
  function middle({ ink, left, top }: ReturnType<typeof crop>, sum: 'columns' | 'rows'): number {
    const total = ink.reduce((a, b) => a + b, 0);
    expect(total).toBeGreaterThan(0);
    return (sum === 'columns' ? left : top) + ink.reduce((a, b, i) => a + b * (i + 0.5), 0) / total;
  }

  it('the 100 mm checks of a sheet measure 100 mm along both axes', () => {
    const n = pages.findIndex(({ texts }) => texts.some(({ text }) => text.startsWith('Corner: '))) + 1;
    const window = sheetsOf([pages[n - 1]!])[0]!.window;
    const margin = 10;
    // The tall ticks at 0 and 100 mm, above the shorter ones between.
    const tick = (at: number) =>
      middle(crop(n, window.minX + at - 1, margin + 3.2, 2, 0.6, 'columns'), 'columns');
    expect(((tick(100) - tick(0)) / DPI) * 25.4).toBeCloseTo(100, 1);
    const tickUp = (at: number) =>
      middle(crop(n, margin + 3.2, window.minY + at - 1, 0.6, 2, 'rows'), 'rows');
    expect(((tickUp(0) - tickUp(100)) / DPI) * 25.4).toBeCloseTo(100, 1);
    expect(((tick(500) - tick(0)) / DPI) * 25.4).toBeCloseTo(500, 1);
  });

  it('the squares of the ticket measure 100 mm and 4 in along both axes', () => {
    const across = (at: number) => middle(crop(1, 12 + at - 0.5, 18 + 60, 1, 2, 'columns'), 'columns');
    const up = (at: number) => middle(crop(1, 12 + 60, 18 + at - 0.5, 2, 1, 'rows'), 'rows');
    for (const side of [100, 4 * 25.4]) {
      expect(((across(side) - across(0)) / DPI) * 25.4).toBeCloseTo(side, 1);
      expect(((up(0) - up(side)) / DPI) * 25.4).toBeCloseTo(side, 1);
    }
  });

  it('zero line and end line of 5 m of cloth are as far apart as the lay is long, within 0.1 mm', () => {
    const n = pages.findIndex(({ texts }) => texts.some(({ text }) => text.startsWith('Corner: '))) + 1;
    const window = sheetsOf([pages[n - 1]!])[0]!.window;
    const length = Math.max(
      ...truth(onePage)
        .flat()
        .map(({ x }) => x)
    );
    const line = (x: number) =>
      middle(crop(n, window.minX + 20 + x - 1.2, window.minY + 13.5, 2.4, 1.5, 'columns'), 'columns');
    expect(length).toBeGreaterThan(5000);
    expect(Math.abs(((line(length) - line(0)) / DPI) * 25.4 - length)).toBeLessThan(0.1);
  });

  it('pdfinfo reads the same page sizes', () => {
    const told = execFileSync('pdfinfo', ['-f', '1', '-l', '99', file]).toString();
    const sizes = [...told.matchAll(/Page +\d+ size: +([\d.]+) x ([\d.]+) pts/g)].map((m) => [
      Number(m[1]),
      Number(m[2])
    ]);
    expect(sizes).toHaveLength(pages.length);
    sizes.forEach(([w, h], i) => {
      expect((w! / 72) * 25.4).toBeCloseTo(pages[i]!.width, 2);
      expect((h! / 72) * 25.4).toBeCloseTo(pages[i]!.height, 2);
    });
    expect(readFileSync(file).subarray(0, 8).toString()).toBe('%PDF-1.7');
  });
});
