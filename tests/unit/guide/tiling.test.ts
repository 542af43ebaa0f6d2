import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Box } from '$lib/geometry/point';
import { rectangle } from '$lib/guide/drawing';
import { customPaper, LONGEST_SIDE, papers } from '$lib/guide/papers';
import {
  groups,
  joinMarks,
  printed,
  reaches,
  rowLetters,
  tapedUpChecks,
  tileOnPaper,
  tileWhole
} from '$lib/guide/tiling';
import { runs } from '../../runs';

const rules = { margin: 10, overlap: 15 };
const box = (minX: number, minY: number, maxX: number, maxY: number): Box => ({ minX, minY, maxX, maxY });
const piece = (minX: number, minY: number, maxX: number, maxY: number) =>
  rectangle(box(minX, minY, maxX, maxY));

describe('tiling', () => {
  it('covers the cloth, neighbours sharing exactly the overlap, whatever paper, margin and overlap', () => {
    fc.assert(
      fc.property(
        fc.record({
          length: fc.double({ min: 50, max: 8000, noNaN: true }),
          width: fc.double({ min: 50, max: 3000, noNaN: true }),
          paper: fc.constantFrom(
            papers.A4,
            papers.Tabloid,
            papers.A0,
            papers['Roll 36 in'],
            customPaper(250, 700)
          ),
          margin: fc.integer({ min: 0, max: 15 }),
          overlap: fc.integer({ min: 5, max: 60 })
        }),
        ({ length, width, paper, margin, overlap }) => {
          const extent = box(-20, -10, length, width);
          const tiling = tileOnPaper(extent, [rectangle(extent)], paper, { margin, overlap });
          expect(printed(tiling)).toHaveLength(tiling.tiles.length);
          const first = tiling.tiles[0]!.window;
          const last = tiling.tiles.at(-1)!.window;
          expect(first.minX).toBe(-20);
          expect(first.minY).toBe(-10);
          expect(last.maxX).toBeGreaterThanOrEqual(length - 1e-6);
          expect(last.maxY).toBeGreaterThanOrEqual(width - 1e-6);
          for (const { row, column, window } of tiling.tiles) {
            const right = tiling.tiles.find((one) => one.row === row && one.column === column + 1);
            const above = tiling.tiles.find((one) => one.row === row + 1 && one.column === column);
            if (right) expect(window.maxX - right.window.minX).toBeCloseTo(overlap, 6);
            if (above) expect(window.maxY - above.window.minY).toBeCloseTo(overlap, 6);
          }
        }
      ),
      { seed: 20261201, numRuns: runs(200) }
    );
  });

  it('turns the paper to whichever side needs fewer printed sheets', () => {
    const across = piece(0, 0, 260, 150);
    const along = piece(0, 0, 150, 240);
    expect(tileOnPaper(box(0, 0, 260, 150), [across], papers.A4, rules).page).toEqual({
      width: 297,
      height: 210
    });
    expect(tileOnPaper(box(0, 0, 150, 240), [along], papers.A4, rules).page).toEqual({
      width: 210,
      height: 297
    });
  });

  it('leaves out sheets that show nothing of a piece, and keeps those that lie wholly inside one', () => {
    const extent = box(0, 0, 2000, 1000);
    const corners = [piece(0, 0, 50, 50), piece(1950, 950, 2000, 1000)];
    expect(printed(tileOnPaper(extent, corners, papers.A4, rules))).toHaveLength(2);
    const all = tileOnPaper(extent, [rectangle(extent)], papers.A4, rules);
    expect(printed(all)).toHaveLength(all.tiles.length);
    expect(reaches(rectangle(extent), extent, box(500, 500, 600, 600))).toBe(true);
    expect(reaches(corners[0]!, box(0, 0, 50, 50), box(500, 500, 600, 600))).toBe(false);
  });

  it('does not print a sheet for what its neighbour shows in the overlap', () => {
    const extent = box(0, 0, 340, 100);
    const tiling = tileOnPaper(extent, [piece(0, 0, 170, 100)], papers.A4, rules);
    expect(printed(tiling).map(({ label }) => label)).toEqual(['A1']);
  });

  it('splits the whole cloth into equal pages before 5.08 m', () => {
    const short = box(0, 0, 5000, 1500);
    expect(tileWhole(short, [rectangle(short)], rules).tiles).toHaveLength(1);
    const long = box(0, 0, 12_345, 1500);
    const tiling = tileWhole(long, [rectangle(long)], rules);
    expect(tiling.tiles).toHaveLength(3);
    expect(tiling.page.width).toBeLessThanOrEqual(LONGEST_SIDE);
    expect(tiling.tiles.at(-1)!.window.maxX).toBeCloseTo(12_345, 6);
  });

  it('marks the joins of printed neighbours at one place of the cloth, inside what both show', () => {
    const extent = box(0, 0, 900, 700);
    const tiling = tileOnPaper(extent, [rectangle(extent)], papers.A4, rules);
    const byLabel = new Map(tiling.tiles.map((tile) => [tile.label, tile.window]));
    const marks = joinMarks(tiling);
    expect(marks.length).toBe(2 * (tiling.rows * (tiling.columns - 1) + tiling.columns * (tiling.rows - 1)));
    for (const { at, between } of marks)
      for (const label of between) {
        const w = byLabel.get(label)!;
        expect(at.x > w.minX && at.x < w.maxX && at.y > w.minY && at.y < w.maxY).toBe(true);
      }
  });

  it('names rows past Z', () => {
    expect([0, 25, 26, 51, 52].map(rowLetters)).toEqual(['A', 'Z', 'AA', 'AZ', 'BA']);
  });

  it('gives length, width and both diagonals of the taped-up sheets, corner to corner', () => {
    const extent = box(-20, -10, 1000, 800);
    const { targets, checks } = tapedUpChecks(
      tileOnPaper(extent, [rectangle(extent)], papers.A3, rules),
      extent
    );
    const [a, b, c, d] = targets.map(({ at }) => at);
    expect(a!.y).toBe(b!.y);
    expect(a!.x).toBe(d!.x);
    expect(c).toEqual({ x: b!.x, y: d!.y });
    const [length, width, ac, bd] = checks.map((check) => check.length);
    expect(ac).toBeCloseTo(Math.hypot(length!, width!), 9);
    expect(bd).toBeCloseTo(ac!, 9);
    expect(length).toBeGreaterThan(950);
  });

  it('finds sheets that hang together and those that don’t', () => {
    const extent = box(0, 0, 2000, 200);
    const apart = tileOnPaper(extent, [piece(0, 0, 300, 150), piece(1700, 0, 2000, 150)], papers.A4, rules);
    expect(groups(apart).length).toBe(2);
    const together = tileOnPaper(extent, [rectangle(extent)], papers.A4, rules);
    expect(groups(together).length).toBe(1);
  });
});
