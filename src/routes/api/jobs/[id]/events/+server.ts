import { api } from '$lib/server/guard';
import * as jobs from '$lib/server/jobs';
import { jobEvents } from '$lib/server/job-events';
import type { RequestHandler } from './$types';

/** A job's state now, then each change until it is over, as server-sent events named 'job'. */
export const GET: RequestHandler = api('studio: enter', async (scope, { params, locals, request }) => {
  const job = await jobs.read(scope, params.id!);
  return new Response(jobEvents(job, locals.person, scope, request.signal), {
    headers: { 'content-type': 'text/event-stream', 'cache-control': 'no-store', 'x-accel-buffering': 'no' }
  });
});
