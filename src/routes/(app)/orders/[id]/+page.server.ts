import { error, redirect, type ActionFailure } from '@sveltejs/kit';
import { dayAt } from '$lib/units/days';
import * as cloths from '$lib/server/cloths';
import * as draftRuns from '$lib/server/draft-runs';
import { readForm, refuse, typedValues, type Refused } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import * as layList from '$lib/server/lay-list';
import * as lays from '$lib/server/lays';
import { lineForm, orderForm } from '$lib/server/order-form';
import { moneyOf } from '$lib/server/money-card';
import * as orders from '$lib/server/orders';
import { may } from '$lib/server/permissions';
import { Problem } from '$lib/server/problem';
import type { Scope } from '$lib/server/scope';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'orders: see');
  const order = await orErrorPage(orders.read(scope, event.params.id));
  const own = await layList.ofOrder(scope, order.id);
  const taken = new Set(order.cloths.map((cloth) => cloth.id));
  const touched = new Set((event.url.searchParams.get('touched') ?? '').split(','));
  const mayChange = may(scope.role, 'orders: change');
  const studio = event.locals.studio!;
  return {
    order,
    lays: own,
    strayLays: own.filter((lay) => !taken.has(lay.cloth.id)),
    touched: own.filter((lay) => touched.has(lay.id)),
    styles: mayChange ? await orders.styleChoices(scope) : [],
    cloths: mayChange ? await cloths.choices(scope) : [],
    stages: orders.stages,
    money: may(scope.role, 'prices: see') ? await moneyOf(scope, order.id) : null,
    drafted: await draftedOf(scope, may(scope.role, 'measurements: see') ? order.items : []),
    mayChange,
    mayLay: may(scope.role, 'lays: change'),
    lengthUnit: studio.lengthUnit,
    timeZone: studio.timeZone,
    today: dayAt(Date.now(), studio.timeZone)
  };
};

/** What each line's panels were drafted from, by style version; versions that were not drafted are absent. */
async function draftedOf(
  scope: Scope,
  items: readonly { readonly style: { readonly versionId: string } }[]
): Promise<Record<string, draftRuns.DraftedFrom>> {
  const found: Record<string, draftRuns.DraftedFrom> = {};
  for (const { style } of items) {
    const from = await draftRuns.behindVersion(scope, style.versionId);
    if (from) found[style.versionId] = from;
  }
  return found;
}

/** Runs a change; what is refused at fields, or because the order changed meanwhile, goes back into the form. */
async function orRefusal(
  values: Record<string, string>,
  change: () => Promise<unknown>
): Promise<ActionFailure<Refused> | null> {
  try {
    await change();
    return null;
  } catch (refusal) {
    if (!(refusal instanceof Problem)) throw refusal;
    if (refusal.status === 404) error(404, refusal.message);
    const fields = refusal.extra.fields as Record<string, string> | undefined;
    return refuse(values, fields ?? { '': `${refusal.title}. ${refusal.detail}` }, refusal.status);
  }
}

/** Back to the order, naming the lays that a change touched. */
function back(id: string, touched: readonly { id: string }[]): never {
  redirect(
    303,
    `/orders/${id}${touched.length > 0 ? `?touched=${touched.map((lay) => lay.id).join(',')}` : ''}`
  );
}

export const actions: Actions = {
  save: async (event) => {
    const scope = allow(event, 'orders: change');
    const form = await readForm(event.request, orderForm);
    if (!form.ok) return form.refusal;
    const { version, order } = form.data;
    const refused = await orRefusal(form.values, () => orders.update(scope, event.params.id, version, order));
    return refused ?? back(event.params.id, []);
  },
  addLine: async (event) => {
    const scope = allow(event, 'orders: change');
    const form = await readForm(event.request, lineForm);
    if (!form.ok) return form.refusal;
    const { version, item } = form.data;
    const refused = await orRefusal(form.values, () => orders.addItem(scope, event.params.id, version, item));
    return refused ?? back(event.params.id, []);
  },
  saveLine: async (event) => {
    const scope = allow(event, 'orders: change');
    const form = await readForm(event.request, lineForm);
    if (!form.ok) return form.refusal;
    const { version, item } = form.data;
    const itemId = form.values.what ?? '';
    const touched = await layList.ofItem(scope, itemId);
    const refused = await orRefusal(form.values, async () => {
      await orders.updateItem(scope, event.params.id, version, itemId, item);
      await lays.recount(scope, event.params.id);
    });
    return refused ?? back(event.params.id, touched);
  },
  removeLine: async (event) => {
    const scope = allow(event, 'orders: change');
    const values = typedValues(await event.request.formData());
    const itemId = values.what ?? '';
    const touched = await layList.ofItem(scope, itemId);
    const refused = await orRefusal(values, async () => {
      await orders.removeItem(scope, event.params.id, Number(values.version), itemId);
      await lays.recount(scope, event.params.id);
    });
    return refused ?? back(event.params.id, touched);
  },
  newLay: async (event) => {
    const scope = allow(event, 'lays: change');
    const values = typedValues(await event.request.formData());
    const { id } = await orErrorPage(
      lays.create(scope, { orderId: event.params.id, clothId: values.cloth ?? '' })
    );
    redirect(303, `/lays/${id}`);
  },
  choose: async (event) => {
    const scope = allow(event, 'lays: change');
    await orErrorPage(orders.read(scope, event.params.id));
    const values = typedValues(await event.request.formData());
    await orErrorPage(lays.choose(scope, values.lay ?? ''));
    back(event.params.id, []);
  }
};
