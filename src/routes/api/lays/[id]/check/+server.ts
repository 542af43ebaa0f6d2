import { z } from 'zod';
import { api, readBody } from '$lib/server/guard';
import * as lays from '$lib/server/lays';
import type { RequestEvent } from './$types';

const checkBody = z.object({ version: z.int().min(1) });

export const POST = api('lays: see', async (scope, { params, request }: RequestEvent) => {
  const { version } = await readBody(request, checkBody);
  return lays.check(scope, params.id, version);
});
