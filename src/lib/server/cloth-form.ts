import { z } from 'zod';
import { priceUnits } from '$lib/cloth/cost';
import { MOST_SHRINKAGE, noShrinkage, treatments } from '$lib/cloth/shrinkage';
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

/** A share typed in per cent, 0 to the most that cloth shrinks by. */
const percent = z
  .string()
  .default('')
  .transform((typed, context) => {
    const number = typed.trim() === '' ? 0 : Number(typed.trim().replace(/\s*%$/, '').replace(',', '.'));
    if (number >= 0 && number <= MOST_SHRINKAGE * 100) return number / 100;
    context.addIssue({
      code: 'custom',
      message: `Type a percentage of 0 to ${MOST_SHRINKAGE * 100}, such as 3.5.`
    });
    return z.NEVER;
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
      treatment: z.enum(treatments, 'Say what is done about shrinking.').default('none'),
      shrinkWarp: percent,
      shrinkWeft: percent,
      buyStep: z
        .string()
        .default('')
        .transform((typed, context) => {
          if (typed.trim() === '') return 100;
          const reading = parseLength(typed, lengthUnit, { least: 1, most: 10_000 });
          if (reading.error === undefined) return reading.mm;
          context.addIssue({ code: 'custom', message: reading.error });
          return z.NEVER;
        }),
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
        supplierNote: form.supplierNote,
        shrinkage:
          form.treatment === 'none'
            ? noShrinkage
            : { treatment: form.treatment, warp: form.shrinkWarp, weft: form.shrinkWeft },
        buyStep: form.buyStep
      };
    });
}
