import * as clients from '$lib/server/clients';
import { allow } from '$lib/server/guard';
import { readListing } from '$lib/server/listing';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'clients: see contact');
  return {
    clients: await clients.list(scope, readListing(event.url.searchParams, clients.clientSorts, 'name'))
  };
};
