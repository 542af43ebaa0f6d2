import { z } from 'zod';
import { api, readBody } from '$lib/server/guard';
import * as settleRuns from '$lib/server/settle-runs';
import { settleChoiceSchema } from '$lib/settle/run';
import type { RequestEvent } from './$types';

const settleBody = settleChoiceSchema.extend({ version: z.int().min(1) });

/** The lay's settle run that goes on or is still on offer, with the lay it began with; `run` is null when there is none. */
export const GET = api('lays: change', async (scope, { params }: RequestEvent) => ({
  run: await settleRuns.read(scope, params.id)
}));

/** Begins a settle run; answers its job, whose progress comes from the routes of jobs. */
export const POST = api('lays: change', async (scope, { params, request }: RequestEvent) =>
  settleRuns.create(scope, params.id, await readBody(request, settleBody))
);
