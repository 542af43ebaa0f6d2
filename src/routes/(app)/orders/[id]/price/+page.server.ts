import { redirect } from '@sveltejs/kit';
import { dayAt } from '$lib/units/days';
import { orRefusal, readForm, refuse, typedValues } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import { may } from '$lib/server/permissions';
import { readSheet } from '$lib/server/price-sheet';
import * as prices from '$lib/server/prices';
import { quoteWordsForm } from '$lib/server/quote-form';
import * as quotes from '$lib/server/quotes';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'prices: see');
  const price = await orErrorPage(prices.read(scope, event.params.id));
  const studio = event.locals.studio!;
  const [newest] = await quotes.list(scope, price.order.id);
  const day = dayAt(Date.now(), studio.timeZone);
  return {
    order: { id: price.order.id, number: price.order.number, clientName: price.order.clientName },
    currency: price.currency,
    defaults: price.defaults,
    version: price.version,
    sheet: price.sheet,
    cloths: price.cloths,
    terms: price.terms,
    build: price.build,
    lengthUnit: studio.lengthUnit,
    mayChange: may(scope.role, 'prices: change'),
    /** The words of the last quote, to begin the next one with. */
    words: newest ? wordsOf((await quotes.read(scope, price.order.id, newest.number)).document) : null,
    quotes: newest?.number ?? 0,
    validUntil: new Date(Date.parse(`${day}T00:00:00Z`) + price.defaults.validDays * 86_400_000)
      .toISOString()
      .slice(0, 10)
  };
};

const wordsOf = ({ fittings, dates, alterations, exclusions, terms }: quotes.Quote['document']) => ({
  fittings,
  dates,
  alterations,
  exclusions,
  terms
});

export const actions: Actions = {
  save: async (event) => {
    const scope = allow(event, 'prices: change');
    const price = await orErrorPage(prices.read(scope, event.params.id));
    const values = typedValues(await event.request.formData());
    const read = readSheet(
      values,
      price.currency,
      price.cloths.map(({ id }) => id)
    );
    if (!read.ok) return refuse({ ...values, what: 'price' }, read.errors);
    const refused = await orRefusal({ ...values, what: 'price' }, () =>
      prices.save(scope, event.params.id, read.version, read.sheet)
    );
    return refused ?? redirect(303, `/orders/${event.params.id}/price`);
  },
  quote: async (event) => {
    const scope = allow(event, 'prices: change');
    const form = await readForm(event.request, quoteWordsForm);
    if (!form.ok) {
      form.refusal.data.values.what = 'quote';
      return form.refusal;
    }
    let number = 0;
    const refused = await orRefusal({ ...form.values, what: 'quote' }, async () => {
      number = await quotes.create(scope, event.params.id, form.data);
    });
    return refused ?? redirect(303, `/orders/${event.params.id}/quotes/${number}`);
  }
};
