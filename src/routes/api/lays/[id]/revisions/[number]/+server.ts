import { api } from '$lib/server/guard';
import * as layRevisions from '$lib/server/lay-revisions';
import { notFound } from '$lib/server/problem';
import type { RequestEvent } from './$types';

export const GET = api('lays: see', (scope, { params }: RequestEvent) => {
  if (!/^[1-9]\d{0,8}$/.test(params.number)) throw notFound('revision');
  return layRevisions.read(scope, params.id, Number(params.number));
});
