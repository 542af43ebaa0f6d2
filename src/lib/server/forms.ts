import { error, fail, type ActionFailure } from '@sveltejs/kit';
import { z } from 'zod';
import { Problem } from './problem';

/*
 * Forms that work without scripts: what was typed goes through a schema; a refusal goes back with the words at each
 * field and everything that was typed, passwords excepted.
 */

export interface Refused {
  /** What was typed, by field name. */
  values: Record<string, string>;
  /** What is wrong, by field name; `''` for the whole form. */
  errors: Record<string, string>;
}

export type Form<T> =
  { ok: true; data: T; values: Record<string, string> } | { ok: false; refusal: ActionFailure<Refused> };

/** Never sent back to the page. */
const secret = /password|token/i;

/** The typed text of a form, secrets left out; of several fields of one name the last. */
export function typedValues(form: FormData): Record<string, string> {
  return Object.fromEntries(
    [...form].filter(
      (entry): entry is [string, string] => typeof entry[1] === 'string' && !secret.test(entry[0])
    )
  );
}

/** Reads a posted form through `schema` (an object of fields). The first fault of each field is told. */
export async function readForm<S extends z.ZodType>(request: Request, schema: S): Promise<Form<z.output<S>>> {
  const form = await request.formData();
  const values = typedValues(form);
  const parsed = schema.safeParse(Object.fromEntries(form));
  if (parsed.success) return { ok: true, data: parsed.data, values };
  const errors: Record<string, string> = {};
  for (const issue of parsed.error.issues) errors[String(issue.path[0] ?? '')] ??= issue.message;
  return { ok: false, refusal: refuse(values, errors) };
}

/** A refusal with the words at the fields. */
export function refuse(
  values: Record<string, string>,
  errors: Record<string, string>,
  status = 400
): ActionFailure<Refused> {
  return fail(status, { values, errors });
}

/** A required line of text, trimmed. */
export const line = (words: string, most = 120) =>
  z.string({ error: words }).trim().min(1, words).max(most, `At most ${most} characters, please.`);

/** An e-mail address, in the form in which it is stored. */
export const address = z
  .string({ error: 'Type an e-mail address.' })
  .trim()
  .toLowerCase()
  .max(254, 'This is longer than an e-mail address can be.')
  .pipe(z.email('This is not an e-mail address. One looks like mira@workroom.example.'));

/**
 * Runs a change of a page; a refusal at fields, or a conflict, goes back into the form with what was typed. What is not there
 * is an error page.
 */
export async function orRefusal(
  values: Record<string, string>,
  change: () => Promise<unknown>
): Promise<ActionFailure<Refused> | null> {
  try {
    await change();
    return null;
  } catch (refusal) {
    if (!(refusal instanceof Problem)) throw refusal;
    if (refusal.status === 404) error(404, refusal.message);
    const fields = refusal.extra.fields as Record<string, string> | undefined;
    return refuse(values, fields ?? { '': `${refusal.title}. ${refusal.detail}` }, refusal.status);
  }
}
