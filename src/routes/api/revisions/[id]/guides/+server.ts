import { guideChoiceSchema } from '$lib/guide/guide-choice';
import { api, readBody } from '$lib/server/guard';
import * as guides from '$lib/server/guides';
import type { RequestHandler } from './$types';

/** Asks for a cutting guide of a revision: answers the job that makes it. */
export const POST: RequestHandler = api('guides: print', async (scope, { params, request }) =>
  guides.create(scope, params.id!, await readBody(request, guideChoiceSchema))
);
