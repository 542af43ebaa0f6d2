import { redirect } from '@sveltejs/kit';
import { readForm, refuse } from '$lib/server/forms';
import { allow } from '$lib/server/guard';
import { newOrderForm } from '$lib/server/order-form';
import * as orders from '$lib/server/orders';
import { Problem } from '$lib/server/problem';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'orders: change');
  return { styles: await orders.styleChoices(scope), stages: orders.stages };
};

export const actions: Actions = {
  default: async (event) => {
    const scope = allow(event, 'orders: change');
    const form = await readForm(event.request, newOrderForm);
    if (!form.ok) return form.refusal;
    let id: string;
    try {
      id = await orders.create(scope, form.data.order, form.data.lines);
    } catch (refusal) {
      if (refusal instanceof Problem && refusal.status === 400)
        return refuse(form.values, refusal.extra.fields as Record<string, string>);
      throw refusal;
    }
    redirect(303, `/orders/${id}`);
  }
};
