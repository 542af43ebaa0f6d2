import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { readForm, refuse } from '$lib/server/forms';
import { Problem } from '$lib/server/problem';
import { returnPath } from '$lib/server/return-path';
import * as secondFactor from '$lib/server/second-factor';
import { finish, waiting } from '$lib/server/sign-in-waits';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ cookies, locals, url }) => {
  const next = returnPath(url.searchParams.get('next'));
  if (locals.person.user) redirect(303, next);
  if (!(await waiting(cookies))) redirect(303, '/sign-in?done=late');
  return { next };
};

const form = z.object({
  code: z
    .string()
    .trim()
    .min(1, 'Type the code of your device, or a recovery code.')
    .max(60, 'No code is as long.'),
  next: z.string().max(2000).optional()
});

export const actions: Actions = {
  default: async ({ request, cookies }) => {
    const read = await readForm(request, form);
    if (!read.ok) return read.refusal;
    const account = await waiting(cookies);
    if (!account) redirect(303, '/sign-in?done=late');
    let way: 'device' | 'recovery';
    try {
      way = await secondFactor.take(account, read.data.code);
    } catch (refusal) {
      if (refusal instanceof Problem) return refuse(read.values, { code: refusal.message }, refusal.status);
      throw refusal;
    }
    await finish(cookies, account.id, request.headers.get('user-agent') ?? '');
    // Whoever needed a recovery code needs new ones, or another device.
    redirect(303, way === 'recovery' ? '/profile/second-factor' : returnPath(read.data.next));
  }
};
