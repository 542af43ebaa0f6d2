import { error, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { dayAt } from '$lib/units/days';
import { parseMoney } from '$lib/units/money';
import * as cardPayments from '$lib/server/card-payments';
import * as clientLinks from '$lib/server/client-links';
import * as depositRule from '$lib/server/deposit-rule';
import { line, orRefusal, readForm, refuse, typedValues } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import * as orderQuestions from '$lib/server/order-questions';
import * as orders from '$lib/server/orders';
import * as payments from '$lib/server/payments';
import { may } from '$lib/server/permissions';
import { byHandForm, refundForm, sendForm } from '$lib/server/quote-form';
import * as quotes from '$lib/server/quotes';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'prices: see');
  const { id } = event.params;
  const order = await orErrorPage(orders.read(scope, id));
  const { timeZone } = event.locals.studio!;
  return {
    order: { id, number: order.number, clientName: order.clientName },
    account: await payments.account(scope, id),
    waiver: await depositRule.waiver(scope, id),
    quotes: await quotes.list(scope, id),
    links: await clientLinks.list(scope, id),
    questions: await orderQuestions.list(scope, id),
    address: (await clientLinks.lastAddress(scope, id)) ?? '',
    /** Names for the two forms, so that what is sent twice counts once. */
    once: { pay: payments.newPaymentId(), refund: payments.newPaymentId() },
    today: dayAt(Date.now(), timeZone),
    now: Date.now(),
    timeZone,
    mayManage: may(scope.role, 'payments: manage'),
    mayChange: may(scope.role, 'prices: change')
  };
};

const back = (id: string): never => redirect(303, `/orders/${id}/payments`);

export const actions: Actions = {
  waive: async (event) => {
    const scope = allow(event, 'payments: manage');
    const { id } = event.params;
    await orErrorPage(orders.read(scope, id));
    const form = await readForm(
      event.request,
      z.object({ waiverNote: line('Why may it be cut without the deposit?', 300) })
    );
    if (!form.ok) {
      form.refusal.data.values.what = 'waive';
      return form.refusal;
    }
    await depositRule.waive(scope, id, form.data.waiverNote);
    return back(id);
  },
  record: async (event) => {
    const scope = allow(event, 'payments: manage');
    const { id } = event.params;
    const { currency } = await orErrorPage(payments.account(scope, id));
    const form = await readForm(event.request, byHandForm);
    if (!form.ok) {
      form.refusal.data.values.what = 'record';
      return form.refusal;
    }
    const values = { ...form.values, what: 'record' };
    const read = parseMoney(form.data.amount, currency);
    if (read.error !== undefined) return refuse(values, { amount: read.error });
    const refused = await orRefusal(values, () =>
      payments.recordByHand(scope, id, { ...form.data, amount: read.minor })
    );
    if (refused) return refused;
    await cardPayments.endWaiting(scope, id);
    return back(id);
  },
  refund: async (event) => {
    const scope = allow(event, 'payments: manage');
    const { id } = event.params;
    const { currency } = await orErrorPage(payments.account(scope, id));
    const form = await readForm(event.request, refundForm);
    if (!form.ok) {
      form.refusal.data.values.what = 'refund';
      return form.refusal;
    }
    const values = { ...form.values, what: 'refund' };
    const read = parseMoney(form.data.amount, currency);
    if (read.error !== undefined) return refuse(values, { amount: read.error });
    const { method, ...rest } = form.data;
    const wanted = { ...rest, amount: read.minor };
    const refused = await orRefusal(values, () =>
      method === 'card'
        ? cardPayments.refund(scope, id, wanted)
        : payments.refundByHand(scope, id, { ...wanted, method })
    );
    return refused ?? back(id);
  },
  sendLink: async (event) => {
    const scope = allow(event, 'prices: change');
    const { id } = event.params;
    await orErrorPage(orders.read(scope, id));
    const form = await readForm(event.request, sendForm);
    if (!form.ok) {
      form.refusal.data.values.what = 'link';
      return form.refusal;
    }
    await quotes.sendLink(scope, id, form.data.to);
    return back(id);
  },
  revoke: async (event) => {
    const scope = allow(event, 'prices: change');
    const { id } = event.params;
    const values = typedValues(await event.request.formData());
    await orErrorPage(clientLinks.revoke(scope, id, values.link ?? ''));
    return back(id);
  },
  answered: async (event) => {
    const scope = allow(event, 'prices: change');
    const { id } = event.params;
    const values = typedValues(await event.request.formData());
    if (!values.question) error(400, 'Which question?');
    await orErrorPage(orderQuestions.markAnswered(scope, id, values.question));
    return back(id);
  }
};
