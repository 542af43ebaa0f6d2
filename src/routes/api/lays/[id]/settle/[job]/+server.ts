import { z } from 'zod';
import { api, readBody } from '$lib/server/guard';
import * as settleRuns from '$lib/server/settle-runs';
import type { RequestEvent } from './$types';

const answerBody = z.object({ answer: z.enum(['taken', 'left']) });

/** Says that the result was taken, or is left: it is offered no more. */
export const POST = api('lays: change', async (scope, { params, request }: RequestEvent) => {
  const { answer } = await readBody(request, answerBody);
  return settleRuns.answer(scope, params.id, params.job, answer);
});
