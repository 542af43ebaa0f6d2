import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { formatDecimal, formatLength, parseLength } from '$lib/units/length';
import { runs } from '../../runs';

describe('a typed length', () => {
  it.each([
    ['38', 'cm', 380],
    ['38', 'in', 965.2],
    ['38 cm', 'in', 380],
    ['380mm', 'cm', 380],
    ['15"', 'cm', 381],
    ['15”', 'cm', 381],
    ['14 7/8 in', 'cm', 377.825],
    ['14-7/8 in', 'cm', 377.825],
    ['1 3/8', 'in', 34.925],
    ['7/8', 'in', 22.225],
    ['14,5', 'cm', 145],
    ['.5', 'cm', 5],
    ['½', 'in', 12.7],
    ['14⅞″', 'cm', 377.825],
    ['14 ⅞ inches', 'cm', 377.825],
    ['1 1/2 yd', 'cm', 1371.6],
    ['1½ yards', 'cm', 1371.6],
    ['2.4 m', 'in', 2400],
    ['2,4 metres', 'in', 2400],
    ['5\' 4 1/2"', 'cm', 1638.3],
    ['5 ft 4 in', 'cm', 1625.6],
    ['2 m 40 cm', 'cm', 2400],
    ['1 yd 9 in', 'cm', 1143],
    ['  38  CM ', 'in', 380],
    ['0', 'cm', 0]
  ] as const)('%s (in %s) is %d mm', (text, unit, mm) => {
    expect(parseLength(text, unit)).toEqual({ mm });
  });

  it.each([
    ['', 'No length given'],
    ['abc', 'is not a length'],
    ['12 parsecs', 'not a unit known here'],
    ['1/0', 'is not a length'],
    ['1.2.3', 'is not a length'],
    ['1.234,5', 'is not a length'],
    ['5 ft 4', 'every part needs its unit'],
    ['4 in 5 ft', 'from the larger unit to the smaller'],
    ['-3', "can't be negative"],
    ['1e3', 'not a unit'],
    ['NaN', 'is not a length']
  ])('%s is refused and told what is allowed', (text, reason) => {
    const { mm, error } = parseLength(text, 'cm');
    expect(mm).toBeUndefined();
    expect(error).toContain(reason);
  });

  it('keeps to its limits and names them in the unit of the studio', () => {
    expect(parseLength('12', 'cm', { least: 200 }).error).toBe('12 cm is too short: at least 20 cm.');
    expect(parseLength('12', 'in', { most: 254 }).error).toBe('12 in is too long: at most 10 in.');
    expect(parseLength('-1 1/4', 'in', { least: -100 })).toEqual({ mm: -31.75 });
  });
});

describe('a shown length', () => {
  it.each([
    [377.825, 'in', {}, '14 7/8 in'],
    [22.225, 'in', {}, '7/8 in'],
    [381, 'in', {}, '15 in'],
    [380, 'in', { fraction: 8 }, '15 in'],
    [380, 'in', { fraction: 64 }, '14 61/64 in'],
    [380, 'in', { decimals: 2 }, '14.96 in'],
    [1371.6, 'yd', { fraction: 8 }, '1 1/2 yd'],
    [385, 'cm', {}, '38.5 cm'],
    [380, 'cm', { decimals: 1, fixed: true }, '38.0 cm'],
    [380, 'cm', { bare: true }, '38'],
    [-12.7, 'in', {}, '−1/2 in'],
    [-0.0001, 'mm', {}, '0 mm'],
    [0, 'in', {}, '0 in'],
    [2400, 'm', {}, '2.4 m'],
    [100, 'mm', {}, '100 mm']
  ] as const)('%d mm in %s is %s', (mm, unit, style, text) => {
    expect(formatLength(mm, unit, style)).toBe(text);
  });

  it('rounds a decimal half up, not to what the binary fraction happens to be', () => {
    expect(formatDecimal(1.005, 2)).toBe('1.01');
    expect(formatDecimal(2.675, 2)).toBe('2.68');
    expect(formatDecimal(-0.05, 1)).toBe('−0.1');
  });

  it('is read back as the same length, to half of its finest part', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 20_000_000 }),
        fc.constantFrom<8 | 16 | 32 | 64>(8, 16, 32, 64),
        (thousandths, fraction) => {
          const mm = thousandths / 1000;
          const inches = parseLength(formatLength(mm, 'in', { fraction }), 'cm').mm!;
          expect(Math.abs(inches - mm)).toBeLessThanOrEqual(25.4 / fraction / 2 + 1e-6);
          expect(parseLength(formatLength(mm, 'cm', { decimals: 4 }), 'in').mm).toBe(mm);
        }
      ),
      { seed: 11, numRuns: runs(500) }
    );
  });
});
