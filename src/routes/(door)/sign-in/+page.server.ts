import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { address, readForm, refuse } from '$lib/server/forms';
import { Problem } from '$lib/server/problem';
import { returnPath } from '$lib/server/return-path';
import { signIn } from '$lib/server/sign-in';
import { admit } from '$lib/server/sign-in-waits';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals, url }) => {
  const next = returnPath(url.searchParams.get('next'));
  if (locals.person.user) redirect(303, next);
  return { next, done: url.searchParams.get('done') };
};

const form = z.object({
  email: address,
  password: z.string().min(1, 'Type your password.').max(1000, 'This is longer than any password here.'),
  next: z.string().max(2000).optional()
});

export const actions: Actions = {
  default: async ({ request, cookies, getClientAddress }) => {
    const read = await readForm(request, form);
    if (!read.ok) return read.refusal;
    const { email, password, next } = read.data;
    let onward: string;
    try {
      const account = await signIn(email, password, getClientAddress());
      onward = await admit(cookies, account.id, request.headers.get('user-agent') ?? '', returnPath(next));
    } catch (refusal) {
      if (refusal instanceof Problem) return refuse(read.values, { '': refusal.message }, refusal.status);
      throw refusal;
    }
    redirect(303, onward);
  }
};
