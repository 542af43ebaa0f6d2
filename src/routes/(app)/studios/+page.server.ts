import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { roleWords } from '$lib/server/door-mails';
import { line, readForm, refuse } from '$lib/server/forms';
import { signedIn } from '$lib/server/guard';
import * as rateLimits from '$lib/server/rate-limits';
import * as sessions from '$lib/server/sessions';
import * as studios from '$lib/server/studios';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const { user } = signedIn(event);
  const open = await studios.listOf(user.id);
  return {
    studios: open.map(({ id, name, role }) => ({
      id,
      name,
      role: roleWords[role],
      isHere: id === event.locals.scope?.studio
    }))
  };
};

export const actions: Actions = {
  enter: async (event) => {
    const { user, session } = signedIn(event);
    const read = await readForm(event.request, z.object({ id: z.string() }));
    if (!read.ok) return read.refusal;
    if (!(await studios.enter(read.data.id, user.id)))
      return refuse(read.values, { '': 'You don’t belong to such a studio.' }, 404);
    await sessions.workIn(session.publicId, read.data.id);
    redirect(303, '/');
  },
  open: async (event) => {
    const { user, session } = signedIn(event);
    const read = await readForm(event.request, z.object({ name: line('What is the studio called?', 80) }));
    if (!read.ok) return read.refusal;
    const seconds = await rateLimits.attempt('studios: person', user.id);
    if (seconds > 0) return refuse(read.values, { name: rateLimits.waitWords(seconds) }, 429);
    const id = await studios.create({ name: read.data.name, owner: user.id });
    await sessions.workIn(session.publicId, id);
    redirect(303, '/settings');
  }
};
