import { allow } from '$lib/server/guard';
import * as layList from '$lib/server/lay-list';
import { readListing } from '$lib/server/listing';
import type { PageServerLoad } from './$types';

const states = ['open', 'released', 'cut'] as const;

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'lays: see');
  const params = event.url.searchParams;
  const state = states.find((one) => one === params.get('state')) ?? 'all';
  return {
    lays: await layList.list(scope, readListing(params, layList.laySorts, '-updated'), state),
    state,
    timeZone: event.locals.studio!.timeZone
  };
};
