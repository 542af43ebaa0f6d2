import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import * as accounts from '$lib/server/accounts';
import * as addressChanges from '$lib/server/address-changes';
import { address, line, readForm, refuse } from '$lib/server/forms';
import { signedIn } from '$lib/server/guard';
import { newPassword } from '$lib/server/link-page';
import { mayAskForMail } from '$lib/server/mail-requests';
import * as passwordChanges from '$lib/server/password-changes';
import { Problem } from '$lib/server/problem';
import * as secondFactor from '$lib/server/second-factor';
import * as sessions from '$lib/server/sessions';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const { user, session } = signedIn(event);
  return {
    name: user.name,
    email: user.email,
    secondFactor: await secondFactor.has(user.id),
    sessions: (await sessions.list(user.id)).map((listed) => ({
      ...listed,
      isThis: listed.publicId === session.publicId
    })),
    done: event.url.searchParams.get('done')
  };
};

const present = z.string({ error: 'Type your present password.' }).min(1, 'Type your present password.');

export const actions: Actions = {
  rename: async (event) => {
    const { user } = signedIn(event);
    const read = await readForm(event.request, z.object({ name: line('What is your name?', 80) }));
    if (!read.ok) return read.refusal;
    await accounts.rename(user.id, read.data.name);
    redirect(303, '/profile?done=name');
  },
  changeAddress: async (event) => {
    const { user } = signedIn(event);
    const read = await readForm(event.request, z.object({ email: address, addressPassword: present }));
    if (!read.ok) return read.refusal;
    const wrong = await wrongPassword(user.id, read.data.addressPassword);
    if (wrong) return refuse(read.values, { addressPassword: wrong });
    if (read.data.email === user.email)
      return refuse(read.values, { email: 'This is your address already.' });
    const asked = await mayAskForMail(event.getClientAddress(), read.data.email);
    if (asked.wait) return refuse(read.values, { email: asked.wait }, 429);
    if (asked.send) await addressChanges.ask(user.id, read.data.email);
    redirect(303, '/profile?done=address-asked');
  },
  changePassword: async (event) => {
    const { user, session } = signedIn(event);
    const form = z.object({ password: present, newPassword: newPassword([user.name, user.email]) });
    const read = await readForm(event.request, form);
    if (!read.ok) return read.refusal;
    const wrong = await wrongPassword(user.id, read.data.password);
    if (wrong) return refuse(read.values, { password: wrong });
    await passwordChanges.change(user, read.data.newPassword, session.publicId);
    redirect(303, '/profile?done=password');
  },
  endSession: async (event) => {
    const { user } = signedIn(event);
    const read = await readForm(event.request, z.object({ publicId: z.string() }));
    if (!read.ok) return read.refusal;
    try {
      await sessions.endListed(user.id, read.data.publicId);
    } catch (refusal) {
      if (refusal instanceof Problem)
        return refuse(read.values, { sessions: 'That session has ended already.' }, refusal.status);
      throw refusal;
    }
    redirect(303, '/profile?done=session');
  },
  endOthers: async (event) => {
    const { user, session } = signedIn(event);
    await sessions.endAll(user.id, session.publicId);
    redirect(303, '/profile?done=others');
  },
  endAll: async (event) => {
    const { user } = signedIn(event);
    await sessions.endAll(user.id);
    sessions.clearCookie(event.cookies);
    redirect(303, '/sign-in?done=out');
  }
};

/** Why a present password is not accepted, or null. */
async function wrongPassword(userId: string, password: string): Promise<string | null> {
  try {
    await passwordChanges.confirm(userId, password);
    return null;
  } catch (refusal) {
    if (refusal instanceof Problem) return refusal.message;
    throw refusal;
  }
}
