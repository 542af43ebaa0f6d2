import { redirect } from '@sveltejs/kit';
import * as clothLengths from '$lib/server/cloth-lengths';
import * as cloths from '$lib/server/cloths';
import { refuse } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import * as jointLays from '$lib/server/joint-lays';
import * as lays from '$lib/server/lays';
import { Problem } from '$lib/server/problem';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'lays: change');
  const cloth = await orErrorPage(cloths.read(scope, event.params.id));
  const lengths = await clothLengths.list(scope, cloth.id);
  return {
    cloth: { id: cloth.id, name: cloth.name },
    needs: await jointLays.openNeeds(scope, cloth.id),
    /** Chosen from the start: the order that the person came from. */
    order: event.url.searchParams.get('order'),
    lengths: lengths
      .filter(({ state }) => state === 'free')
      .map(({ id, name, length }) => ({ id, name, length })),
    lengthUnit: event.locals.studio!.lengthUnit
  };
};

export const actions: Actions = {
  default: async (event) => {
    const scope = allow(event, 'lays: change');
    await orErrorPage(cloths.read(scope, event.params.id));
    const form = await event.request.formData();
    const [first, ...others] = form.getAll('order').filter((one) => typeof one === 'string');
    if (first === undefined || others.length === 0)
      return refuse({}, { '': 'A joint lay serves at least two orders: choose them.' });
    const length = form.get('length');
    try {
      const { id } = await lays.create(scope, {
        orderId: first,
        with: others,
        clothId: event.params.id,
        length: typeof length === 'string' && length !== '' ? length : null
      });
      redirect(303, `/lays/${id}`);
    } catch (refusal) {
      if (!(refusal instanceof Problem)) throw refusal;
      if (refusal.status === 404) return orErrorPage(Promise.reject(refusal));
      return refuse({}, { '': refusal.detail }, refusal.status);
    }
  }
};
