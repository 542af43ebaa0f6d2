import { api } from '$lib/server/guard';
import * as layRelease from '$lib/server/lay-release';
import type { RequestEvent } from './$types';

export const POST = api('lays: release', (scope, { params }: RequestEvent) =>
  layRelease.reopen(scope, params.id)
);
