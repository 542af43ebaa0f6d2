import * as cutting from '$lib/server/cutting';
import { allow } from '$lib/server/guard';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'lays: cut');
  return { queue: await cutting.queue(scope) };
};
