import type { Millimetres } from './measure';

/** The unit in which a studio reads and types body and pattern lengths. */
export type LengthUnit = 'cm' | 'in';

/** Every unit that a length may be shown in. */
export type ShownUnit = 'mm' | 'cm' | 'm' | 'in' | 'yd';

/** Exact by definition: the international inch is 25.4 mm, the foot 12 inches, the yard 36. */
export const MM_PER = { mm: 1, cm: 10, m: 1000, in: 25.4, ft: 304.8, yd: 914.4 } as const;
type AnyUnit = keyof typeof MM_PER;

const spellings: Record<AnyUnit, readonly string[]> = {
  mm: ['mm', 'millimetre', 'millimetres', 'millimeter', 'millimeters'],
  cm: ['cm', 'centimetre', 'centimetres', 'centimeter', 'centimeters'],
  m: ['m', 'metre', 'metres', 'meter', 'meters'],
  in: ['in', 'in.', 'inch', 'inches', '"', '″', '”', "''"],
  ft: ['ft', 'foot', 'feet', "'", '′', '’'],
  yd: ['yd', 'yds', 'yard', 'yards']
};
const unitOf = new Map(
  (Object.keys(spellings) as AnyUnit[]).flatMap((unit) =>
    spellings[unit].map((word) => [word, unit] as const)
  )
);

const vulgar: Record<string, readonly [number, number]> = {
  '¼': [1, 4],
  '½': [1, 2],
  '¾': [3, 4],
  '⅓': [1, 3],
  '⅔': [2, 3],
  '⅕': [1, 5],
  '⅖': [2, 5],
  '⅗': [3, 5],
  '⅘': [4, 5],
  '⅙': [1, 6],
  '⅚': [5, 6],
  '⅛': [1, 8],
  '⅜': [3, 8],
  '⅝': [5, 8],
  '⅞': [7, 8]
};

const allowed = 'Write a length such as 38, 38.5 cm, 380 mm, 2.4 m, 15", 14 7/8 in or 1 1/2 yd';

export type LengthReading = { mm: Millimetres; error?: undefined } | { mm?: undefined; error: string };

export interface LengthLimits {
  /** Smallest length accepted; 0 unless given. */
  readonly least?: Millimetres;
  readonly most?: Millimetres;
}

/** Millimetres without the noise that binary fractions leave: six decimals, never −0. */
function tidy(mm: number): Millimetres {
  return Math.round(mm * 1e6) / 1e6 + 0;
}

/** `14`, `14.5`, `14,5`, `7/8`, `14 7/8`, `14-7/8`, each fraction also as one character (½); null when it is none. */
function parseNumber(text: string): number | null {
  const plain = /^(\d+(?:[.,]\d*)?|[.,]\d+)$/.exec(text);
  if (plain) return Number(text.replace(',', '.'));
  const mixed = /^(?:(\d+)(?:\s+|\s*-\s*))?(\d+)\s*\/\s*(\d+)$/.exec(text);
  if (mixed) {
    const denominator = Number(mixed[3]);
    if (denominator === 0) return null;
    return (Number(mixed[1] ?? 0) * denominator + Number(mixed[2])) / denominator;
  }
  return null;
}

/**
 * What a person typed, as millimetres. Without a unit it is taken in `unit`; any unit may be written, and parts may
 * follow each other from large to small (`5 ft 4 1/2 in`, `1 yd 9 in`, `2 m 40 cm`). Decimal comma and point are alike.
 * An error says what is wrong and what is allowed.
 */
export function parseLength(text: string, unit: LengthUnit, limits: LengthLimits = {}): LengthReading {
  let rest = text
    .normalize('NFC')
    .replace(/⁄/g, '/')
    .replace(/[¼½¾⅓-⅞]/g, (sign) => {
      const fraction = vulgar[sign];
      return fraction ? ` ${fraction[0]}/${fraction[1]}` : sign;
    })
    .replace(/[\s  ]+/g, ' ')
    .trim()
    .toLowerCase();
  if (rest === '') return { error: `No length given. ${allowed}.` };
  const negative = /^[-−–]/.test(rest);
  if (negative) rest = rest.slice(1).trim();

  let mm = 0;
  let smallest = Infinity;
  while (rest !== '') {
    const part = /^([\d.,/ -]*\d[.,]?)\s*([^\d\s.,/-]*\.?)\s*/.exec(rest);
    const number = part && parseNumber(part[1]!.trim());
    if (!part || number === null) return { error: `“${text.trim()}” is not a length. ${allowed}.` };
    const word = part[2]!;
    const whole = part[0] === rest && smallest === Infinity;
    if (word === '' && !whole)
      return { error: `“${text.trim()}”: every part needs its unit, as in 5 ft 4 in. ${allowed}.` };
    const named = word === '' ? unit : (unitOf.get(word) ?? unitOf.get(word.replace(/\.$/, '')));
    if (!named) return { error: `“${word}” is not a unit known here: mm, cm, m, in, ft or yd. ${allowed}.` };
    if (MM_PER[named] >= smallest)
      return { error: `“${text.trim()}”: parts go from the larger unit to the smaller, as in 5 ft 4 in.` };
    smallest = MM_PER[named];
    mm += number! * MM_PER[named];
    rest = rest.slice(part[0].length);
  }
  mm = tidy(negative ? -mm : mm);
  const { least = 0, most = Infinity } = limits;
  if (!Number.isFinite(mm) || mm > most)
    return { error: `${formatLength(mm, unit)} is too long: at most ${formatLength(most, unit)}.` };
  if (mm < least)
    return {
      error:
        least === 0
          ? `A length can't be negative: ${formatLength(mm, unit)}.`
          : `${formatLength(mm, unit)} is too short: at least ${formatLength(least, unit)}.`
    };
  return { mm };
}

export interface LengthStyle {
  /** For in and yd: the finest fraction shown (1/16 unless given); `decimals` shows decimals instead. */
  readonly fraction?: 2 | 4 | 8 | 16 | 32 | 64;
  /** Decimals at most; trailing zeros are left out unless `fixed`. mm 1, cm 2, m 3 unless given. */
  readonly decimals?: number;
  readonly fixed?: boolean;
  /** Leaves the unit out, for a field that already names it. */
  readonly bare?: boolean;
}

const defaultDecimals = { mm: 1, cm: 2, m: 3, in: 3, yd: 3 } as const;

/** Half away from zero, in decimal: 1.005 with two decimals is 1.01. */
export function formatDecimal(value: number, decimals: number, fixed = false): string {
  const scale = 10 ** decimals;
  // A value that stands within rounding noise below a half is the half that was meant.
  const whole = Math.floor(Math.abs(value) * scale + 0.5 + Math.abs(value) * scale * 1e-13);
  let digits = (whole / scale).toFixed(decimals);
  if (!fixed && digits.includes('.')) digits = digits.replace(/\.?0+$/, '');
  return (value < 0 && whole > 0 ? '−' : '') + digits;
}

/** A length as a person reads it: `38.5 cm`, `14 7/8 in`, `1 1/2 yd`, rounded to the nearest of the style. */
export function formatLength(mm: Millimetres, unit: ShownUnit, style: LengthStyle = {}): string {
  const tail = style.bare ? '' : ` ${unit}`;
  if (!Number.isFinite(mm)) return `–${tail}`;
  const value = mm / MM_PER[unit];
  const decimal = style.decimals !== undefined || (unit !== 'in' && unit !== 'yd');
  if (decimal)
    return formatDecimal(value, style.decimals ?? defaultDecimals[unit], style.fixed ?? false) + tail;
  const parts = style.fraction ?? 16;
  const count = Math.round(Math.abs(value) * parts + 1e-9);
  const whole = Math.floor(count / parts);
  let over = count % parts;
  let under = parts;
  while (over !== 0 && over % 2 === 0) {
    over /= 2;
    under /= 2;
  }
  const sign = mm < 0 && count > 0 ? '−' : '';
  const fraction = over === 0 ? '' : `${over}/${under}`;
  return (
    sign + (whole === 0 && fraction ? fraction : [whole, fraction].filter((s) => s !== '').join(' ')) + tail
  );
}
