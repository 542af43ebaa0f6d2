import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import { outlineDistance } from '$lib/geometry/distance';
import type { Placement } from '$lib/geometry/placement';
import { check } from '$lib/lay/check';
import type { LayDocument } from '$lib/lay/document';
import { createLive } from '$lib/lay/live';
import { bookOf, lay, panel, placement, rectangle, star, starPanel, strip } from './workroom';
import { runs } from '../../runs';

const rotated = (length: number, k: number): number[] =>
  Array.from({ length }, (_, i) => 40 + ((i * (k + 3)) % 7) * 12);
const book = bookOf(
  ...Array.from({ length: 8 }, (_, i) => starPanel(`s${i}`, star(rotated(11 + i, i)), { symmetric: true }))
);
const start: LayDocument = lay(
  book,
  Array.from({ length: 8 }, (_, i) =>
    placement(`${i}`, `s${i}`, { x: 150 + 250 * (i % 4), y: 150 + 250 * Math.floor(i / 4) })
  ),
  strip({ usableWidth: 600, length: 1200 })
);

function moved(document: LayDocument, ids: readonly string[], to: readonly Placement[]): LayDocument {
  return {
    ...document,
    placements: document.placements.map((one) => {
      const i = ids.indexOf(one.id);
      return i < 0 ? one : { ...one, ...to[i]! };
    })
  };
}

const where = fc.record({
  x: fc.integer({ min: -100_000, max: 1_300_000 }).map((value) => value / 1000),
  y: fc.integer({ min: -100_000, max: 700_000 }).map((value) => value / 1000),
  turn: fc.constantFrom(0, 180, 3.25, 90),
  flip: fc.boolean()
});

describe('the live check', () => {
  it('says of the moved pieces exactly what the check says of the lay', () => {
    fc.assert(
      fc.property(
        fc.subarray(['0', '1', '2', '3', '4', '5', '6', '7'], { minLength: 1, maxLength: 4 }),
        fc.array(fc.array(where, { minLength: 4, maxLength: 4 }), { minLength: 1, maxLength: 4 }),
        (ids, drags) => {
          const live = createLive(start, book);
          for (const drag of drags) {
            const to = ids.map((_, i) => drag[i]!);
            const report = live.moveTo(ids, to);
            const verdict = check(moved(start, ids, to), book);
            expect(report.readings).toEqual(verdict.readings);
            const overlaps = verdict.findings
              .filter(
                ({ kind, placements }) => kind === 'overlap' && placements.some((id) => ids.includes(id))
              )
              .flatMap(({ placements: [a, b], measure }) => [
                [a!, b!, measure!.value] as const,
                [b!, a!, measure!.value] as const
              ])
              .filter(([id]) => ids.includes(id));
            const told = report.pieces.flatMap(({ id, overlaps: all }) =>
              all.map((one) => [id, one.with, one.depth] as const)
            );
            const pair = ([a, b]: readonly [string, string, number]) => `${a}-${b}`;
            expect(told.map(pair).sort()).toEqual(overlaps.map(pair).sort());
            for (const one of told)
              expect(one[2]).toBeCloseTo(overlaps.find((other) => pair(other) === pair(one))![2], 6);
            for (const piece of report.pieces) {
              const own = verdict.findings.filter(({ placements }) => placements.includes(piece.id));
              expect(piece.beyondTolerance).toBe(own.some(({ kind }) => kind === 'off-grain'));
              const over = Math.max(piece.outside.near, piece.outside.far);
              expect(over > 0.01).toBe(own.some(({ kind }) => kind === 'outside-width'));
              expect(Math.max(piece.outside.start, piece.outside.end) > 0.01).toBe(
                own.some(({ kind }) => kind === 'outside-length')
              );
            }
          }
        }
      ),
      { seed: 18, numRuns: runs(120) }
    );
  });

  it('finds the nearest piece that does not move along, and whether it is nearer than the clearance', () => {
    fc.assert(
      fc.property(where, (to) => {
        const live = createLive(start, book);
        const [piece] = live.moveTo(['0'], [to]).pieces;
        const own = live.outline('0')!;
        const distances = start.placements
          .filter(({ id }) => id !== '0')
          .map(({ id }) => ({ id, ...outlineDistance(own, live.outline(id)!) }));
        const least = Math.min(...distances.map(({ distance }) => distance));
        if (piece!.overlaps.length > 0) {
          expect(piece!.nearest).toBeNull();
          return;
        }
        expect(piece!.nearest!.distance).toBe(least);
        expect(piece!.nearest!.tooNear).toBe(least < 3 - 0.01);
      }),
      { seed: 19, numRuns: runs(200) }
    );
  });

  it('draws what two pieces share where they now lie', () => {
    const two = bookOf(panel('front', rectangle(100, 100), { howMany: 2, symmetric: true }));
    const live = createLive(lay(two, [placement('a', 'front'), placement('b', 'front', { x: 500 })]), two);
    expect(live.regionOf('a', 'b').area).toBe(0);
    const report = live.moveTo(['b'], [{ x: 80, y: 50, turn: 0, flip: false }]);
    expect(report.pieces[0]!.overlaps).toMatchObject([{ with: 'a' }]);
    expect(live.regionOf('a', 'b')).toMatchObject({ area: 1000 });
  });

  it('takes over what did not change when the lay is changed', () => {
    const live = createLive(start, book);
    const after = moved(start, ['3'], [{ x: 1000, y: 300, turn: 0, flip: true }]);
    const next = live.update(after, book);
    expect(next.outline('2')).toBe(live.outline('2'));
    expect(next.outline('3')).not.toBe(live.outline('3'));
    expect(next.moveTo(['0'], [{ x: 990, y: 300, turn: 0, flip: false }]).pieces[0]!.overlaps[0]!.with).toBe(
      '3'
    );
  });
});
