import { z } from 'zod';
import { api, readBody } from '$lib/server/guard';
import * as lays from '$lib/server/lays';
import type { RequestEvent } from './$types';

const newLayBody = z.object({
  clothId: z.string().min(1).max(64),
  name: z.string().trim().max(120).optional()
});

export const POST = api('lays: change', async (scope, { params, request }: RequestEvent) =>
  lays.create(scope, { orderId: params.id, ...(await readBody(request, newLayBody)) })
);
