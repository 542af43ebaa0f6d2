import * as cloths from '$lib/server/cloths';
import { allow } from '$lib/server/guard';
import { readListing } from '$lib/server/listing';
import { may } from '$lib/server/permissions';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'cloths: see');
  const params = event.url.searchParams;
  const archived = params.get('show') === 'archived';
  return {
    cloths: await cloths.list(scope, readListing(params, cloths.clothSorts, 'name'), { archived }),
    archived,
    mayChange: may(scope.role, 'cloths: change'),
    seesPrices: may(scope.role, 'prices: see'),
    lengthUnit: event.locals.studio!.lengthUnit,
    currency: event.locals.studio!.currency
  };
};
