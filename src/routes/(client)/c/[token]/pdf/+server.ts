import { error } from '@sveltejs/kit';
import * as clientLinks from '$lib/server/client-links';
import { opened } from '$lib/server/link-page';
import { pdfAnswer } from '$lib/server/quote-document';
import * as quotes from '$lib/server/quotes';
import { studioScope } from '$lib/server/scope';
import type { RequestHandler } from './$types';

/** The paper of the quote that the client's page shows: the one that waits for an answer, else the agreed one. */
export const GET: RequestHandler = async (event) => {
  const link = await opened(event, () => clientLinks.open(event.params.token));
  const { offered, agreed } = await quotes.forClient(studioScope(link.studio), link.order);
  const quote = [offered, agreed].find((one) => one?.number === Number(event.url.searchParams.get('quote')));
  if (!quote) error(404, 'There is no such quote for you.');
  return pdfAnswer(quote);
};
