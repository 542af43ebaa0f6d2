import { existsSync, readdirSync, readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { outlineDistance } from '$lib/geometry/distance';
import { offsetOutline } from '$lib/geometry/offset';
import { overlapDepth } from '$lib/geometry/overlap';
import { overlapRegion } from '$lib/geometry/overlap-region';
import { area, isSimple, perimeter } from '$lib/geometry/polygon';
import { placeOutline } from '$lib/geometry/placement';
import type { Outline, Point } from '$lib/geometry/point';
import { snapPoint } from '$lib/geometry/point';
import { prepare } from '$lib/geometry/prepared';
import { randomFrom, star } from '../unit/geometry/outlines';
import { areaBy, differenceInArea, distanceByJsts, offsetBy, sharedAreaBy } from './geometry-libraries';

/*
 * Area, overlap, distance and allowance against independent geometry libraries, on random outlines and on those of the open strip packing data
 * of the EURO special interest group on cutting and packing (ESICUP/datasets, 2d_irregular, CC0 1.0; gardeyn0 and gardeyn2 derive
 * from Lallier et al. 2022, CC BY 4.0), which are read from beside the project and left out where they are absent.
 */

const folder = new URL('../../../shared/data/strip-packing/', import.meta.url);
const absent = !existsSync(folder);
if (absent)
  console.log('The open strip packing data are not beside the project: only random outlines are compared.');

interface Named {
  readonly name: string;
  readonly outline: Outline;
}

/** Published outlines as pieces of a garment's size: scaled so that the strip is 1,400 mm wide. */
function publishedOutlines(): Named[] {
  if (absent) return [];
  return readdirSync(folder)
    .filter((file) => file.endsWith('.json') && !/published|optimal/.test(file))
    .flatMap((file) => {
      const instance = JSON.parse(readFileSync(new URL(file, folder), 'utf8')) as {
        stripWidth: number;
        pieces: { id: string; outline: [number, number][] }[];
      };
      const scale = 1400 / instance.stripWidth;
      return instance.pieces.map(({ id, outline }) => ({
        name: `${file} ${id}`,
        outline: outline.map(([x, y]) => snapPoint({ x: x * scale, y: y * scale }))
      }));
    });
}

const random = randomFrom(91);
const outlines: Named[] = [
  ...Array.from({ length: 60 }, (_, i) => ({ name: `random ${i}`, outline: star(5 + i, 200, random) })),
  ...publishedOutlines()
];

/** Pairs that lie over each other in part: each outline with the next one, turned. */
const pairs = outlines.map(({ name, outline }, i): [string, Outline, Outline] => {
  const other = outlines[(i + 1) % outlines.length]!.outline;
  const placement = {
    x: random() * 200,
    y: random() * 200,
    turn: Math.floor(random() * 3600) / 10,
    flip: i % 2 === 0
  };
  return [name, outline, placeOutline(other, placement).map(snapPoint)];
});

describe('geometry against independent libraries', () => {
  it('has outlines to compare', () => {
    expect(outlines.length).toBeGreaterThanOrEqual(60);
    for (const { name, outline } of outlines) expect(isSimple(outline), name).toBe(true);
  });

  it('agrees on areas', () => {
    for (const { name, outline } of outlines)
      for (const [library, measure] of Object.entries(areaBy))
        expect(
          Math.abs(Math.abs(measure(outline)) / area(outline) - 1),
          `${name} by ${library}`
        ).toBeLessThan(1e-9);
  });

  it('agrees on shared areas, and convicts exactly what shares some', () => {
    let overlapping = 0;
    for (const [name, a, b] of pairs) {
      const ours = overlapRegion(a, b).area;
      const { depth } = overlapDepth(prepare(a), prepare(b));
      for (const [library, measure] of Object.entries(sharedAreaBy)) {
        const theirs = measure(a, b);
        // Whole thousandths round the crossings of the one library.
        expect(Math.abs(theirs - ours), `${name} by ${library}`).toBeLessThan(
          0.002 * (perimeter(a) + perimeter(b))
        );
        if (theirs > 1) expect(depth, name).toBeGreaterThan(0.0005);
        if (depth === 0) expect(theirs, name).toBeLessThan(1e-6);
      }
      if (ours > 1) overlapping++;
    }
    expect(overlapping).toBeGreaterThan(pairs.length / 2);
  });

  it('agrees on distances', () => {
    for (const [name, a, b] of pairs) {
      const away = b.map(({ x, y }) => ({ x: x + 600, y: y + 150 }));
      const ours = outlineDistance(prepare(a), prepare(away)).distance;
      expect(ours, name).toBeCloseTo(distanceByJsts(a, away), 8);
    }
  });

  it('agrees on equal allowances with mitred corners', () => {
    let compared = 0;
    for (const { name, outline } of outlines) {
      // Corners so sharp that the tip is cut off are cut off differently by each library, and left out here.
      if (sharpest(outline) < 32) continue;
      compared++;
      for (const distance of [6, 10, 15]) {
        const ours = offsetOutline(
          outline.map((point, i) => ({
            points: [point, outline[(i + 1) % outline.length]!],
            distance,
            corner: { kind: 'mitred' as const }
          }))
        )!;
        for (const [library, offset] of Object.entries(offsetBy)) {
          const theirs = offset(outline, distance);
          const apart = differenceInArea(ours, theirs);
          // The whole border may run a thousandth or two aside, no more.
          expect(apart, `${name}, ${distance} mm by ${library}`).toBeLessThan(0.003 * perimeter(theirs));
        }
      }
    }
    expect(compared).toBeGreaterThan(20);
  });

  it('agrees on the allowance of a rectangle as arithmetic has it', () => {
    // From common practice, no published source: cut width − sew width = the allowances, exactly once.
    fc.assert(
      fc.property(
        fc.integer({ min: 50_000, max: 900_000 }),
        fc.integer({ min: 50_000, max: 900_000 }),
        fc.tuple(fc.nat(40), fc.nat(40), fc.nat(40), fc.nat(40)),
        (w, h, allowances) => {
          const [width, height] = [w / 1000, h / 1000];
          const corners: Point[] = [
            { x: 0, y: 0 },
            { x: width, y: 0 },
            { x: width, y: height },
            { x: 0, y: height }
          ];
          const cut = offsetOutline(
            corners.map((point, i) => ({
              points: [point, corners[(i + 1) % 4]!],
              distance: allowances[i]!,
              corner: { kind: 'mitred' as const }
            }))
          )!;
          const xs = cut.map(({ x }) => x);
          const ys = cut.map(({ y }) => y);
          expect(Math.max(...xs) - Math.min(...xs)).toBeCloseTo(width + allowances[1] + allowances[3], 9);
          expect(Math.max(...ys) - Math.min(...ys)).toBeCloseTo(height + allowances[0] + allowances[2], 9);
          expect(cut).toHaveLength(4);
        }
      ),
      { seed: 92 }
    );
  });
});

/** The smallest outward angle of an outline, degrees. */
function sharpest(outline: Outline): number {
  return outline.reduce((least, b, i) => {
    const a = outline[(i + outline.length - 1) % outline.length]!;
    const c = outline[(i + 1) % outline.length]!;
    const turn = Math.atan2(
      (b.x - a.x) * (c.y - b.y) - (b.y - a.y) * (c.x - b.x),
      (b.x - a.x) * (c.x - b.x) + (b.y - a.y) * (c.y - b.y)
    );
    return turn > 0 ? Math.min(least, 180 - (turn * 180) / Math.PI) : least;
  }, 180);
}
