import { dayAt } from '$lib/units/days';
import { allow } from '$lib/server/guard';
import { readListing } from '$lib/server/listing';
import * as orders from '$lib/server/orders';
import { may } from '$lib/server/permissions';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'orders: see');
  const params = event.url.searchParams;
  const asked = params.get('stage') ?? 'inWork';
  const stage = asked === 'all' ? 'all' : (orders.stages.find((one) => one === asked) ?? 'inWork');
  return {
    orders: await orders.list(scope, readListing(params, orders.orderSorts, 'due'), stage),
    any: await orders.any(scope),
    stage,
    stages: orders.stages,
    today: dayAt(Date.now(), event.locals.studio!.timeZone),
    mayChange: may(scope.role, 'orders: change')
  };
};
