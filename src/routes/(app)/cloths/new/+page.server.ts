import { redirect } from '@sveltejs/kit';
import { clothForm } from '$lib/server/cloth-form';
import * as cloths from '$lib/server/cloths';
import { readForm } from '$lib/server/forms';
import { allow } from '$lib/server/guard';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = (event) => {
  allow(event, 'cloths: change');
  const { lengthUnit, currency } = event.locals.studio!;
  return { lengthUnit, currency };
};

export const actions: Actions = {
  default: async (event) => {
    const scope = allow(event, 'cloths: change');
    const form = await readForm(event.request, clothForm(event.locals.studio!));
    if (!form.ok) return form.refusal;
    redirect(303, `/cloths/${await cloths.create(scope, form.data)}?saved`);
  }
};
