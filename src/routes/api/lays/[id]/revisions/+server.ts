import { api, readBody } from '$lib/server/guard';
import * as layRelease from '$lib/server/lay-release';
import * as layRevisions from '$lib/server/lay-revisions';
import type { RequestEvent } from './$types';

export const GET = api('lays: see', (scope, { params }: RequestEvent) => layRevisions.list(scope, params.id));

export const POST = api('lays: change', async (scope, { params, request }: RequestEvent) =>
  layRelease.keep(scope, params.id, await readBody(request, layRelease.namingSchema))
);
