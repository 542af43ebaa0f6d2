import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import { openSpread } from '$lib/cloth/strip';
import { boundingBox } from '$lib/geometry/polygon';
import { placeOutline } from '$lib/geometry/placement';
import type { Point } from '$lib/geometry/point';
import { check } from '$lib/lay/check';
import type { LayPlacement } from '$lib/lay/document';
import { leastLength, shortest } from '$lib/lay/least-length';
import type { LayPanel } from '$lib/lay/panel-book';
import { readingsOf } from '$lib/lay/readings';
import { againstNap, nearestTurn, withinTolerance } from '$lib/lay/turns';
import { turnSets } from '$lib/pattern/panel';
import { bookOf, lay, panel, placement, rectangle, starPanel, stars, strip } from './workroom';
import { runs } from '../../runs';

describe('readings', () => {
  const book = bookOf(panel('front', rectangle(400, 300), { symmetric: true, howMany: 2 }));

  it('are nothing while nothing lies, but the least length counts all needs', () => {
    const readings = readingsOf(lay(book, []), book);
    expect(readings).toMatchObject({
      pieces: { needed: 2, placed: 0, loose: 2 },
      lengthUsed: 0,
      area: 0,
      efficiency: null,
      utilisation: null
    });
    expect(readings.leastLength).toEqual({
      length: 400,
      reason: { kind: 'longest', panel: 'Front', length: 400 }
    });
  });

  it('name every term of what they count', () => {
    const document = lay(
      book,
      [placement('a', 'front'), placement('b', 'front', { x: 10, y: 400 })],
      strip({ reserve: 15 })
    );
    expect(readingsOf(document, book)).toMatchObject({
      pieces: { needed: 2, placed: 2, loose: 0 },
      lengthUsed: 410,
      area: 240_000,
      efficiency: 240_000 / (1000 * 410),
      utilisation: 240_000 / (1020 * 450),
      clothToBuy: {
        lengthUsed: 410,
        start: 20,
        end: 20,
        splices: 0,
        reserve: 15,
        shrinkage: 0,
        repeats: 0,
        roundedUpTo: 100,
        total: 500
      }
    });
  });

  it('take cut-outs off the area', () => {
    const holed = bookOf(
      panel('front', rectangle(400, 300), {
        symmetric: true,
        cutOuts: [rectangle(100, 100).map(({ x, y }) => ({ x: x + 50, y: y + 50 }))]
      })
    );
    expect(readingsOf(lay(holed, [placement('a', 'front')]), holed).area).toBe(110_000);
  });

  it('count a placement once a ply, against as many plies of cloth', () => {
    const plies = strip({
      spread: [
        {
          ...openSpread(1000)[0]!,
          layers: [
            { sideUp: 'right', nap: 'along' },
            { sideUp: 'right', nap: 'along' }
          ]
        }
      ]
    });
    const readings = readingsOf(lay(book, [placement('a', 'front')], plies), book);
    expect(readings).toMatchObject({
      area: 240_000,
      efficiency: 240_000 / (2 * 1000 * 400),
      utilisation: 240_000 / (2 * 1020 * 440),
      pieces: { loose: 0 }
    });
  });
});

describe('least length', () => {
  it('is the area where that is the most', () => {
    const book = bookOf(panel('front', rectangle(100, 100), { symmetric: true, howMany: 50 }));
    expect(leastLength(lay(book, [], strip({ clearance: 0 })), book)).toEqual({
      length: 500,
      reason: { kind: 'area', area: 500_000, width: 1000 }
    });
  });

  it('lines up pieces that cover more than half the width', () => {
    const book = bookOf(panel('front', rectangle(300, 520), { symmetric: true, howMany: 3 }));
    expect(leastLength(lay(book, []), book)).toEqual({
      length: 900,
      reason: { kind: 'side-by-side', panels: ['Front'], places: 1 }
    });
  });

  it('counts the clearance between two pieces that would just fit beside each other', () => {
    const book = bookOf(panel('front', rectangle(300, 499), { symmetric: true, howMany: 2 }));
    expect(leastLength(lay(book, []), book).length).toBe(600);
    expect(leastLength(lay(book, [], strip({ clearance: 2 })), book).reason.kind).not.toBe('side-by-side');
  });

  it('lays a free panel at its shortest, and a tolerant one as far off grain as it may', () => {
    expect(shortest(panel('a', rectangle(300, 100), { turns: 'free' }), strip())).toBeCloseTo(100, 9);
    const tilted = (200 * Math.PI) / 180 / 10;
    const tolerant = shortest(panel('a', rectangle(300, 1), { grainTolerance: 20 }), strip());
    expect(tolerant).toBeCloseTo(300 * Math.cos(tilted) + Math.sin(tilted), 9);
  });

  it('is never above a lay that exists', () => {
    const pieces = fc.array(
      fc.record({
        cut: fc.oneof(
          stars,
          fc
            .tuple(fc.integer({ min: 30, max: 400 }), fc.integer({ min: 30, max: 600 }))
            .map(([length, width]) => rectangle(length, width))
        ),
        turns: fc.constantFrom(...turnSets),
        grainTolerance: fc.constantFrom(0, 0, 3, 20),
        howMany: fc.integer({ min: 1, max: 3 }),
        turn: fc.double({ min: 0, max: 360, noNaN: true }),
        flip: fc.boolean()
      }),
      { minLength: 1, maxLength: 8 }
    );
    let found = 0;
    fc.assert(
      fc.property(pieces, fc.constantFrom('none' as const, 'oneWay' as const), (made, nap) => {
        const cloth = strip({ nap, sidesAlike: true, usableWidth: 1000 });
        const panels = made.map(({ cut, turns, grainTolerance, howMany }, i) =>
          starPanel(`p${i}`, cut, { turns, grainTolerance, howMany })
        );
        const book = bookOf(...panels);
        const laid = shelves(
          made.flatMap(({ turn, flip }, i) =>
            Array.from({ length: panels[i]!.howMany }, (_, k) => ({
              panel: panels[i]!,
              turn: withinTolerance(panels[i]!, cloth, turn + 90 * k),
              flip
            }))
          ),
          1000,
          cloth.clearance
        );
        if (!laid) return;
        found++;
        const document = lay(book, laid, cloth);
        expect(
          document.placements.every((one) => !againstNap(book[`style/${one.panel}`]!, cloth, one.turn))
        ).toBe(true);
        const { length } = leastLength(document, book);
        expect(length).toBeLessThanOrEqual(readingsOf(document, book).lengthUsed + 1e-9);
        expect(length).toBeGreaterThan(0);
      }),
      { seed: 13, numRuns: runs(300) }
    );
    expect(found).toBeGreaterThan(150);
  });

  it('is never above any of thousands of lays of rectangles, whatever the clearance', () => {
    let better = 0;
    fc.assert(
      fc.property(
        fc.array(
          fc.record({
            long: fc.integer({ min: 20, max: 600 }),
            wide: fc.integer({ min: 20, max: 950 }),
            many: fc.integer({ min: 1, max: 4 })
          }),
          { minLength: 1, maxLength: 7 }
        ),
        fc.constantFrom(0, 3, 5, 20),
        (sizes, clearance) => {
          const cloth = strip({ clearance });
          const panels = sizes.map(({ long, wide, many }, i) =>
            panel(`p${i}`, rectangle(long, wide), { symmetric: true, howMany: many })
          );
          const book = bookOf(...panels);
          const pieces = sizes
            .flatMap(({ wide, many }, i) =>
              Array.from({ length: many }, () => ({ panel: panels[i]!, turn: 0, flip: false, wide }))
            )
            .sort((a, b) => b.wide - a.wide);
          const document = lay(book, shelves(pieces, 1000, clearance)!, cloth);
          const { length, reason } = leastLength(document, book);
          const { lengthUsed } = readingsOf(document, book);
          expect(length).toBeLessThanOrEqual(lengthUsed + 1e-9);
          if (reason.kind === 'blade' || (reason.kind === 'side-by-side' && (reason.places ?? 1) > 1))
            better++;
        }
      ),
      { seed: 15, numRuns: runs(3000) }
    );
    // The newer bounds are no dead letters.
    expect(better).toBeGreaterThan(runs(3000) / 4);
  });

  it('counts the places side by side: of pieces wider than a third only two lie beside each other', () => {
    const cloth = strip({ clearance: 0 });
    const book = bookOf(panel('side', rectangle(500, 400), { symmetric: true, howMany: 5 }));
    const least = leastLength(lay(book, [], cloth), book);
    // Area alone says 1000; two by two they need 1250 at least.
    expect(least).toEqual({ length: 1250, reason: { kind: 'side-by-side', panels: ['Side'], places: 2 } });
  });

  it('is reached by rectangles that fill the strip', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: 20, max: 400 }), { minLength: 1, maxLength: 8 }),
        fc.integer({ min: 1, max: 4 }),
        (lengths, across) => {
          const cloth = strip({ clearance: 0 });
          const book = bookOf(
            ...lengths.map((length, i) =>
              panel(`p${i}`, rectangle(length, 1000 / across), { symmetric: true, howMany: across })
            )
          );
          let x = 0;
          const placements: LayPlacement[] = [];
          lengths.forEach((length, i) => {
            for (let k = 0; k < across; k++)
              placements.push(placement(`${i}-${k}`, `p${i}`, { x, y: (1000 / across) * k }));
            x += length;
          });
          const verdict = check(lay(book, placements, cloth), book);
          expect(verdict.findings).toEqual([]);
          expect(verdict.readings.leastLength.length).toBeCloseTo(verdict.readings.lengthUsed, 2);
          expect(verdict.readings.leastLength.length).toBeLessThanOrEqual(verdict.readings.lengthUsed + 1e-9);
        }
      ),
      { seed: 14, numRuns: runs(60) }
    );
  });
});

/** A plain lay in rows across the width; null when a piece is wider than the cloth. */
function shelves(
  pieces: readonly { panel: LayPanel; turn: number; flip: boolean }[],
  width: number,
  clearance: number
): LayPlacement[] | null {
  let [x, y, depth] = [0, 0, 0];
  const laid: LayPlacement[] = [];
  for (const [i, { panel: piece, turn, flip }] of pieces.entries()) {
    const box = boundingBox(placeOutline(piece.shape.cut, { x: 0, y: 0, turn, flip }) as Point[]);
    const [long, wide] = [box.maxX - box.minX, box.maxY - box.minY];
    if (wide > width) return null;
    if (y + wide > width) {
      x += depth + clearance;
      [y, depth] = [0, 0];
    }
    laid.push(placement(`l${i}`, piece.shape.panel, { x: x - box.minX, y: y - box.minY, turn, flip }));
    y += wide + clearance;
    depth = Math.max(depth, long);
  }
  return laid;
}

it('turns to the nearest allowed turn when a piece is straightened', () => {
  expect(nearestTurn(panel('a', rectangle(10, 10)), strip(), 170)).toBe(180);
});
