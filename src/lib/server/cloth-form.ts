import { z } from 'zod';
import { priceUnits } from '$lib/cloth/cost';
import { formatLength, parseLength, type LengthUnit } from '$lib/units/length';
import { parseMoney } from '$lib/units/money';
import { clothNaps, type ClothInput } from './cloths';
import { line } from './forms';

/** The widths that a cloth can have, in millimetres: from a ribbon to the widest stage cloth. */
const widths = { least: 20, most: 10_000 };

const width = (unit: LengthUnit, words: string) =>
  z.string({ error: words }).transform((typed, context) => {
    const reading = parseLength(typed, unit, widths);
    if (reading.error !== undefined) {
      context.addIssue({ code: 'custom', message: typed.trim() === '' ? words : reading.error });
      return z.NEVER;
    }
    // A bare number is kept with the unit that it was meant in: the studio may change its unit later.
    const text = typed.trim();
    return { mm: reading.mm, typed: /[\p{L}"'″′”’]/u.test(text) ? text : `${text} ${unit}` };
  });

/**
 * The form of a cloth as a studio types it: lengths in its unit unless another is written, money in its currency.
 * Gives what `cloths.create` and `cloths.update` take.
 */
export function clothForm({ lengthUnit, currency }: { lengthUnit: LengthUnit; currency: string }) {
  return z
    .object({
      name: line('Give the cloth a name, as it stands on the shelf.'),
      fibre: z.string().trim().max(120, 'At most 120 characters, please.').default(''),
      fullWidth: width(lengthUnit, 'How wide is the cloth from selvedge to selvedge?'),
      usableWidth: width(lengthUnit, 'How much of the width can be cut from?'),
      price: z
        .string()
        .default('')
        .transform((typed, context) => {
          if (typed.trim() === '') return null;
          const reading = parseMoney(typed, currency);
          if (reading.error === undefined) return reading.minor;
          context.addIssue({ code: 'custom', message: reading.error });
          return z.NEVER;
        }),
      priceUnit: z.enum(priceUnits).default('metre'),
      sides: z.enum(['different', 'alike'], 'Say whether the two sides are alike.').default('different'),
      nap: z.enum(clothNaps, 'Say whether the cloth has a nap.').default('none'),
      colour: z
        .string()
        .regex(/^#[0-9a-fA-F]{6}$/, 'A colour is written like #2F5D7C.')
        .default('#FFFDF8'),
      supplierNote: z.string().trim().max(2000, 'At most 2000 characters, please.').default('')
    })
    .transform((form, context): ClothInput => {
      if (form.usableWidth.mm > form.fullWidth.mm)
        context.addIssue({
          code: 'custom',
          path: ['usableWidth'],
          message: `The usable width can't be more than the full width of ${formatLength(form.fullWidth.mm, lengthUnit)}.`
        });
      return {
        name: form.name,
        fibre: form.fibre,
        fullWidth: form.fullWidth.mm,
        usableWidth: form.usableWidth.mm,
        typed: { fullWidth: form.fullWidth.typed, usableWidth: form.usableWidth.typed },
        price: form.price === null ? null : { minor: form.price, unit: form.priceUnit },
        sidesAlike: form.sides === 'alike',
        nap: form.nap,
        colour: form.colour,
        supplierNote: form.supplierNote
      };
    });
}
