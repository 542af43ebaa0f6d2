import { api } from '$lib/server/guard';
import { pdfAnswer } from '$lib/server/quote-document';
import * as quotes from '$lib/server/quotes';
import type { RequestEvent } from './$types';

/** A quote as a PDF. */
export const GET = api<RequestEvent>('prices: see', async (scope, { params }) =>
  pdfAnswer(await quotes.read(scope, params.id, Number(params.number)))
);
