import { redirect } from '@sveltejs/kit';
import { quoteLines, quoteParts, taxWords } from '$lib/guide/quote-paper';
import * as clientLinks from '$lib/server/client-links';
import { orRefusal, readForm } from '$lib/server/forms';
import { allow, orErrorPage } from '$lib/server/guard';
import { may } from '$lib/server/permissions';
import * as prices from '$lib/server/prices';
import { sendForm } from '$lib/server/quote-form';
import * as quotes from '$lib/server/quotes';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const scope = allow(event, 'prices: see');
  const { id, number } = event.params;
  const quote = await orErrorPage(quotes.read(scope, id, Number(number)));
  const price = await prices.read(scope, id);
  const [newest] = await quotes.list(scope, id);
  const { document } = quote;
  return {
    quote: { ...quote, document: undefined },
    head: {
      order: document.order,
      client: document.client,
      day: document.day,
      making: document.making,
      garments: document.garments,
      net: document.net,
      tax: document.tax
    },
    lines: quoteLines(document),
    parts: quoteParts(document),
    taxWords: taxWords(document),
    newest: newest!.number,
    /** What the order would cost now, where that differs. */
    priceNow: price.build.total === quote.total ? null : price.build.total,
    timeZone: event.locals.studio!.timeZone,
    address: quote.sentTo ?? (await clientLinks.lastAddress(scope, id)) ?? '',
    mayChange: may(scope.role, 'prices: change')
  };
};

export const actions: Actions = {
  send: async (event) => {
    const scope = allow(event, 'prices: change');
    const { id, number } = event.params;
    await orErrorPage(quotes.read(scope, id, Number(number)));
    const form = await readForm(event.request, sendForm);
    if (!form.ok) return form.refusal;
    const refused = await orRefusal(form.values, () => quotes.send(scope, id, Number(number), form.data.to));
    return refused ?? redirect(303, `/orders/${id}/quotes/${number}?sent`);
  },
  withdraw: async (event) => {
    const scope = allow(event, 'prices: change');
    const { id, number } = event.params;
    const refused = await orRefusal({}, () => quotes.withdraw(scope, id, Number(number)));
    return refused ?? redirect(303, `/orders/${id}/quotes/${number}`);
  }
};
