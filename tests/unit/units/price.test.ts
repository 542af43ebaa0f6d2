import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildPrice, type PriceInput } from '$lib/units/price';
import { runs } from '../../runs';

/** A skirt, worked on paper: 1.80 m at 48.00 and 0.90 m at 16.75, buttons and thread, 11½ hours at 42.00. */
const skirt: PriceInput = {
  cloths: [
    { computed: 8640, byHand: null },
    { computed: 1508, byHand: null } // 1507.5, half up
  ],
  trims: [
    { words: 'Horn buttons, 6', amount: 1380 },
    { words: 'Thread, tape', amount: 420 }
  ],
  extras: [{ words: 'Rush', amount: 5000 }],
  work: { minutes: 690, rate: 4200, byHand: null },
  overhead: { share: 1500, byHand: null },
  margin: { share: 1000, byHand: null },
  priceByHand: null,
  roundTo: 1,
  tax: { mode: 'added', rate: 2000 },
  deposit: { share: 5000 }
};

describe('a price', () => {
  it('comes about as on paper', () => {
    // Cloth 101.48 + trims 18.00 + extras 50.00 + work 483.00 = 652.48; overhead 97.872 → 97.87; margin of 750.35 is
    // 75.035 → 75.04; price 825.39; tax 165.078 → 165.08; total 990.47; half of it 495.235 → 495.24.
    expect(buildPrice(skirt)).toMatchObject({
      cloth: 10_148,
      trims: 1800,
      extras: 5000,
      work: { computed: 48_300, amount: 48_300 },
      cost: 65_248,
      overhead: { computed: 9787, byHand: null, amount: 9787 },
      margin: { computed: 7504, amount: 7504 },
      price: { computed: 82_539, byHand: null, amount: 82_539 },
      net: 82_539,
      tax: 16_508,
      total: 99_047,
      deposit: 49_524,
      complete: true
    });
  });

  it('takes each figure by hand, says so, and computes the rest from it', () => {
    const build = buildPrice({
      ...skirt,
      cloths: [{ computed: 8640, byHand: 0 }, skirt.cloths[1]!],
      work: { ...skirt.work, byHand: 40_000 },
      margin: { ...skirt.margin, byHand: 10_000 }
    });
    expect(build.cloths[0]).toEqual({ computed: 8640, byHand: 0, amount: 0 });
    expect(build.work).toEqual({ computed: 48_300, byHand: 40_000, amount: 40_000 });
    expect(build.cost).toBe(1508 + 1800 + 5000 + 40_000);
    expect(build.margin).toEqual({ computed: 5555, byHand: 10_000, amount: 10_000 });
    expect(build.price.amount).toBe(build.cost + build.overhead.amount + 10_000);
  });

  it('rounds to the studio’s step, holds an included tax inside, and a deposit below the total', () => {
    const build = buildPrice({
      ...skirt,
      roundTo: 500,
      tax: { mode: 'included', rate: 2000 },
      deposit: { amount: 99_999_999 }
    });
    expect(build.price.computed).toBe(82_500);
    expect([build.net, build.tax, build.total]).toEqual([68_750, 13_750, 82_500]);
    expect(build.deposit).toBe(82_500);
  });

  it('is not complete while a cloth’s cost is unknown, until it or the price is written by hand', () => {
    const cloths = [{ computed: null, byHand: null }];
    expect(buildPrice({ ...skirt, cloths }).complete).toBe(false);
    expect(buildPrice({ ...skirt, cloths: [{ computed: null, byHand: 900 }] }).complete).toBe(true);
    expect(buildPrice({ ...skirt, cloths, priceByHand: 80_000 })).toMatchObject({
      complete: true,
      price: { byHand: 80_000, amount: 80_000 }
    });
  });

  it('adds up whatever the figures are', () => {
    const amount = fc.integer({ min: 0, max: 10_000_000 });
    const byHand = fc.option(amount);
    const share = fc.integer({ min: 0, max: 20_000 });
    fc.assert(
      fc.property(
        fc.record({
          cloths: fc.array(fc.record({ computed: fc.option(amount), byHand }), { maxLength: 4 }),
          trims: fc.array(fc.record({ words: fc.constant('t'), amount }), { maxLength: 4 }),
          extras: fc.array(fc.record({ words: fc.constant('e'), amount }), { maxLength: 4 }),
          work: fc.record({ minutes: fc.integer({ min: 0, max: 60_000 }), rate: amount, byHand }),
          overhead: fc.record({ share, byHand }),
          margin: fc.record({ share, byHand }),
          priceByHand: byHand,
          roundTo: fc.constantFrom(1, 5, 100),
          tax: fc.record({
            mode: fc.constantFrom('none' as const, 'added' as const, 'included' as const),
            rate: fc.integer({ min: 0, max: 10_000 })
          }),
          deposit: fc.record({ share: fc.integer({ min: 0, max: 10_000 }) })
        }),
        (input) => {
          const build = buildPrice(input);
          expect(build.cloth + build.trims + build.extras + build.work.amount).toBe(build.cost);
          expect(build.net + build.tax).toBe(build.total);
          expect(build.deposit).toBeLessThanOrEqual(build.total);
          if (input.priceByHand === null) {
            const sum = build.cost + build.overhead.amount + build.margin.amount;
            expect(Math.abs(build.price.amount - sum) * 2).toBeLessThanOrEqual(input.roundTo);
          }
        }
      ),
      { numRuns: runs(200), seed: 613 }
    );
  });
});
