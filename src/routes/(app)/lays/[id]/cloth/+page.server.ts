import { redirect } from '@sveltejs/kit';
import * as clothLengths from '$lib/server/cloth-lengths';
import { refuse, typedValues } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import { newId } from '$lib/server/ids';
import * as jointLays from '$lib/server/joint-lays';
import * as lays from '$lib/server/lays';
import { Problem } from '$lib/server/problem';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'lays: change');
  const lay = await orErrorPage(lays.read(scope, event.params.id));
  const orders = lay.orders.map(({ id }) => id);
  const lengths = await clothLengths.list(scope, lay.cloth.id);
  return {
    lay: { id: lay.id, name: lay.name, version: lay.version, open: lay.state === 'open' },
    cloth: { id: lay.cloth.id, name: lay.cloth.name },
    chosen: lay.document.strip.given?.id ?? null,
    lengths: lengths.map((length) => ({
      ...length,
      forOthers: length.order !== null && !orders.includes(length.order.id)
    })),
    shares: lay.orders.length > 1 ? await jointLays.sharesOf(scope, lay) : [],
    currency: event.locals.studio!.currency,
    lengthUnit: event.locals.studio!.lengthUnit
  };
};

export const actions: Actions = {
  default: async (event) => {
    const scope = allow(event, 'lays: change');
    const values = typedValues(await event.request.formData());
    try {
      await lays.setLength(scope, event.params.id, {
        version: Number(values.version),
        saveId: newId(),
        length: values.length === '' || values.length === undefined ? null : values.length
      });
    } catch (refusal) {
      if (!(refusal instanceof Problem) || refusal.status === 404)
        return orErrorPage(Promise.reject(refusal));
      return refuse(values, { '': refusal.detail }, refusal.status);
    }
    redirect(303, `/lays/${event.params.id}`);
  }
};
