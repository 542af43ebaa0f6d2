import { z } from 'zod';
import { api, readBody } from '$lib/server/guard';
import * as panelDrafts from '$lib/server/panel-drafts';
import type { RequestEvent } from './$types';

const saveBody = z.object({
  version: z.int().min(0),
  saveId: z.uuid(),
  // Through the door of working copies, which says what is wrong with it.
  document: z.unknown()
});
const leaveBody = z.object({ version: z.int().min(1) });

export const GET = api('styles: change', (scope, { params }: RequestEvent) =>
  panelDrafts.read(scope, params.id)
);

export const PUT = api('styles: change', async (scope, { params, request }: RequestEvent) =>
  panelDrafts.save(scope, params.id, await readBody(request, saveBody))
);

export const DELETE = api('styles: change', async (scope, { params, request }: RequestEvent) =>
  panelDrafts.leave(scope, params.id, (await readBody(request, leaveBody)).version)
);
