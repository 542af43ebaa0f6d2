import type { RequestEvent } from '@sveltejs/kit';
import { error } from '@sveltejs/kit';
import * as cardPayments from '$lib/server/card-payments';
import * as clientLinks from '$lib/server/client-links';
import * as clientPage from '$lib/server/client-page';
import { clientCookie } from '$lib/server/client-cookie';
import { orRefusal, readForm } from '$lib/server/forms';
import { opened } from '$lib/server/link-page';
import * as orderQuestions from '$lib/server/order-questions';
import { answerForm, questionForm } from '$lib/server/quote-form';
import * as quotes from '$lib/server/quotes';
import * as rateLimits from '$lib/server/rate-limits';
import { studioScope } from '$lib/server/scope';
import type { Actions, PageServerLoad } from './$types';

type Door = Pick<RequestEvent, 'getClientAddress'> & { params: { token: string } };

const open = (event: Door) => opened(event, () => clientLinks.open(event.params.token));

/** The link, for doing something with it: counted. */
async function openToAct(event: Door): Promise<clientLinks.ClientLink> {
  const link = await open(event);
  const seconds = await rateLimits.attempt('client: link', link.id);
  if (seconds > 0) error(429, rateLimits.waitWords(seconds));
  return link;
}

export const load: PageServerLoad = async (event) => {
  event.setHeaders({ 'cache-control': 'private, no-store', 'x-robots-tag': 'noindex, nofollow' });
  const link = await open(event);
  // Back from the card host: its message may be lost or on its way, so it is asked.
  if (event.url.searchParams.has('back'))
    await cardPayments.askAbout({ studio: link.studio, order: link.order });
  return { ...(await clientPage.read(link)), back: event.url.searchParams.has('back') };
};

export const actions: Actions = {
  agree: async (event) => {
    const link = await openToAct(event);
    const form = await readForm(event.request, answerForm);
    if (!form.ok) return form.refusal;
    const { number, hash, name } = form.data;
    const refused = await orRefusal(form.values, () =>
      quotes.agree(
        studioScope(link.studio),
        link.order,
        { number, hash, name, place: event.getClientAddress() },
        link.sentTo
      )
    );
    return refused ?? { done: 'agreed' as const };
  },
  decline: async (event) => {
    const link = await openToAct(event);
    const form = await readForm(event.request, answerForm.pick({ number: true, hash: true }));
    if (!form.ok) return form.refusal;
    const refused = await orRefusal(form.values, () =>
      quotes.decline(studioScope(link.studio), link.order, {
        ...form.data,
        name: '',
        place: event.getClientAddress()
      })
    );
    return refused ?? { done: 'declined' as const };
  },
  pay: async (event) => {
    const link = await openToAct(event);
    const kind = (await event.request.formData()).get('kind') === 'deposit' ? 'deposit' : 'balance';
    let cardPage = '';
    const refused = await orRefusal({}, async () => {
      cardPage = await cardPayments.begin(studioScope(link.studio), link.order, kind, link.sentTo);
    });
    if (refused) return refused;
    clientCookie.set(event.cookies, event.params.token);
    return { cardPage };
  },
  ask: async (event) => {
    const link = await openToAct(event);
    const form = await readForm(event.request, questionForm);
    if (!form.ok) return form.refusal;
    const seconds = await rateLimits.attempt('question: link', link.id);
    if (seconds > 0) error(429, rateLimits.waitWords(seconds));
    await orderQuestions.ask(link, form.data.id, form.data.words);
    return { done: 'asked' as const };
  }
};
