import { redirect } from '@sveltejs/kit';
import { lengthForm } from '$lib/server/cloth-length-form';
import * as clothLengths from '$lib/server/cloth-lengths';
import * as cloths from '$lib/server/cloths';
import { readForm } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import { may } from '$lib/server/permissions';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'cloth lengths: change');
  const cloth = await orErrorPage(cloths.read(scope, event.params.id));
  const { lengthUnit, currency } = event.locals.studio!;
  return {
    cloth: { id: cloth.id, name: cloth.name },
    values: { usableWidth: cloth.typed.usableWidth } as Record<string, string>,
    seesPrices: may(scope.role, 'prices: change'),
    lengthUnit,
    currency
  };
};

export const actions: Actions = {
  default: async (event) => {
    const scope = allow(event, 'cloth lengths: change');
    const form = await readForm(event.request, lengthForm(event.locals.studio!));
    if (!form.ok) return form.refusal;
    const id = await orErrorPage(clothLengths.create(scope, event.params.id, form.data));
    redirect(303, `/cloths/lengths/${id}`);
  }
};
