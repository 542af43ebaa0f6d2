import { redirect } from '@sveltejs/kit';
import * as demo from '$lib/server/demo';
import * as layList from '$lib/server/lay-list';
import type { PageServerLoad } from './$types';

/** In the demo a person who has not laid anything yet begins at the order that waits to be laid. */
export const load: PageServerLoad = async ({ locals }) => {
  const { scope, person, studio } = locals;
  if (scope) {
    const first = studio?.isDemo && !(await layList.hasSaved(scope)) ? await demo.firstOrder(scope) : null;
    redirect(303, first ? `/orders/${first}` : '/orders');
  }
  if (person.user) redirect(303, '/studios');
};
