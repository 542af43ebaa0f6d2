import { api, readBody } from '$lib/server/guard';
import * as layRelease from '$lib/server/lay-release';
import type { RequestEvent } from './$types';

export const POST = api('lays: release', async (scope, { params, request }: RequestEvent) => ({
  revision: await layRelease.release(scope, params.id, await readBody(request, layRelease.namingSchema))
}));
