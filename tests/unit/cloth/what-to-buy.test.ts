import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { asLaid, noShrinkage, type Shrinkage } from '$lib/cloth/shrinkage';
import { estimatedLength, whatToBuy, type BuyQuestion } from '$lib/cloth/what-to-buy';
import { runs } from '../../runs';

const question: BuyQuestion = {
  lengthUsed: 1900,
  endAllowance: { start: 20, end: 40 },
  splices: { count: 2, each: 30 },
  reserve: 15,
  shrinkage: noShrinkage,
  wholeRepeats: null,
  step: 100
};

describe('what to buy', () => {
  it('names every term', () => {
    expect(whatToBuy(question)).toEqual({
      lengthUsed: 1900,
      start: 20,
      end: 40,
      furtherPlies: 0,
      splices: 60,
      reserve: 15,
      shrinkage: 0,
      repeats: 0,
      roundedUpTo: 100,
      total: 2100
    });
  });

  it('buys every ply with its ends', () => {
    expect(whatToBuy({ ...question, lengths: 3 })).toMatchObject({ furtherPlies: 2 * 1960, total: 6000 });
  });

  it('buys more only of cloth that is shrunk in the workroom', () => {
    const as = (treatment: Shrinkage['treatment']) =>
      whatToBuy({ ...question, shrinkage: { treatment, warp: 0.05, weft: 0.1 }, step: 0.1 });
    expect(as('shrunkFirst').shrinkage).toBeCloseTo(2035 / 0.95 - 2035, 6);
    expect(as('shrunkFirst').total).toBe(2142.2);
    expect(as('enlarged').total).toBe(2035);
    expect(as('boughtShrunk').total).toBe(2035);
  });

  it('counts whole repeats of the cloth as it is bought', () => {
    const bought = whatToBuy({
      ...question,
      shrinkage: { treatment: 'shrunkFirst', warp: 0.05, weft: 0 },
      // 240 mm as it lies were 252.6 mm before.
      wholeRepeats: 240,
      step: 0.001
    });
    expect(bought.total).toBeCloseTo((Math.ceil(2035 / 240) * 240) / 0.95, 3);
  });

  it('rounds up as the supplier sells, by eighths of a yard too', () => {
    expect(whatToBuy({ ...question, step: 114.3 }).total).toBeCloseTo(18 * 114.3, 6);
  });

  it('is at least the sum of its terms and less than one step more', () => {
    const length = fc.double({ min: 0, max: 20_000, noNaN: true });
    fc.assert(
      fc.property(
        length,
        fc.double({ min: 0, max: 0.3, noNaN: true }),
        fc.option(fc.double({ min: 5, max: 900, noNaN: true })),
        fc.constantFrom(1, 100, 114.3, 500),
        (lengthUsed, warp, wholeRepeats, step) => {
          const terms = whatToBuy({
            ...question,
            lengthUsed,
            shrinkage: { treatment: 'shrunkFirst', warp, weft: 0 },
            wholeRepeats,
            step
          });
          const { total, roundedUpTo, ...added } = terms;
          const sum = Object.values(added).reduce((all, one) => all + one, 0);
          expect(Object.values(added).every((one) => one >= 0)).toBe(true);
          expect(total).toBeGreaterThanOrEqual(sum - 0.001);
          expect(total - sum).toBeLessThan(roundedUpTo + 0.001);
        }
      ),
      { seed: 5, numRuns: runs(300) }
    );
  });
});

describe('a cloth that is shrunk first', () => {
  it('lies narrower and shorter; every other lies as it was measured', () => {
    const measured = { along: 1000, across: 1500 };
    expect(asLaid({ treatment: 'shrunkFirst', warp: 0.05, weft: 0.02 }, measured)).toEqual({
      along: 950,
      across: 1470
    });
    for (const treatment of ['none', 'enlarged', 'boughtShrunk'] as const)
      expect(asLaid({ treatment, warp: 0.05, weft: 0.02 }, measured)).toEqual(measured);
  });
});

describe('an estimate', () => {
  it('is area by width and efficiency, and the matching on top', () => {
    expect(estimatedLength({ area: 1.5e6, width: 1500, efficiency: 0.5, matchingExtra: 216 })).toBeCloseTo(
      2216,
      9
    );
    expect(() => estimatedLength({ area: 1, width: 0, efficiency: 0.5, matchingExtra: 0 })).toThrow(
      RangeError
    );
  });
});
