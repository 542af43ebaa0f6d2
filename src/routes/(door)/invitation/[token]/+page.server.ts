import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { roleWords } from '$lib/server/door-mails';
import { line, readForm } from '$lib/server/forms';
import { signedIn } from '$lib/server/guard';
import * as invitations from '$lib/server/invitations';
import { newPassword, opened } from '$lib/server/link-page';
import * as sessions from '$lib/server/sessions';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const { studioName, email, role, hasAccount } = await opened(event, () =>
    invitations.read(event.params.token)
  );
  const { user } = event.locals.person;
  return {
    studioName,
    email,
    role: roleWords[role],
    signInPath: `/sign-in?next=${encodeURIComponent(event.url.pathname)}`,
    /** What the person at the door has to do. */
    way: user
      ? user.email === email
        ? ('accept' as const)
        : ('other account' as const)
      : hasAccount
        ? ('sign in' as const)
        : ('new account' as const),
    signedInAs: user?.email ?? null
  };
};

export const actions: Actions = {
  accept: async (event) => {
    const { user, session } = signedIn(event);
    const { studioId } = await opened(event, () => invitations.acceptAs(event.params.token, user));
    await sessions.workIn(session.publicId, studioId);
    redirect(303, '/');
  },
  join: async (event) => {
    const { request, cookies, params } = event;
    const { email, studioName } = await opened(event, () => invitations.read(params.token));
    const form = z.object({
      name: line('What is your name?', 80),
      password: newPassword([email, studioName])
    });
    const read = await readForm(request, form);
    if (!read.ok) return read.refusal;
    const { userId, studioId } = await opened(event, () => invitations.acceptAsNew(params.token, read.data));
    await sessions.start(cookies, userId, studioId, request.headers.get('user-agent') ?? '');
    redirect(303, '/');
  }
};
