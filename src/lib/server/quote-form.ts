import { z } from 'zod';
import { address } from './forms';

/* The forms around quotes and money by hand. */

const text = z.string().trim().max(4000, 'At most 4000 characters, please.').default('');

const day = z
  .string({ error: 'Which day?' })
  .trim()
  .refine((typed) => {
    const date = new Date(`${typed}T00:00:00Z`);
    return (
      /^\d{4}-\d{2}-\d{2}$/.test(typed) &&
      !Number.isNaN(date.valueOf()) &&
      date.toISOString().startsWith(typed)
    );
  }, 'A day is written like 2026-05-31.');

/** What a quote says beside the price. */
export const quoteWordsForm = z.object({
  validUntil: day,
  fittings: z.coerce.number({ error: 'How many?' }).int('Whole fittings only.').min(0).max(20, 'At most 20.'),
  dates: text,
  alterations: text,
  exclusions: text,
  terms: text
});

export const sendForm = z.object({ to: address });

const once = z.uuid('The form is not whole. Load the page again.');

/** Money that came in by hand; the amount is read with the currency. */
export const byHandForm = z.object({
  id: once,
  kind: z.enum(['deposit', 'balance', 'other'], 'Choose what it was for.'),
  method: z.enum(['cash', 'transfer'], 'Choose how it came.'),
  amount: z.string().trim(),
  day,
  note: z.string().trim().max(200, 'At most 200 characters, please.').default(''),
  receiptTo: z.union([z.literal('').transform(() => null), address])
});

/** Money that goes back. */
export const refundForm = z.object({
  id: once,
  of: z.string().max(64),
  amount: z.string().trim(),
  method: z.enum(['card', 'cash', 'transfer'], 'Choose how it goes back.'),
  day
});

/** The client's answer to a quote: what they read, and who they are. */
export const answerForm = z.object({
  number: z.coerce.number().int().min(1),
  hash: z.string().regex(/^[\da-f]{64}$/),
  name: z.string().trim().min(2, 'Type your name.').max(120, 'At most 120 characters, please.'),
  read: z.literal('on', 'Say that you have read the quote and its terms.')
});

export const questionForm = z.object({
  id: once,
  words: z.string().trim().min(3, 'What would you like to ask?').max(2000, 'At most 2000 characters, please.')
});
