import { redirect } from '@sveltejs/kit';
import * as addressChanges from '$lib/server/address-changes';
import { signedIn } from '$lib/server/guard';
import { opened } from '$lib/server/link-page';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const { user } = signedIn(event);
  const { email } = await opened(event, () => addressChanges.read(user.id, event.params.token));
  return { email, before: user.email };
};

export const actions: Actions = {
  default: async (event) => {
    const { user } = signedIn(event);
    await opened(event, () => addressChanges.complete(user.id, event.params.token));
    redirect(303, '/profile?done=address');
  }
};
