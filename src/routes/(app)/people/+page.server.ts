import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { address, readForm, refuse, typedValues } from '$lib/server/forms';
import { allow } from '$lib/server/guard';
import * as invitations from '$lib/server/invitations';
import * as people from '$lib/server/people';
import { roles } from '$lib/server/permissions';
import { Problem } from '$lib/server/problem';
import * as rateLimits from '$lib/server/rate-limits';
import * as studios from '$lib/server/studios';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'people: manage');
  const [members, invited] = await Promise.all([people.list(scope), invitations.list(scope)]);
  const now = Date.now();
  return {
    members,
    invited: invited.map((invitation) => ({ ...invitation, expired: invitation.expiresAt <= now })),
    ownId: scope.user,
    secondFactorRequired: event.locals.studio!.secondFactorRequired,
    done: event.url.searchParams.get('done')
  };
};

const role = z.enum(roles, { error: 'Choose a role.' });
const invitation = z.object({ email: address, role });
const roleChange = z.object({ userId: z.string(), role });
const member = z.object({ userId: z.string() });
const required = z.object({ required: z.enum(['yes', 'no'], { error: 'Say whether.' }) });
const listed = z.object({ id: z.string() });

export const actions: Actions = {
  invite: async (event) => {
    const scope = allow(event, 'people: manage');
    const read = await readForm(event.request, invitation);
    if (!read.ok) return read.refusal;
    const seconds = await rateLimits.attempt('mail: studio', scope.studio);
    if (seconds > 0) return refuse(read.values, { email: rateLimits.waitWords(seconds) }, 429);
    return settle(read.values, 'email', 'invited', () => invitations.create(scope, read.data));
  },
  takeBack: async (event) => {
    const scope = allow(event, 'people: manage');
    const read = await readForm(event.request, listed);
    if (!read.ok) return read.refusal;
    return settle(read.values, read.data.id, 'taken-back', () => invitations.revoke(scope, read.data.id));
  },
  changeRole: async (event) => {
    const scope = allow(event, 'people: manage');
    const read = await readForm(event.request, roleChange);
    if (!read.ok) return read.refusal;
    const { userId, role } = read.data;
    return settle(read.values, userId, 'role', () => people.changeRole(scope, userId, role));
  },
  disable: async (event) => {
    const scope = allow(event, 'people: manage');
    const read = await readForm(event.request, member);
    if (!read.ok) return read.refusal;
    return settle(read.values, read.data.userId, 'disabled', () => people.disable(scope, read.data.userId));
  },
  requireSecondFactor: async (event) => {
    const scope = allow(event, 'people: manage');
    const read = await readForm(event.request, required);
    if (!read.ok) return read.refusal;
    const yes = read.data.required === 'yes';
    return settle(read.values, 'required', yes ? 'required' : 'left-free', () =>
      studios.requireSecondFactor(scope, yes)
    );
  },
  enable: async (event) => {
    const scope = allow(event, 'people: manage');
    const read = await readForm(event.request, member);
    if (!read.ok) return read.refusal;
    return settle(read.values, read.data.userId, 'enabled', () => people.enable(scope, read.data.userId));
  }
};

/** Does the deed and comes back to the list; a refusal goes to the `field` that it belongs to. */
async function settle(
  values: ReturnType<typeof typedValues>,
  field: string,
  done: string,
  deed: () => Promise<unknown>
) {
  try {
    await deed();
  } catch (refusal) {
    if (refusal instanceof Problem) return refuse(values, { [field]: refusal.message }, refusal.status);
    throw refusal;
  }
  redirect(303, `/people?done=${done}`);
}
