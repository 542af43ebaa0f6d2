import { dayAt } from '$lib/units/days';
import { redirect } from '@sveltejs/kit';
import * as demo from '$lib/server/demo';
import { allow } from '$lib/server/guard';
import { readListing } from '$lib/server/listing';
import * as orders from '$lib/server/orders';
import { may } from '$lib/server/permissions';
import type { Actions, PageServerLoad } from './$types';

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
    mayChange: may(scope.role, 'orders: change'),
    mayDemo: may(scope.role, 'demo: clear'),
    demoIn: await demo.isFilled(scope),
    kept: (params.get('kept') ?? '').split('|').filter(Boolean).slice(0, 20)
  };
};

export const actions: Actions = {
  fillDemo: async (event) => {
    const scope = allow(event, 'demo: clear');
    redirect(303, `/orders/${await demo.fill(scope)}`);
  },
  clearDemo: async (event) => {
    const scope = allow(event, 'demo: clear');
    const { kept } = await demo.clear(scope);
    redirect(303, `/orders${kept.length > 0 ? `?kept=${encodeURIComponent(kept.join('|'))}` : ''}`);
  }
};
