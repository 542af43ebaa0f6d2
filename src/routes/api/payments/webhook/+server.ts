import { cardHost } from '$lib/server/card-host';
import { takeEvent } from '$lib/server/card-payments';
import { log } from '$lib/server/log';
import { Problem, problemResponse } from '$lib/server/problem';
import type { RequestHandler } from './$types';

/** Longest message that is read at all, characters. */
const MOST = 500_000;

/**
 * What the card host tells. Only what is signed with our secret, over exactly these bytes and not longer ago than five minutes, is
 * taken; the rest is answered 400 and changes nothing.
 */
export const POST: RequestHandler = async ({ request, locals }) => {
  const refuse = (detail: string) =>
    problemResponse(new Problem(400, 'not-signed', 'This message is not taken', detail), locals.requestId);
  const host = cardHost();
  if (host === null) return refuse('Cards are not taken here.');
  const body = await request.text();
  const signature = request.headers.get('stripe-signature');
  if (signature === null || body.length > MOST) return refuse('It has no signature, or is too long.');
  let event;
  try {
    event = host.stripe.webhooks.constructEvent(body, signature, host.webhookSecret);
  } catch (error) {
    log.warn({ request: locals.requestId, err: error }, 'a message for the card webhook was refused');
    return refuse('Its signature does not fit.');
  }
  return Response.json({ outcome: await takeEvent(event) });
};
