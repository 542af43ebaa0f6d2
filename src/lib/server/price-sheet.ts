import { z } from 'zod';
import { currencyExponent, parseMoney } from '$lib/units/money';
import { parseShare, parseWork, taxModes } from '$lib/units/share';
import { Problem } from './problem';

/*
 * What a person wrote about the price of an order, stored as numbered JSON; and the form that it comes from. What is
 * null is the studio's default, or is computed.
 */

const minor = z.number().int().min(0).max(9_999_999_999_999);
const share = z.number().int().min(0).max(100_000);
const line = z.object({ words: z.string().min(1).max(120), amount: minor });

const sheetSchema = z.object({
  schema: z.literal(1),
  /** By cloth: its cost by hand, and whether the client brings it. */
  cloths: z.record(z.string(), z.object({ byHand: minor.nullable(), own: z.boolean() })),
  trims: z.array(line).max(40),
  extras: z.array(line).max(40),
  minutes: z.number().int().min(0).max(600_000).nullable(),
  rate: minor.nullable(),
  workByHand: minor.nullable(),
  overheadShare: share.nullable(),
  overheadByHand: minor.nullable(),
  marginShare: share.nullable(),
  marginByHand: minor.nullable(),
  priceByHand: minor.nullable(),
  taxMode: z.enum(taxModes).nullable(),
  taxRate: share.nullable(),
  depositShare: share.max(10_000).nullable(),
  depositAmount: minor.nullable()
});

export type PriceSheet = z.infer<typeof sheetSchema>;

export const emptySheet: PriceSheet = {
  schema: 1,
  cloths: {},
  trims: [],
  extras: [],
  minutes: null,
  rate: null,
  workByHand: null,
  overheadShare: null,
  overheadByHand: null,
  marginShare: null,
  marginByHand: null,
  priceByHand: null,
  taxMode: null,
  taxRate: null,
  depositShare: null,
  depositAmount: null
};

/** Opens a stored sheet. @throws Problem 500 sheet-unreadable when it is of a form that this version does not know. */
export function openSheet(stored: unknown): PriceSheet {
  const read = sheetSchema.safeParse(stored);
  if (read.success) return read.data;
  const got = (stored as { schema?: unknown } | null)?.schema;
  throw new Problem(
    500,
    'sheet-unreadable',
    'The stored price can’t be read',
    `Expected schema 1, got ${JSON.stringify(got)}: ${z.prettifyError(read.error).slice(0, 300)}`
  );
}

export type SheetReading =
  { ok: true; version: number; sheet: PriceSheet } | { ok: false; errors: Record<string, string> };

/**
 * Reads the typed price form of an order whose cloths are `clothIds`: empty fields are defaults or computed. Every fault is
 * told at its field.
 */
export function readSheet(
  values: Readonly<Record<string, string>>,
  currency: string,
  clothIds: readonly string[]
): SheetReading {
  const errors: Record<string, string> = {};
  currencyExponent(currency);
  const typed = (name: string) => (values[name] ?? '').trim();
  const money = (name: string): number | null => {
    if (typed(name) === '') return null;
    const read = parseMoney(typed(name), currency);
    if (read.error !== undefined) errors[name] = read.error;
    return read.minor ?? 0;
  };
  const share = (name: string, most: number): number | null => {
    if (typed(name) === '') return null;
    const read = parseShare(typed(name), most);
    if (read.error !== undefined) errors[name] = read.error;
    return read.basisPoints ?? 0;
  };
  const work = (name: string): number | null => {
    if (typed(name) === '') return null;
    const read = parseWork(typed(name));
    if (read.error !== undefined) errors[name] = read.error;
    return read.minutes ?? 0;
  };
  const lines = (name: 'trims' | 'extras') => {
    const found: { words: string; amount: number }[] = [];
    for (let i = 0; i < 40; i++) {
      const words = typed(`${name}.${i}.words`);
      const amount = money(`${name}.${i}.amount`);
      if (words === '' && amount === null) continue;
      if (words === '') errors[`${name}.${i}.words`] = 'What is it?';
      else if (words.length > 120) errors[`${name}.${i}.words`] = 'At most 120 characters, please.';
      else if (amount === null) errors[`${name}.${i}.amount`] = 'What does it cost?';
      found.push({ words: words.slice(0, 120) || '?', amount: amount ?? 0 });
    }
    return found;
  };
  const version = Number(values.version ?? '0');
  if (!Number.isInteger(version) || version < 0) errors[''] = 'The form is not whole. Load the page again.';
  const mode = typed('taxMode');
  if (mode !== '' && !taxModes.some((one) => one === mode)) errors.taxMode = 'Choose how tax is shown.';
  const sheet: PriceSheet = {
    schema: 1,
    cloths: Object.fromEntries(
      clothIds.map((id) => [id, { byHand: money(`cloth.${id}`), own: values[`own.${id}`] === 'on' }])
    ),
    trims: lines('trims'),
    extras: lines('extras'),
    minutes: work('minutes'),
    rate: money('rate'),
    workByHand: money('workByHand'),
    overheadShare: share('overheadShare', 500),
    overheadByHand: money('overheadByHand'),
    marginShare: share('marginShare', 500),
    marginByHand: money('marginByHand'),
    priceByHand: money('priceByHand'),
    taxMode: taxModes.find((one) => one === mode) ?? null,
    taxRate: share('taxRate', 100),
    depositShare: share('depositShare', 100),
    depositAmount: money('depositAmount')
  };
  if (sheet.depositShare !== null && sheet.depositAmount !== null)
    errors.depositAmount = 'Either a share or a sum, not both.';
  return Object.keys(errors).length > 0 ? { ok: false, errors } : { ok: true, version, sheet };
}
