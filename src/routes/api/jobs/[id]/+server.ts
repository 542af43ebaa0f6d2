import { api } from '$lib/server/guard';
import * as jobs from '$lib/server/jobs';
import type { RequestHandler } from './$types';

/** How a job is doing. 'studio: enter' is asked here; the job's own kind says who may see it. */
export const GET: RequestHandler = api('studio: enter', (scope, { params }) => jobs.read(scope, params.id!));
