import { redirect } from '@sveltejs/kit';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals }) => {
  if (locals.scope) redirect(303, '/orders');
  if (locals.person.user) redirect(303, '/studios');
};
