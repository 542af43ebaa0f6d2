import { z } from 'zod';
import { api, readBody } from '$lib/server/guard';
import * as lays from '$lib/server/lays';
import type { RequestEvent } from './$types';

const duplicateBody = z.object({ name: z.string().trim().min(1).max(120) });

export const POST = api('lays: change', async (scope, { params, request }: RequestEvent) => {
  const { name } = await readBody(request, duplicateBody);
  return lays.duplicate(scope, params.id, name);
});
