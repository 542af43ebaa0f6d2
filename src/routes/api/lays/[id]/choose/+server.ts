import { api } from '$lib/server/guard';
import * as lays from '$lib/server/lays';
import type { RequestEvent } from './$types';

export const POST = api('lays: change', async (scope, { params }: RequestEvent) => {
  await lays.choose(scope, params.id);
  return {};
});
