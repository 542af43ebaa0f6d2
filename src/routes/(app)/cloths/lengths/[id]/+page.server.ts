import { redirect, type ActionFailure } from '@sveltejs/kit';
import { formatDecimal, MM_PER } from '$lib/units/length';
import { moneyDigits } from '$lib/units/money';
import { flawForm, lengthForm } from '$lib/server/cloth-length-form';
import * as clothLengths from '$lib/server/cloth-lengths';
import * as cloths from '$lib/server/cloths';
import { readForm, refuse, typedValues, type Refused } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import * as layLengths from '$lib/server/lay-lengths';
import { may } from '$lib/server/permissions';
import { createPicture } from '$lib/server/pictures';
import { Problem } from '$lib/server/problem';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'cloths: see');
  const length = await orErrorPage(clothLengths.read(scope, event.params.id));
  const cloth = await cloths.read(scope, length.clothId);
  const { orders } = await cloths.uses(scope, cloth.id);
  const { lengthUnit, currency } = event.locals.studio!;
  const typed = (mm: number) => formatDecimal(mm / MM_PER[lengthUnit], 3);
  return {
    length,
    cloth: { id: cloth.id, name: cloth.name, fullWidth: cloth.fullWidth },
    /** Orders that take this cloth and are not over. */
    orders: orders.filter(({ stage }) => stage !== 'handedOver' && stage !== 'cancelled'),
    lays: await layLengths.laysOn(scope, length.id),
    values: {
      version: String(length.version),
      kind: length.kind,
      name: length.name,
      length: length.typed.length,
      usableWidth: length.typed.usableWidth,
      outline: (length.outline ?? []).map(({ x, y }) => `${typed(x)}; ${typed(y)}`).join('\n'),
      batch: length.batch,
      place: length.place,
      note: length.note,
      ...(length.price
        ? { price: moneyDigits(length.price.minor, currency), priceUnit: length.price.unit }
        : {})
    } as Record<string, string>,
    mayChange: may(scope.role, 'cloth lengths: change') && length.state !== 'used',
    seesPrices: may(scope.role, 'prices: change'),
    lengthUnit,
    currency,
    timeZone: event.locals.studio!.timeZone
  };
};

/** Runs a change: a refusal goes back to the page with what was typed; a thing of another studio is an error page. */
async function changed(
  id: string,
  values: Record<string, string>,
  work: () => Promise<unknown>
): Promise<ActionFailure<Refused>> {
  try {
    await work();
  } catch (refusal) {
    if (!(refusal instanceof Problem) || refusal.status === 404) return orErrorPage(Promise.reject(refusal));
    return refuse(values, { '': refusal.detail }, refusal.status);
  }
  redirect(303, `/cloths/lengths/${id}`);
}

export const actions: Actions = {
  save: async (event) => {
    const scope = allow(event, 'cloth lengths: change');
    const form = await readForm(event.request, lengthForm(event.locals.studio!));
    if (!form.ok) return form.refusal;
    const { id } = event.params;
    return changed(id, form.values, () =>
      clothLengths.update(scope, id, Number(form.values.version), form.data)
    );
  },
  photo: async (event) => {
    const scope = allow(event, 'cloth lengths: change');
    await orErrorPage(clothLengths.read(scope, event.params.id));
    const form = await event.request.formData();
    const upload = form.get('photo');
    const values = { what: 'photo' };
    if (!(upload instanceof File) || upload.size === 0)
      return refuse(values, { photo: 'Choose a photo first.' });
    const { id } = event.params;
    return changed(id, values, async () => {
      const bytes = new Uint8Array(await upload.arrayBuffer());
      const file = await createPicture(scope, { name: upload.name, bytes });
      await clothLengths.setPhoto(scope, id, file.id);
    });
  },
  addFlaw: async (event) => {
    const scope = allow(event, 'cloth lengths: change');
    const length = await orErrorPage(clothLengths.read(scope, event.params.id));
    const form = await readForm(event.request, flawForm(event.locals.studio!, length));
    if (!form.ok) return form.refusal;
    return changed(length.id, form.values, () => clothLengths.addFlaw(scope, length.id, form.data));
  },
  removeFlaw: async (event) => {
    const scope = allow(event, 'cloth lengths: change');
    const values = typedValues(await event.request.formData());
    const { id } = event.params;
    return changed(id, values, () => clothLengths.removeFlaw(scope, id, values.flaw ?? ''));
  },
  reserve: async (event) => {
    const scope = allow(event, 'cloth lengths: change');
    const values = typedValues(await event.request.formData());
    const { id } = event.params;
    return changed(id, values, () =>
      clothLengths.reserve(scope, id, { version: Number(values.version), orderId: values.order ?? '' })
    );
  },
  release: async (event) => {
    const scope = allow(event, 'cloth lengths: change');
    const values = typedValues(await event.request.formData());
    const { id } = event.params;
    return changed(id, values, () => clothLengths.release(scope, id, Number(values.version)));
  },
  sign: async (event) => {
    const scope = allow(event, 'cloth lengths: change');
    const values = typedValues(await event.request.formData());
    const by = (values.by ?? '').trim().slice(0, 120);
    if (by === '') return refuse(values, { by: 'Type the name of who saw the flaws.' });
    const { id } = event.params;
    return changed(id, values, () =>
      clothLengths.signOff(scope, id, { version: Number(values.version), by })
    );
  }
};
