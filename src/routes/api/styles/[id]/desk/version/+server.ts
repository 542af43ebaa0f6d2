import { z } from 'zod';
import { api, readBody } from '$lib/server/guard';
import * as panelDrafts from '$lib/server/panel-drafts';
import type { RequestEvent } from './$types';

const body = z.object({ version: z.int().min(1), note: z.string().trim().max(500) });

export const POST = api('styles: change', async (scope, { params, request }: RequestEvent) =>
  panelDrafts.saveAsVersion(scope, params.id, await readBody(request, body))
);
