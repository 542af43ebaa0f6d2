import { redirect } from '@sveltejs/kit';
import { clientForm } from '$lib/server/client-form';
import * as clients from '$lib/server/clients';
import { readForm } from '$lib/server/forms';
import { allow } from '$lib/server/guard';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = (event) => {
  allow(event, 'clients: see contact');
};

export const actions: Actions = {
  default: async (event) => {
    const scope = allow(event, 'clients: see contact');
    const form = await readForm(event.request, clientForm);
    if (!form.ok) return form.refusal;
    redirect(303, `/clients/${await clients.create(scope, form.data)}`);
  }
};
