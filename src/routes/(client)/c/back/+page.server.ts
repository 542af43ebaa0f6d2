import { redirect } from '@sveltejs/kit';
import { clientCookie } from '$lib/server/client-cookie';
import type { PageServerLoad } from './$types';

/** Where the card host sends the client back to; on to their page, if this browser knows it. */
export const load: PageServerLoad = ({ cookies, setHeaders }) => {
  setHeaders({ 'x-robots-tag': 'noindex, nofollow' });
  const token = clientCookie.get(cookies);
  if (token !== null) redirect(303, `/c/${token}?back`);
};
