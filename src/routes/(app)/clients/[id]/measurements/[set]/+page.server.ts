import { error } from '@sveltejs/kit';
import * as clients from '$lib/server/clients';
import { allow, orErrorPage } from '$lib/server/guard';
import * as sets from '$lib/server/measurement-sets';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'measurements: see');
  const client = await orErrorPage(clients.read(scope, event.params.id));
  const against = event.url.searchParams.get('against');
  const [set, other, all] = await Promise.all([
    orErrorPage(sets.read(scope, event.params.set)),
    against ? orErrorPage(sets.read(scope, against)) : null,
    sets.list(scope, client.id)
  ]);
  // A set of another client has no place below this one.
  if (set.clientId !== client.id || (other && other.clientId !== client.id))
    error(404, 'There is no such set here.');
  return {
    client: { id: client.id, name: client.name },
    set,
    other,
    all,
    unit: event.locals.studio!.lengthUnit
  };
};
