import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { currencyExponent, formatMoney, moneyDigits, parseMoney } from '$lib/units/money';

describe('typed money', () => {
  it.each([
    ['12', 'EUR', 1200],
    ['12.5', 'EUR', 1250],
    ['12,50', 'EUR', 1250],
    ['€ 12.50', 'EUR', 1250],
    ['12.50 EUR', 'EUR', 1250],
    ['1 250', 'EUR', 125000],
    ['0.29', 'EUR', 29],
    ['1250', 'JPY', 1250],
    ['1.234', 'KWD', 1234],
    ['.5', 'GBP', 50],
    ['$3', 'CAD', 300]
  ])('%s in %s is %d minor units', (text, currency, minor) => {
    expect(parseMoney(text, currency)).toEqual({ minor });
  });

  it.each([
    ['1,250', 'EUR', '2 decimals at most'],
    ['12.5', 'JPY', 'no decimals'],
    ['£12', 'EUR', 'is not an amount'],
    ['-4', 'EUR', 'is not an amount'],
    ['', 'EUR', 'No amount given'],
    ['.', 'EUR', 'is not an amount'],
    ['1e9', 'EUR', 'is not an amount'],
    ['99999999999999', 'EUR', 'too large']
  ])('%s in %s is refused', (text, currency, reason) => {
    const { minor, error } = parseMoney(text, currency);
    expect(minor).toBeUndefined();
    expect(error).toContain(reason);
  });

  it('comes back from its digits unchanged, for every exponent', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 9_999_999_999 }),
        fc.constantFrom('EUR', 'JPY', 'KWD', 'CLF'),
        (minor, currency) => {
          expect(parseMoney(moneyDigits(minor, currency), currency)).toEqual({ minor });
        }
      ),
      { seed: 12 }
    );
  });
});

describe('shown money', () => {
  it('has the decimals of its currency', () => {
    expect(formatMoney(1250, 'EUR')).toBe('€12.50');
    expect(formatMoney(5, 'GBP')).toBe('£0.05');
    expect(formatMoney(-5, 'GBP')).toBe('-£0.05');
    expect(formatMoney(1250, 'JPY')).toBe('JP¥1,250');
    expect(formatMoney(1250, 'KWD')).toMatch(/KWD\s1\.250/);
    expect(formatMoney(9007199254740991, 'EUR')).toBe('€90,071,992,547,409.91');
  });

  it('agrees on decimals with the currency table of the language runtime, which follows ISO 4217 (ECMA-402, CurrencyDigits)', () => {
    const known = [
      'EUR',
      'USD',
      'GBP',
      'CHF',
      'JPY',
      'KRW',
      'ISK',
      'CLP',
      'VND',
      'XAF',
      'XOF',
      'XPF',
      'KWD',
      'BHD'
    ];
    for (const currency of [...known, 'JOD', 'OMR', 'TND', 'SEK', 'PLN', 'CZK', 'INR', 'BRL', 'PYG', 'RWF']) {
      const format = new Intl.NumberFormat('en', { style: 'currency', currency });
      expect(currencyExponent(currency), currency).toBe(format.resolvedOptions().maximumFractionDigits);
    }
  });

  it('refuses parts of a minor unit and unknown codes', () => {
    expect(() => formatMoney(0.5, 'EUR')).toThrow(RangeError);
    expect(() => currencyExponent('euro')).toThrow(RangeError);
  });
});
