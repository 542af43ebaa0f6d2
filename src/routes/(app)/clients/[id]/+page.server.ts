import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { knownClientForm } from '$lib/server/client-form';
import * as clients from '$lib/server/clients';
import * as draftRuns from '$lib/server/draft-runs';
import { orRefusal, readForm } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import * as sets from '$lib/server/measurement-sets';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'clients: see contact');
  const client = await orErrorPage(clients.read(scope, event.params.id));
  const [measured, orders, runs] = await Promise.all([
    sets.list(scope, client.id),
    clients.ordersOf(scope, client.id),
    draftRuns.ofClient(scope, client.id)
  ]);
  return { client, sets: measured, orders, runs, done: event.url.searchParams.get('done') };
};

export const actions: Actions = {
  save: async (event) => {
    const scope = allow(event, 'clients: see contact');
    const form = await readForm(event.request, knownClientForm);
    if (!form.ok) return form.refusal;
    const { version, ...words } = form.data;
    const refused = await orRefusal(form.values, () =>
      clients.update(scope, event.params.id, version, words)
    );
    if (refused) return refused;
    redirect(303, `/clients/${event.params.id}?done=saved`);
  },
  erase: async (event) => {
    const scope = allow(event, 'clients: see contact');
    await orErrorPage(clients.read(scope, event.params.id));
    const form = await readForm(
      event.request,
      z.object({ confirm: z.literal('erase', { error: 'Type the word erase to go on.' }) })
    );
    if (!form.ok) return form.refusal;
    const refused = await orRefusal(form.values, () => clients.erase(scope, event.params.id));
    if (refused) return refused;
    redirect(303, `/clients/${event.params.id}?done=erased`);
  }
};
