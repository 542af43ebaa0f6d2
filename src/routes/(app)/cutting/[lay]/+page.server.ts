import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import * as cutting from '$lib/server/cutting';
import { orRefusal, refuse, typedValues } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import { parseLength, type LengthUnit } from '$lib/units/length';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'lays: cut');
  const [ticket, record] = await Promise.all([
    orErrorPage(cutting.ticket(scope, event.params.lay)),
    cutting.recordOf(scope, event.params.lay)
  ]);
  return { ticket, record, unit: event.locals.studio!.lengthUnit, timeZone: event.locals.studio!.timeZone };
};

const words = (most: number) =>
  z.string().trim().max(most, `At most ${most} characters, please.`).default('');
const recordForm = z.object({ flaws: words(1000), recuts: words(1000), place: words(80) });

/** Lengths of a form by name; faults by field. */
function lengths(values: Record<string, string>, unit: LengthUnit, names: readonly string[]) {
  const read: Record<string, number | null> = {};
  const errors: Record<string, string> = {};
  for (const name of names) {
    const text = (values[name] ?? '').trim();
    if (text === '') {
      read[name] = null;
      continue;
    }
    const reading = parseLength(text, unit, { least: 1, most: 200_000 });
    if (reading.error !== undefined) errors[name] = reading.error;
    else read[name] = reading.mm;
  }
  return { read, errors };
}

export const actions: Actions = {
  /** What of the lay still fits a narrower cloth. */
  measureIn: async (event) => {
    const scope = allow(event, 'lays: cut');
    await orErrorPage(cutting.ticket(scope, event.params.lay));
    const values = typedValues(await event.request.formData());
    const { read, errors } = lengths(values, event.locals.studio!.lengthUnit, ['width', 'length']);
    if (read.width == null) errors.width ??= 'Measure the narrowest of three places, between the selvedges.';
    if (Object.keys(errors).length > 0) return refuse(values, errors);
    let met: string[] = [];
    const refused = await orRefusal(values, async () => {
      met = await cutting.unfit(scope, event.params.lay, { width: read.width!, length: read.length ?? null });
    });
    return refused ?? { values, errors: {}, met };
  },
  record: async (event) => {
    const scope = allow(event, 'lays: cut');
    const ticket = await orErrorPage(cutting.ticket(scope, event.params.lay));
    const values = typedValues(await event.request.formData());
    const { read, errors } = lengths(values, event.locals.studio!.lengthUnit, ['lengthUsed', 'widthMet']);
    if (read.lengthUsed == null) errors.lengthUsed ??= 'How much cloth was really used, ends included?';
    const parsed = recordForm.safeParse(values);
    if (!parsed.success)
      for (const issue of parsed.error.issues) errors[String(issue.path[0])] ??= issue.message;
    if (Object.keys(errors).length > 0 || !parsed.success) return refuse(values, errors);
    const offcuts = ticket.left.flatMap((box, k) =>
      values[`keep.${k}`] === 'yes'
        ? [{ length: box.maxX - box.minX, width: box.maxY - box.minY, place: parsed.data.place }]
        : []
    );
    const refused = await orRefusal(values, () =>
      cutting.record(scope, event.params.lay, {
        lengthUsed: read.lengthUsed!,
        widthMet: read.widthMet ?? null,
        flaws: parsed.data.flaws,
        recuts: parsed.data.recuts,
        offcuts
      })
    );
    if (refused) return refused;
    redirect(303, `/cutting/${event.params.lay}`);
  }
};
