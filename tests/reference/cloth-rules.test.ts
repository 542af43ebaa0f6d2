import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { perHundredSquareMetres, perHundredSquareYards, pointsOf, totalPoints } from '$lib/cloth/four-point';
import { afterShrinking, beforeShrinking } from '$lib/cloth/shrinkage';
import { END_ROOM, SIDE_ROOM, usableByRuleOfThumb, usableWidthOf } from '$lib/cloth/usable-width';
import { matchingExtra, wholeRepeatsOf, whatToBuy, noSplices } from '$lib/cloth/what-to-buy';
import { noShrinkage } from '$lib/cloth/shrinkage';
import { readingsOf } from '$lib/lay/readings';
import { MM_PER } from '$lib/units/length';
import { runs } from '../runs';
import { bookOf, lay, panel, placement, rectangle, strip } from '../unit/lay/workroom';

const { in: inch, yd, m } = MM_PER;

/** ASTM D5430, four-point system; worked figures as told by teaching texts of cloth inspection. */
describe('the four-point system (ASTM D5430)', () => {
  it('gives 12.0 points per 100 yd² for 28 points on 150 yd of 56 in', () => {
    expect(perHundredSquareYards(28, 150 * yd, 56 * inch)).toBeCloseTo(12, 6);
  });

  it('gives 18.7 points per 100 m² for 28 points on 100 m of 1500 mm', () => {
    expect(perHundredSquareMetres(28, 100 * m, 1500)).toBeCloseTo(18.67, 2);
  });

  it.each([
    [3, false, 1],
    [3.1, false, 2],
    [6, false, 2],
    [6.1, false, 3],
    [9, false, 3],
    [9.1, false, 4],
    [1, true, 2],
    [1.1, true, 4]
  ])('counts a fault of %s in (hole: %s) as %s', (inches, hole, points) => {
    expect(pointsOf({ size: inches * inch, hole })).toBe(points);
  });

  it('counts no linear yard above 4 points', () => {
    const fault = (fromEnd: number) => ({ fromEnd, size: 12 * inch, hole: false });
    expect(totalPoints([fault(100), fault(200), fault(900)])).toBe(4);
    expect(totalPoints([fault(100), fault(200), fault(1000)])).toBe(8);
  });
});

/** S = (before − after) ÷ before, pattern = finished ÷ (1 − S): texts of pattern cutting; the worked figure follows from it. */
describe('shrinkage', () => {
  it('asks 105.26 for 100 at 5 %, not 105', () => {
    expect(beforeShrinking(100, 0.05)).toBeCloseTo(105.263, 3);
    expect(afterShrinking(beforeShrinking(100, 0.05), 0.05)).toBeCloseTo(100, 9);
  });
});

/** Buying rule of home-sewing leaflets: a repeat for each matched piece along the length; 2 × 4¼ in = 8½ in. */
describe('matching', () => {
  it('adds 8½ in for two matched pieces on a repeat of 4¼ in', () => {
    expect(matchingExtra(4.25 * inch, 2)).toBeCloseTo(8.5 * inch, 9);
  });

  /** Marker length is extended to a whole multiple of the repeat: Vilumsone-Nemes, pp. 231, 256. */
  it('extends a length to whole repeats, and leaves a whole multiple as it is', () => {
    expect(wholeRepeatsOf(1000, 240)).toBe(1200);
    expect(wholeRepeatsOf(960, 240)).toBe(960);
    fc.assert(
      fc.property(
        fc.double({ min: 1, max: 2000, noNaN: true }),
        fc.integer({ min: 1, max: 50 }),
        (repeat, n) => {
          expect(wholeRepeatsOf(n * repeat, repeat)).toBeCloseTo(n * repeat, 6);
        }
      ),
      { seed: 5, numRuns: runs(300) }
    );
  });
});

/** efficiency % = Σ piece areas ÷ (marker length × marker width) × 100: Vilumsone-Nemes, p. 19. */
describe('efficiency', () => {
  it('is the area of the pieces by length used × usable width', () => {
    const book = bookOf(panel('back', rectangle(500, 400)));
    const document = lay(book, [placement('a', 'back')], strip({ usableWidth: 1000 }));
    const readings = readingsOf(document, book);
    expect(readings.efficiency).toBeCloseTo((500 * 400) / (500 * 1000), 9);
    // Utilisation is stricter: ends and the full width count.
    expect(readings.utilisation).toBeCloseTo((500 * 400) / ((500 + 40) * 1020), 9);
  });
});

describe('usable width and ends', () => {
  /** marker width = cloth width − selvedges − k, k = 1–2 cm woven, 2–4 cm elastic knit: Vilumsone-Nemes, p. 19. */
  it('keeps 1 to 2 cm beside the selvedges of woven cloth, 2 to 4 cm of knit', () => {
    expect(usableWidthOf(1500, 10)).toBe(1500 - 20 - 20);
    expect(usableWidthOf(1500, 10, SIDE_ROOM.woven.least)).toBe(1500 - 20 - 10);
    expect(usableWidthOf(1500, 10, SIDE_ROOM.knit.most)).toBe(1500 - 20 - 40);
  });

  /** ½ in each side: the width less 1 in, leaflets on reckoning yardage. */
  it('takes an inch off where nothing was measured', () => {
    expect(usableByRuleOfThumb(58 * inch)).toBeCloseTo(57 * inch, 9);
  });

  /** At each end: 1 cm, elastic 1.5–2 cm, first ply 3 cm: Vilumsone-Nemes, p. 31; other texts 2 cm each end, 4 cm a ply. */
  it('adds the room at each end, once an end', () => {
    expect([END_ROOM.woven, END_ROOM.elastic, END_ROOM.firstPly]).toEqual([10, { least: 15, most: 20 }, 30]);
    const bought = whatToBuy({
      lengthUsed: 1000,
      endAllowance: { start: 20, end: 20 },
      splices: noSplices,
      reserve: 0,
      shrinkage: noShrinkage,
      wholeRepeats: null,
      step: 1
    });
    expect(bought.total).toBe(1040);
  });
});
