import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import { snapTurn } from '$lib/geometry/placement';
import { check } from '$lib/lay/check';
import { MOST_BETWEEN } from '$lib/lay/findings-between';
import { findingKinds } from '$lib/lay/verdict';
import { bookOf, ell, lay, panel, placement, rectangle, star, starPanel, strip } from './workroom';
import { runs } from '../../runs';

const square = bookOf(panel('a', rectangle(100, 100), { turns: 'free', symmetric: true, howMany: 2 }));

/**
 * Two squares side by side, turned together by `turn`, that run `depth` into each other. Positions stay off the grid of
 * placements, so that the depth is exact.
 */
function pair(turn: number, depth: number) {
  const radians = (turn * Math.PI) / 180;
  const shift = 100 - depth;
  return lay(
    square,
    [
      placement('left', 'a', { x: 500, y: 500, turn }),
      placement('right', 'a', {
        x: 500 + shift * Math.cos(radians),
        y: 500 + shift * Math.sin(radians),
        turn
      })
    ],
    strip({ clearance: 0 })
  );
}

describe('the check', () => {
  it('tells depths of 0.009 mm and 0.011 mm apart at a thousand random turns', () => {
    fc.assert(
      fc.property(fc.double({ min: 0, max: 360, noNaN: true, maxExcluded: true }), (angle) => {
        const turn = snapTurn(angle);
        expect(check(pair(turn, 0.009), square).findings).toEqual([]);
        const [finding, ...others] = check(pair(turn, 0.011), square).findings;
        expect(others).toEqual([]);
        expect(finding).toMatchObject({ kind: 'overlap', severity: 'stops' });
        expect(finding!.measure!.value).toBeCloseTo(0.011, 6);
      }),
      { seed: 20, numRuns: runs(1000) }
    );
  });

  it('tells clearances short by 0.009 mm and 0.011 mm apart', () => {
    const gap = (distance: number) =>
      check(
        lay(
          square,
          [placement('a', 'a'), placement('b', 'a', { x: 100 + distance })],
          strip({ clearance: 3 })
        ),
        square
      ).findings.map(({ kind }) => kind);
    expect(gap(3 - 0.009)).toEqual([]);
    expect(gap(3 - 0.011)).toEqual(['clearance']);
  });

  it('lists the worst first: what stops before what warns, a deep overlap before a shallow one', () => {
    const book = bookOf(
      panel('a', rectangle(100, 100), { symmetric: true, howMany: 4 }),
      panel('ell', ell, { paired: true, howMany: 2 })
    );
    const { findings } = check(
      lay(
        book,
        [
          placement('1', 'a', { x: 0, y: -5 }),
          placement('2', 'a', { x: 90, y: -5 }),
          placement('3', 'a', { x: 160, y: 10 }),
          placement('e', 'ell', { x: 500, y: 0 }),
          placement('f', 'ell', { x: 500, y: 300 })
        ],
        strip({ sidesAlike: true })
      ),
      book
    );
    expect(findings.map(({ kind, placements }) => `${kind} ${placements.join('')}`)).toEqual([
      'overlap 23',
      'overlap 12',
      'outside-width 1',
      'outside-width 2',
      'missing ',
      'unpaired ef'
    ]);
    expect(findings.every(({ kind }) => findingKinds.includes(kind))).toBe(true);
  });

  it('does not get lost in a heap of thousands of pieces', () => {
    const heap = lay(
      square,
      Array.from({ length: 3000 }, (_, i) => placement(`${i}`, 'a', { x: (i % 7) / 10 })),
      strip()
    );
    const { findings } = check(heap, square);
    expect(findings.filter(({ kind }) => kind === 'overlap')).toHaveLength(MOST_BETWEEN);
    expect(findings.filter(({ kind }) => kind === 'surplus')).toHaveLength(2998);
  });

  it('finds the same, whatever the order of the placements', () => {
    const book = bookOf(
      ...Array.from({ length: 6 }, (_, i) =>
        starPanel(`s${i}`, star(Array.from({ length: 8 + i }, (_, k) => 40 + ((k * 5) % 7) * 10)), {
          symmetric: true
        })
      )
    );
    const spot = fc.tuple(fc.integer({ min: 0, max: 500 }), fc.integer({ min: 0, max: 500 }));
    fc.assert(
      fc.property(
        fc.array(spot, { minLength: 6, maxLength: 6 }),
        fc.shuffledSubarray([0, 1, 2, 3, 4, 5], { minLength: 6 }),
        (spots, order) => {
          const placements = spots.map(([x, y], i) => placement(`${i}`, `s${i}`, { x, y }));
          const told = (list: typeof placements) =>
            check(lay(book, list), book)
              .findings.map(
                ({ kind, placements: ids, measure }) =>
                  `${kind} ${[...ids].sort().join()} ${measure?.value.toFixed(6)}`
              )
              .sort();
          expect(told(order.map((i) => placements[i]!))).toEqual(told(placements));
        }
      ),
      { seed: 21, numRuns: runs(80) }
    );
  });
});
