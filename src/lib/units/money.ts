import type { Minor } from './measure';

/*
 * Money is a whole number of minor units and a currency of ISO 4217. Nothing here divides by 100 in floating point.
 */

/** Currencies whose minor unit is not a hundredth (ISO 4217, list one). Each other one has exponent 2. */
const exponents: Readonly<Record<string, number>> = Object.fromEntries([
  ...['BIF', 'CLP', 'DJF', 'GNF', 'ISK', 'JPY', 'KMF', 'KRW', 'PYG', 'RWF'].map((code) => [code, 0] as const),
  ...['UGX', 'UYI', 'VND', 'VUV', 'XAF', 'XOF', 'XPF'].map((code) => [code, 0] as const),
  ...['BHD', 'IQD', 'JOD', 'KWD', 'LYD', 'OMR', 'TND'].map((code) => [code, 3] as const),
  ...['CLF', 'UYW'].map((code) => [code, 4] as const)
]);

/** How many decimals the currency's minor unit stands for: 2 for EUR, 0 for JPY, 3 for KWD. Throws on what is no code. */
export function currencyExponent(currency: string): number {
  if (!/^[A-Z]{3}$/.test(currency))
    throw new RangeError(`“${currency}” is not a currency code of three capitals`);
  return exponents[currency] ?? 2;
}

export type MoneyReading = { minor: Minor; error?: undefined } | { minor?: undefined; error: string };

/** The amount as it is written in digits, with the currency's decimals: 1250 EUR is `12.50`, 1250 JPY is `1250`. */
export function moneyDigits(minor: Minor, currency: string): string {
  if (!Number.isSafeInteger(minor))
    throw new RangeError(`Money is a whole number of minor units, got ${minor}`);
  const exponent = currencyExponent(currency);
  const digits = Math.abs(minor)
    .toString()
    .padStart(exponent + 1, '0');
  const sign = minor < 0 ? '-' : '';
  return exponent === 0 ? sign + digits : `${sign}${digits.slice(0, -exponent)}.${digits.slice(-exponent)}`;
}

/**
 * What a person typed, in minor units: `12`, `12.5`, `12,50`, `€ 12.50`, `12.50 EUR`, `1 250`. One decimal sign, point
 * or comma; thousands are parted by spaces or not at all, so that 1,250 is never misread. Limits: 0 to 10 million
 * million minor units.
 */
export function parseMoney(text: string, currency: string): MoneyReading {
  const exponent = currencyExponent(currency);
  const example =
    exponent === 0 ? `1250` : `${moneyDigits(1250 * 10 ** (exponent > 2 ? exponent - 2 : 0), currency)}`;
  const hint = `Write an amount in ${currency} such as ${example}`;
  const bare = text
    .trim()
    .replace(/^(?:[a-z]{3}\b|\p{Sc})\s*/iu, (mark) => keepOther(mark, currency))
    .replace(/\s*(?:\b[a-z]{3}|\p{Sc})$/iu, (mark) => keepOther(mark, currency))
    .replace(/(?<=\d)[\s  ](?=\d{3}(?!\d))/g, '');
  if (bare === '') return { error: `No amount given. ${hint}.` };
  const match = /^(\d*)(?:[.,](\d*))?$/.exec(bare);
  if (!match || (match[1] === '' && !match[2]))
    return { error: `“${text.trim()}” is not an amount. ${hint}.` };
  const decimals = match[2] ?? '';
  if (decimals.length > exponent)
    return {
      error:
        exponent === 0
          ? `${currency} has no decimals: “${text.trim()}”. ${hint}.`
          : `${currency} has ${exponent} decimals at most: “${text.trim()}”. ${hint}.`
    };
  const digits = (match[1] || '0') + decimals.padEnd(exponent, '0');
  if (digits.replace(/^0+/, '').length > 13) return { error: `“${text.trim()}” is too large an amount.` };
  return { minor: Number(digits) };
}

const signs: Readonly<Record<string, string>> = {
  '€': 'EUR',
  '£': 'GBP',
  $: 'USD',
  '¥': 'JPY',
  '₹': 'INR',
  '₩': 'KRW'
};

/** Drops the mark of the currency itself; any other stays in the text and is refused with it. */
function keepOther(mark: string, currency: string): string {
  const sign = mark.trim();
  const own =
    sign.toUpperCase() === currency || signs[sign] === currency || (sign === '$' && /D$/.test(currency));
  return own ? '' : mark;
}

/** An amount as a person reads it: `€12.50`, `US$3.00`, `JP¥1,250`. */
export function formatMoney(minor: Minor, currency: string): string {
  const exponent = currencyExponent(currency);
  return new Intl.NumberFormat('en-GB', {
    style: 'currency',
    currency,
    minimumFractionDigits: exponent,
    maximumFractionDigits: exponent
  }).format(moneyDigits(minor, currency) as Intl.StringNumericLiteral);
}
