import { z } from 'zod';
import { api, readBody } from '$lib/server/guard';
import * as lays from '$lib/server/lays';
import type { RequestEvent } from './$types';

const saveBody = z.object({
  version: z.int().min(1),
  saveId: z.uuid(),
  // Through the door of lay documents, which says what is wrong with it.
  document: z.unknown()
});

export const GET = api('lays: see', (scope, { params }: RequestEvent) => lays.read(scope, params.id));

export const PUT = api('lays: change', async (scope, { params, request }: RequestEvent) =>
  lays.save(scope, params.id, await readBody(request, saveBody))
);
