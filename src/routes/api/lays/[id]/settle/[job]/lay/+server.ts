import { z } from 'zod';
import { api, readBody } from '$lib/server/guard';
import * as settleRuns from '$lib/server/settle-runs';
import type { RequestEvent } from './$types';

const nameBody = z.object({ name: z.string().trim().min(1).max(120) });

/** Keeps the best of a run as a lay of its own. */
export const POST = api('lays: change', async (scope, { params, request }: RequestEvent) => {
  const { name } = await readBody(request, nameBody);
  return settleRuns.keepAsLay(scope, params.id, params.job, name);
});
