import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { readForm } from '$lib/server/forms';
import { newPassword, opened } from '$lib/server/link-page';
import * as resets from '$lib/server/resets';
import * as sessions from '$lib/server/sessions';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const { email } = await opened(event, () => resets.read(event.params.token));
  return { email };
};

export const actions: Actions = {
  default: async (event) => {
    const { request, cookies, params } = event;
    const { name, email } = await opened(event, () => resets.read(params.token));
    const read = await readForm(request, z.object({ password: newPassword([name, email]) }));
    if (!read.ok) return read.refusal;
    await opened(event, () => resets.complete(params.token, read.data.password));
    sessions.clearCookie(cookies);
    redirect(303, '/sign-in?done=reset');
  }
};
