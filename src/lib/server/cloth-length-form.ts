import { z } from 'zod';
import { priceUnits } from '$lib/cloth/cost';
import { edgeOf } from '$lib/cloth/edge';
import type { Point } from '$lib/geometry/point';
import { parseLength, type LengthUnit } from '$lib/units/length';
import { parseMoney } from '$lib/units/money';
import type { FlawInput } from './cloth-flaws';
import { lengthKinds, type LengthInput } from './cloth-lengths';
import { line } from './forms';

/** A typed length: millimetres, and the text with the unit that it was meant in. */
export const typedLength = (unit: LengthUnit, words: string, limits: { least: number; most: number }) =>
  z.string({ error: words }).transform((typed, context) => {
    const reading = parseLength(typed, unit, limits);
    if (reading.error !== undefined) {
      context.addIssue({ code: 'custom', message: typed.trim() === '' ? words : reading.error });
      return z.NEVER;
    }
    const text = typed.trim();
    return { mm: reading.mm, typed: /[\p{L}"'″′”’]/u.test(text) ? text : `${text} ${unit}` };
  });

/** A price in the studio's currency; null for none. */
export const typedPrice = (currency: string) =>
  z
    .string()
    .default('')
    .transform((typed, context) => {
      if (typed.trim() === '') return null;
      const reading = parseMoney(typed, currency);
      if (reading.error === undefined) return reading.minor;
      context.addIssue({ code: 'custom', message: reading.error });
      return z.NEVER;
    });

const text = (most: number) => z.string().trim().max(most, `At most ${most} characters, please.`).default('');

/** Corners as they are typed, one a line: '120; 55' is 120 from the start and 55 from the near side. */
export function parseCorners(typed: string, unit: LengthUnit): { corners: Point[]; error?: string } {
  const corners: Point[] = [];
  for (const [i, row] of typed
    .split('\n')
    .map((one) => one.trim())
    .filter((one) => one !== '')
    .entries()) {
    const parts = row.split(/[;\t]|,\s/);
    const [x, y] = parts.map((part) => parseLength(part, unit));
    if (parts.length !== 2 || x?.mm === undefined || y?.mm === undefined)
      return {
        corners,
        error: `Corner ${i + 1} is “${row}”. Write how far from the start, a semicolon, how far from the near side: 120; 55`
      };
    corners.push({ x: x.mm, y: y.mm });
  }
  return { corners };
}

/** The form of a length as it is measured in. */
export function lengthForm({ lengthUnit, currency }: { lengthUnit: LengthUnit; currency: string }) {
  return z
    .object({
      kind: z.enum(lengthKinds, 'Say what it is.').default('roll'),
      name: line('Give it a name, as it is marked on the shelf.'),
      length: typedLength(lengthUnit, 'How long is it?', { least: 20, most: 200_000 }),
      usableWidth: typedLength(lengthUnit, 'How much of its width can be cut from, at its narrowest?', {
        least: 20,
        most: 10_000
      }),
      outline: z.string().max(20_000).default(''),
      batch: text(120),
      place: text(120),
      note: text(2000),
      price: typedPrice(currency),
      priceUnit: z.enum(priceUnits).default('metre')
    })
    .transform((form, context): LengthInput => {
      let outline: LengthInput['outline'] = null;
      if (form.outline.trim() !== '') {
        const { corners, error } = parseCorners(form.outline, lengthUnit);
        const reading = error
          ? { error }
          : edgeOf(corners, { length: form.length.mm, width: form.usableWidth.mm });
        if (reading.error !== undefined)
          context.addIssue({ code: 'custom', path: ['outline'], message: reading.error });
        else outline = reading.edge;
      }
      return {
        kind: form.kind,
        name: form.name,
        length: form.length.mm,
        usableWidth: form.usableWidth.mm,
        typed: { length: form.length.typed, usableWidth: form.usableWidth.typed },
        outline,
        batch: form.batch,
        place: form.place,
        note: form.note,
        price: form.price === null ? null : { minor: form.price, unit: form.priceUnit }
      };
    });
}

/** The form of a flaw on a length: both selvedges may be measured from. */
export function flawForm(
  { lengthUnit }: { lengthUnit: LengthUnit },
  on: { readonly length: number; readonly usableWidth: number }
) {
  const size = (words: string) => typedLength(lengthUnit, words, { least: 1, most: 200_000 });
  return z
    .object({
      fromEnd: typedLength(lengthUnit, 'How far from the start of the length?', {
        least: 0,
        most: on.length
      }),
      selvedge: z.enum(['near', 'far']).default('near'),
      fromSelvedge: typedLength(lengthUnit, 'How far from the selvedge?', { least: 0, most: on.usableWidth }),
      along: size('How long is it along the warp?'),
      across: size('How wide is it across?'),
      kind: z.enum(['fault', 'hole']).default('fault'),
      note: text(200)
    })
    .transform((form): FlawInput => ({
      fromEnd: form.fromEnd.mm,
      fromSelvedge: form.selvedge === 'near' ? form.fromSelvedge.mm : on.usableWidth - form.fromSelvedge.mm,
      along: form.along.mm,
      across: form.across.mm,
      hole: form.kind === 'hole',
      note: form.note
    }));
}
