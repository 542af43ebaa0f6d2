import { z } from 'zod';
import { api, readBody } from '$lib/server/guard';
import * as layRelease from '$lib/server/lay-release';
import type { RequestEvent } from './$types';

const restoreBody = z.object({
  number: z.int().min(1),
  version: z.int().min(1),
  saveId: z.uuid()
});

export const POST = api('lays: change', async (scope, { params, request }: RequestEvent) =>
  layRelease.restore(scope, params.id, await readBody(request, restoreBody))
);
