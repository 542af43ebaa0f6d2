import { api } from '$lib/server/guard';
import * as jobs from '$lib/server/jobs';
import type { RequestHandler } from './$types';

/** Asks a job to stop; answers with the job as it is then. */
export const POST: RequestHandler = api('studio: enter', (scope, { params }) => jobs.stop(scope, params.id!));
