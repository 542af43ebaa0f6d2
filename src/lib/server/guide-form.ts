import { z } from 'zod';
import { guideChoiceSchema, guideKinds } from '$lib/guide/guide-choice';
import { LONGEST_SIDE, paperNames, SHORTEST_SIDE } from '$lib/guide/papers';
import { parseLength, type LengthUnit } from '$lib/units/length';

/** A length field of the form; empty where it may be. */
const length = (unit: LengthUnit, limits: { least: number; most: number }) =>
  z
    .string()
    .default('')
    .transform((typed, context) => {
      if (typed.trim() === '') return undefined;
      const reading = parseLength(typed, unit, limits);
      if (reading.error === undefined) return reading.mm;
      context.addIssue({ code: 'custom', message: reading.error });
      return z.NEVER;
    });

/** The form that asks for a guide: which revision, and how it is printed. Gives a choice as `guides.create` takes it. */
export function guideForm(unit: LengthUnit) {
  const side = length(unit, { least: SHORTEST_SIDE, most: LONGEST_SIDE });
  return z
    .object({
      revision: z.string({ error: 'Choose a revision.' }).min(1, 'Choose a revision.'),
      kind: z.enum(guideKinds, 'Choose what to print.'),
      paper: z.enum(['', 'own', 'custom', ...paperNames]).default(''),
      width: side,
      height: side,
      margin: length(unit, { least: 0, most: 50 }),
      overlap: length(unit, { least: 5, most: 100 })
    })
    .transform((form, context) => {
      const custom = form.paper === 'custom' && form.kind !== 'whole';
      if (custom && form.width === undefined)
        context.addIssue({ code: 'custom', path: ['width'], message: 'How wide is the paper?' });
      if (custom && form.height === undefined)
        context.addIssue({ code: 'custom', path: ['height'], message: 'How high is the paper?' });
      if (context.issues.length > 0) return z.NEVER;
      const choice = guideChoiceSchema.safeParse({
        kind: form.kind,
        paper: form.kind === 'whole' || form.paper === '' || form.paper === 'own' ? undefined : form.paper,
        custom: custom ? { width: form.width, height: form.height } : undefined,
        margin: form.margin,
        overlap: form.overlap
      });
      if (choice.success) return { revision: form.revision, choice: choice.data };
      for (const { path, message } of choice.error.issues)
        context.addIssue({ code: 'custom', path: [path[0] === 'custom' ? 'width' : path[0]!], message });
      return z.NEVER;
    });
}
