import * as audit from '$lib/server/audit';
import { allow } from '$lib/server/guard';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'audit: see');
  return { entries: await audit.list(scope, 200), timeZone: event.locals.studio!.timeZone };
};
