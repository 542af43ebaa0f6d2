import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { address, line, readForm, refuse } from '$lib/server/forms';
import { mayAskForMail } from '$lib/server/mail-requests';
import * as signUps from '$lib/server/sign-ups';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals }) => {
  if (locals.person.user) redirect(303, '/studios');
};

const form = z.object({
  studioName: line('What is your studio called?', 80),
  name: line('What is your name?', 80),
  email: address
});

export const actions: Actions = {
  default: async ({ request, getClientAddress }) => {
    const read = await readForm(request, form);
    if (!read.ok) return read.refusal;
    const asked = await mayAskForMail(getClientAddress(), read.data.email);
    if (asked.wait) return refuse(read.values, { '': asked.wait }, 429);
    if (asked.send) await signUps.ask(read.data);
    return { sentTo: read.data.email };
  }
};
