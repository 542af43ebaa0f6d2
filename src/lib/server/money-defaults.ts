import { z } from 'zod';
import { parseMoney } from '$lib/units/money';
import { parseShare, taxModes, type ShareReading } from '$lib/units/share';
import { database } from './database';
import { Problem } from './problem';
import type { Scope } from './scope';

/*
 * What a studio's prices and quotes begin with, kept in its settings. What stands here before anybody wrote anything is common
 * practice, no published source; every figure can be replaced in an order.
 */

const DEFAULT_TERMS = [
  'Work begins, and cloth is bought, when the deposit is paid.',
  'Changes that you ask for after agreeing are quoted anew before they are made.',
  'Please tell us a day ahead if you can’t come to a fitting.',
  'The balance is due when the garment is handed over.'
].join('\n');

const DEFAULT_ALTERATIONS =
  'Small alterations found at the fittings are included. Changes of your measurements after the first fitting are charged by the hour.';

/** Stands on every quote, whatever the studio's own terms say. */
export const LAW_NOTICE =
  'Nothing in these terms takes away rights that the law of your country gives you as a consumer. Whether an order made to your own measurements can be called off differs from country to country.';

const minor = z.number().int().min(0).max(9_999_999_999_999);
const share = z.number().int().min(0).max(50_000);
const text = z.string().max(4000);

const moneySchema = z.object({
  /** Minor units for an hour of work. */
  hourly: minor.default(0),
  overhead: share.default(0),
  margin: share.default(0),
  tax: z.object({ mode: z.enum(taxModes), rate: share.max(10_000) }).default({ mode: 'none', rate: 0 }),
  depositShare: share.max(10_000).default(5000),
  /** A price is rounded to a multiple of this many minor units. */
  roundTo: minor.min(1).default(1),
  /** Days that a quote is valid. */
  validDays: z.number().int().min(1).max(365).default(14),
  fittings: z.number().int().min(0).max(20).default(2),
  terms: text.default(DEFAULT_TERMS),
  alterations: text.default(DEFAULT_ALTERATIONS),
  exclusions: text.default(''),
  /** Under the studio's name: address, telephone, tax number; lines. */
  letterhead: text.default('')
});

export type MoneyDefaults = Readonly<z.infer<typeof moneySchema>>;

/** The part of a studio's settings that is read here; the other parts are others'. */
const settingsSchema = z.looseObject({ schema: z.literal(1), money: moneySchema.prefault({}) });

function openSettings(stored: string): z.infer<typeof settingsSchema> {
  const read = settingsSchema.safeParse(JSON.parse(stored));
  if (read.success) return read.data;
  throw new Problem(
    500,
    'settings-unreadable',
    'The stored settings can’t be read',
    `Expected schema 1: ${z.prettifyError(read.error).slice(0, 300)}`
  );
}

/** The studio's defaults. */
export async function moneyDefaults(scope: Scope): Promise<MoneyDefaults> {
  const { settings } = await database()('studios')
    .where({ id: scope.studio })
    .first<{ settings: string }>('settings');
  return openSettings(settings).money;
}

/** Stores the studio's defaults. Quotes that were made keep what they say. */
export async function saveMoneyDefaults(scope: Scope, money: MoneyDefaults): Promise<void> {
  await database().transaction(async (trx) => {
    const { settings } = await trx('studios')
      .where({ id: scope.studio })
      .first<{ settings: string }>('settings');
    await trx('studios')
      .where({ id: scope.studio })
      .update({ settings: JSON.stringify({ ...openSettings(settings), money }) });
  });
}

const words = z.string().trim().max(4000, 'At most 4000 characters, please.').default('');

/** The typed defaults, with amounts in `currency`. */
export const moneyForm = (currency: string) => {
  const amount = (least: number) =>
    z
      .string()
      .trim()
      .transform((typed, context) => {
        const read = parseMoney(typed || String(least === 0 ? 0 : ''), currency);
        if (read.error !== undefined) context.addIssue({ code: 'custom', message: read.error });
        else if (read.minor < least) context.addIssue({ code: 'custom', message: 'More than nothing.' });
        return read.minor ?? 0;
      });
  const per = (most: number) =>
    z
      .string()
      .trim()
      .transform((typed, context) => {
        const read: ShareReading = parseShare(typed || '0', most);
        if (read.error !== undefined) context.addIssue({ code: 'custom', message: read.error });
        return read.basisPoints ?? 0;
      });
  return z
    .object({
      hourly: amount(0),
      overhead: per(500),
      margin: per(500),
      taxMode: z.enum(taxModes, 'Choose how tax is shown.'),
      taxRate: per(100),
      depositShare: per(100),
      roundTo: amount(1),
      validDays: z.coerce
        .number()
        .int('Whole days only.')
        .min(1, 'At least one.')
        .max(365, 'At most a year.'),
      fittings: z.coerce.number().int('Whole fittings only.').min(0).max(20, 'At most 20.'),
      terms: words,
      alterations: words,
      exclusions: words,
      letterhead: words
    })
    .transform(({ taxMode, taxRate, ...rest }): MoneyDefaults => ({
      ...rest,
      tax: { mode: taxMode, rate: taxRate }
    }));
};
