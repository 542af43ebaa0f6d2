import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  parseShare,
  parseWork,
  partOf,
  roundedTo,
  shareDigits,
  taxed,
  workCost,
  workDigits
} from '$lib/units/share';
import { runs } from '../../runs';

const amounts = fc.integer({ min: 0, max: 9_999_999_999 });
const shares = fc.integer({ min: 0, max: 100_000 });

describe('a share of an amount', () => {
  it.each([
    [10_000, 2000, 2000],
    [1, 5000, 1], // half a cent goes up
    [1, 4999, 0],
    [3333, 1250, 417], // 416.625
    [1005, 1000, 101], // 100.5
    [0, 9999, 0]
  ])('%d × %d basis points is %d', (amount, share, part) => {
    expect(partOf(amount, share)).toBe(part);
  });

  it('is never further than half a coin from the exact product, and goes up at the half', () => {
    fc.assert(
      fc.property(amounts, shares, (amount, share) => {
        const off = BigInt(partOf(amount, share)) * 10_000n - BigInt(amount) * BigInt(share);
        expect(off > -5000n && off <= 5000n).toBe(true);
      }),
      { numRuns: runs(300), seed: 611 }
    );
  });

  it('refuses what is not whole', () => {
    expect(() => partOf(0.5, 100)).toThrow(/whole number/);
    expect(() => partOf(100, 0.5)).toThrow(/whole number/);
  });
});

describe('tax', () => {
  it.each([
    ['added', 10_000, 2000, { net: 10_000, tax: 2000, total: 12_000 }],
    ['included', 12_000, 2000, { net: 10_000, tax: 2000, total: 12_000 }],
    ['added', 1999, 1900, { net: 1999, tax: 380, total: 2379 }], // 379.81
    ['included', 1999, 1900, { net: 1680, tax: 319, total: 1999 }], // 319.168
    ['added', 50, 100, { net: 50, tax: 1, total: 51 }], // 0.5 up
    ['none', 777, 2000, { net: 777, tax: 0, total: 777 }]
  ] as const)('%s to %d at %d', (mode, price, rate, expected) => {
    expect(taxed(price, mode, rate)).toEqual(expected);
  });

  it('always adds up, and the net of an included tax is taxed back to it within a coin', () => {
    fc.assert(
      fc.property(amounts, fc.integer({ min: 0, max: 10_000 }), (price, rate) => {
        for (const mode of ['added', 'included', 'none'] as const) {
          const { net, tax, total } = taxed(price, mode, rate);
          expect(net + tax).toBe(total);
          expect(tax).toBeGreaterThanOrEqual(0);
        }
        const { net, total } = taxed(price, 'included', rate);
        expect(Math.abs(taxed(net, 'added', rate).total - total)).toBeLessThanOrEqual(1);
      }),
      { numRuns: runs(300), seed: 612 }
    );
  });
});

describe('rounding to a step, and work', () => {
  it.each([
    [12_349, 100, 12_300],
    [12_350, 100, 12_400],
    [12_349, 1, 12_349],
    [12_374, 50, 12_350],
    [12_375, 50, 12_400]
  ])('%d to steps of %d is %d', (amount, step, rounded) => {
    expect(roundedTo(amount, step)).toBe(rounded);
  });
  it('refuses a step of nothing', () => expect(() => roundedTo(1, 0)).toThrow(RangeError));
  it.each([
    [60, 4500, 4500],
    [50, 4500, 3750],
    [1, 4500, 75],
    [1, 100, 2], // 1.67
    [90, 3333, 5000] // 4999.5
  ])('%d minutes at %d an hour cost %d', (minutes, rate, cost) => {
    expect(workCost(minutes, rate)).toBe(cost);
  });
});

describe('typed shares and hours', () => {
  it.each([
    ['20', 2000],
    ['12.5 %', 1250],
    ['12,05%', 1205],
    ['0', 0],
    ['100', 10_000]
  ])('%s is %d basis points', (text, basisPoints) => {
    expect(parseShare(text)).toEqual({ basisPoints });
  });
  it.each(['', '-1', '101', '1.234', 'half', '5 %%'])('“%s” is refused', (text) => {
    expect(parseShare(text).error).toBeTruthy();
  });
  it.each([
    ['12', 720],
    ['12.5', 750],
    ['0,25 h', 15],
    ['1.33', 80],
    ['12:30', 750],
    ['0:05 hours', 5]
  ])('%s is %d minutes', (text, minutes) => {
    expect(parseWork(text)).toEqual({ minutes });
  });
  it.each(['', '12:60', '-3', '10001', 'a day'])('“%s” hours are refused', (text) => {
    expect(parseWork(text).error).toBeTruthy();
  });
  it('writes what it reads', () => {
    for (const minutes of [0, 5, 60, 750, 6001]) expect(parseWork(workDigits(minutes))).toEqual({ minutes });
    for (const basisPoints of [0, 5, 50, 1250, 10_000])
      expect(parseShare(shareDigits(basisPoints))).toEqual({ basisPoints });
  });
});
