import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { readForm } from '$lib/server/forms';
import { newPassword, opened } from '$lib/server/link-page';
import * as sessions from '$lib/server/sessions';
import * as signUps from '$lib/server/sign-ups';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const { name, email, studioName } = await opened(event, () => signUps.read(event.params.token));
  return { name, email, studioName };
};

export const actions: Actions = {
  default: async (event) => {
    const { request, cookies, params } = event;
    const { name, email, studioName } = await opened(event, () => signUps.read(params.token));
    const form = z.object({ password: newPassword([name, email, studioName]) });
    const read = await readForm(request, form);
    if (!read.ok) return read.refusal;
    const { userId, studioId } = await opened(event, () =>
      signUps.complete(params.token, read.data.password)
    );
    await sessions.start(cookies, userId, studioId, request.headers.get('user-agent') ?? '');
    redirect(303, '/');
  }
};
