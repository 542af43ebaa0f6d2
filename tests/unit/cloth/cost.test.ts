import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { clothCost, shareCost, pricePer, roundUpTo } from '$lib/cloth/cost';
import { runs } from '../../runs';

describe('what a length costs', () => {
  it('is exact, rounded once, half up', () => {
    expect(clothCost(2400, 1250, 'metre')).toBe(3000);
    expect(clothCost(1371.6, 1000, 'yard')).toBe(1500);
    expect(clothCost(500, 1, 'metre')).toBe(1);
    expect(clothCost(499.999, 1, 'metre')).toBe(0);
    expect(clothCost(1.005 * 1000, 100_000, 'metre')).toBe(100_500);
    expect(clothCost(0, 1250, 'metre')).toBe(0);
    expect(clothCost(500, -1, 'metre')).toBe(0);
  });
  it('differs from the real quotient by half a minor unit at most, even for huge sums', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 200_000_000 }),
        fc.integer({ min: 0, max: 10_000_000 }),
        (thousandths, price) => {
          const cost = BigInt(clothCost(thousandths / 1000, price, 'metre'));
          const apart = 2n * (cost * 1_000_000n - BigInt(thousandths) * BigInt(price));
          expect(apart > -1_000_000n && apart <= 1_000_000n).toBe(true);
        }
      ),
      { seed: 13 }
    );
  });
  it('compares a metre with a yard', () => {
    expect(pricePer('yard', 1000, 'metre')).toBe(914);
    expect(pricePer('metre', 1000, 'yard')).toBe(1094);
  });
  it('refuses lengths and prices that are none', () => {
    expect(() => clothCost(-1, 100, 'metre')).toThrow(RangeError);
    expect(() => clothCost(NaN, 100, 'metre')).toThrow(RangeError);
    expect(() => clothCost(1, 1.5, 'metre')).toThrow(RangeError);
  });
});

describe('rounding up what is bought', () => {
  it('leaves exact multiples alone, however they were computed', () => {
    expect(roundUpTo(0.1 + 0.2, 0.1)).toBe(0.3);
    expect(roundUpTo(1100, 100)).toBe(1100);
    expect(roundUpTo(1100.001, 100)).toBe(1200);
    expect(roundUpTo(228.6 * 7, 228.6)).toBe(1600.2);
    expect(roundUpTo(0, 100)).toBe(0);
    expect(() => roundUpTo(10, 0)).toThrow(RangeError);
  });
});

describe('a shared cost', () => {
  it('adds up to the whole, whatever the weights', () => {
    expect(shareCost(100, [1, 1, 1])).toEqual([34, 33, 33]);
    expect(shareCost(10, [0, 2, 3])).toEqual([0, 4, 6]);
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 10_000_000 }),
        fc.array(fc.double({ min: 0.01, max: 1e7, noNaN: true }), { minLength: 1, maxLength: 12 }),
        (total, weights) => {
          const parts = shareCost(total, weights);
          const sum = weights.reduce((all, one) => all + one, 0);
          expect(parts.reduce((all, one) => all + one, 0)).toBe(total);
          parts.forEach((part, i) =>
            expect(Math.abs(part - (total * weights[i]!) / sum)).toBeLessThan(1.001)
          );
        }
      ),
      { seed: 3, numRuns: runs(300) }
    );
    expect(() => shareCost(10, [0, 0])).toThrow(RangeError);
  });
});
