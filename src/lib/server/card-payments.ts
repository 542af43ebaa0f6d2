import type Stripe from 'stripe';
import type { Minor } from '$lib/units/measure';
import { cardAmount, cardHost, type CardHost } from './card-host';
import { config } from './config';
import { database } from './database';
import { newId } from './ids';
import { log } from './log';
import { account, beginRefund, settle, type PaymentRow } from './payments';
import { Problem } from './problem';
import { aboutOf } from './quotes';
import type { Scope } from './scope';

/*
 * Payments by card. A payment is written here before the card host hears of it, and its id is the idempotency key there: a request
 * that is repeated, or a server that dies in between, makes no second one. What the card host tells (webhook, or when asked)
 * goes through one door that compares names, amount and currency, and never takes a settled payment back.
 */

/** How long an idempotency key holds at the card host; older rows without a session are given up. */
const KEY_LIFE = 23 * 3_600_000;
const MINUTE = 60_000;

/** Whether the client may be offered to pay this by card. */
export function takesCards(amount: Minor, currency: string): boolean {
  return cardHost() !== null && cardAmount(amount, currency) !== null;
}

function needHost(): CardHost {
  const host = cardHost();
  if (host === null)
    throw new Problem(409, 'no-cards', 'Cards are not taken here', 'Pay in cash or by bank transfer.');
  return host;
}

/**
 * Begins (or takes up again) the card payment of what is open: the rest of the deposit, or everything. Gives the address of the
 * card host's page. One payment of an order is under way at a time: others that wait are ended.
 */
export async function begin(
  scope: Scope,
  orderId: string,
  kind: 'deposit' | 'balance',
  client: string,
  now = Date.now()
): Promise<string> {
  const host = needHost();
  const { row, others } = await database().transaction(async (trx) => {
    const { quote, depositMissing, owed, currency } = await account(scope, orderId, trx);
    const amount = kind === 'deposit' ? depositMissing : owed;
    if (!quote || amount <= 0)
      throw new Problem(409, 'nothing-open', 'Nothing is open here', 'Look at your page again.');
    if (cardAmount(amount, currency) === null)
      throw new Problem(
        409,
        'no-cards',
        'This sum can’t be paid by card',
        'Pay in cash or by bank transfer.'
      );
    const waiting = await trx('payments')
      .where({ studio_id: scope.studio, order_id: orderId, method: 'card', state: 'waiting' })
      .whereNot({ kind: 'refund' })
      .select<PaymentRow[]>();
    const same = waiting.find(
      (one) =>
        one.kind === kind &&
        one.amount === amount &&
        one.currency === currency &&
        (one.provider_session !== null || one.created_at > now - KEY_LIFE)
    );
    if (same) return { row: same, others: waiting.filter((one) => one !== same) };
    const id = newId(now);
    await trx('payments').insert({
      id,
      studio_id: scope.studio,
      order_id: orderId,
      quote_id: quote.id,
      kind,
      method: 'card',
      state: 'waiting',
      amount,
      currency,
      receipt_to: client,
      created_by: 'client',
      created_at: now
    });
    const row = await trx('payments').where({ id }).first<PaymentRow>();
    return { row, others: waiting };
  });
  for (const other of others) await endSession(host, other, now);

  if (row.provider_session !== null) {
    const session = await asked(host.stripe.checkout.sessions.retrieve(row.provider_session));
    if (session.status === 'open' && session.url) return session.url;
    await database().transaction((trx) => applySession(trx, session, now));
    if (session.status === 'expired') return begin(scope, orderId, kind, client, now);
    throw new Problem(409, 'nothing-open', 'This is paid already', 'Look at your page again.');
  }
  const about = await aboutOf(scope, orderId);
  const session = await asked(
    host.stripe.checkout.sessions.create(
      {
        mode: 'payment',
        client_reference_id: row.id,
        metadata: { payment: row.id },
        payment_intent_data: { metadata: { payment: row.id } },
        customer_email: client,
        line_items: [
          {
            quantity: 1,
            price_data: {
              currency: row.currency.toLowerCase(),
              unit_amount: cardAmount(row.amount, row.currency)!,
              product_data: {
                name: `${kind === 'deposit' ? 'Deposit' : 'Balance'}, order ${about.order}, ${about.studio}`
              }
            }
          }
        ],
        // No token of the client's page ever goes to the card host.
        success_url: `${config.origin}/c/back`,
        cancel_url: `${config.origin}/c/back`
      },
      { idempotencyKey: row.id }
    )
  );
  await database()('payments').where({ id: row.id }).update({ provider_session: session.id });
  if (!session.url)
    throw new Problem(502, 'card-host', 'The card page did not open', 'Try again in a moment.');
  return session.url;
}

/** Ends what is under way at the card host, so that money that came another way is not paid again. Best effort. */
export async function endWaiting(scope: Scope, orderId: string, now = Date.now()): Promise<void> {
  const host = cardHost();
  if (host === null) return;
  const waiting = await database()('payments')
    .where({ studio_id: scope.studio, order_id: orderId, method: 'card', state: 'waiting' })
    .whereNot({ kind: 'refund' })
    .select<PaymentRow[]>();
  for (const row of waiting) await endSession(host, row, now);
}

async function endSession(host: CardHost, row: PaymentRow, now: number): Promise<void> {
  try {
    if (row.provider_session === null) return;
    const session = await host.stripe.checkout.sessions
      .expire(row.provider_session)
      .catch(() => host.stripe.checkout.sessions.retrieve(row.provider_session!));
    await database().transaction((trx) => applySession(trx, session, now));
  } catch (error) {
    log.warn({ payment: row.id, err: error }, 'a card payment could not be ended');
  }
}

/** The card host's answer; when it gives none, words that a client understands. */
async function asked<T>(work: Promise<T>): Promise<T> {
  try {
    return await work;
  } catch (error) {
    log.error({ err: error }, 'card host');
    throw new Problem(
      502,
      'card-host',
      'The card page can’t be reached',
      'Nothing was paid. Try again in a moment, or pay another way.'
    );
  }
}

/**
 * Gives money of a card payment back by card. The refund is written first; if the card host can't be reached it waits, and is
 * asked for again under the same key.
 */
export async function refund(
  scope: Scope,
  orderId: string,
  wanted: { id: string; of: string; amount: Minor },
  now = Date.now()
): Promise<void> {
  const host = needHost();
  const row = await database().transaction((trx) => beginRefund(trx, scope, orderId, wanted, 'card', now));
  if (row) await askRefund(host, row, now);
}

async function askRefund(host: CardHost, row: PaymentRow, now: number): Promise<void> {
  const paid = await database()('payments')
    .where({ studio_id: row.studio_id, id: row.refund_of })
    .first<PaymentRow>();
  try {
    const refund =
      row.provider_payment !== null
        ? await host.stripe.refunds.retrieve(row.provider_payment)
        : await host.stripe.refunds.create(
            {
              payment_intent: paid.provider_payment!,
              amount: cardAmount(row.amount, row.currency)!,
              metadata: { payment: row.id }
            },
            { idempotencyKey: row.id }
          );
    await database().transaction((trx) => applyRefund(trx, refund, now));
  } catch (error) {
    const { type, message } = error as { type?: string; message?: string };
    if (type === 'StripeInvalidRequestError')
      await database()('payments')
        .where({ id: row.id, state: 'waiting' })
        .update({ state: 'failed', error: message ?? 'Refused by the card host' });
    log.warn({ payment: row.id, err: error }, 'refund');
  }
}

/** What came of a message of the card host; kept with the event. */
export type Outcome =
  | 'settled'
  | 'known already'
  | 'closed'
  | 'not paid yet'
  | 'amount differs'
  | 'unknown payment'
  | 'not for us';

type Trx = Parameters<typeof settle>[0];

/**
 * Takes a verified event, once: its id is written in the same transaction as what it does. A repeat is answered 'known already'.
 */
export async function takeEvent(event: Stripe.Event, now = Date.now()): Promise<Outcome> {
  return database().transaction(async (trx) => {
    const added: { id: string }[] = await trx('payment_events')
      .insert({ id: event.id, type: event.type, outcome: 'begun', received_at: now })
      .onConflict('id')
      .ignore()
      .returning('id');
    if (added.length === 0) return 'known already';
    const { outcome, payment } = await applyEvent(trx, event, now);
    await trx('payment_events').where({ id: event.id }).update({ outcome, payment_id: payment });
    if (outcome === 'amount differs' || outcome === 'unknown payment')
      log.error({ event: event.id, type: event.type, outcome }, 'a message of the card host does not fit');
    return outcome;
  });
}

async function applyEvent(
  trx: Trx,
  event: Stripe.Event,
  now: number
): Promise<{ outcome: Outcome; payment: string | null }> {
  switch (event.type) {
    case 'checkout.session.completed':
    case 'checkout.session.async_payment_succeeded':
    case 'checkout.session.async_payment_failed':
    case 'checkout.session.expired':
      return applySession(trx, event.data.object, now, event.type);
    case 'refund.created':
    case 'refund.updated':
    case 'refund.failed':
      return applyRefund(trx, event.data.object, now);
    default:
      return { outcome: 'not for us', payment: null };
  }
}

/** What a checkout session says, whether told or asked. Messages may come in any order: settled stays settled. */
async function applySession(
  trx: Trx,
  session: Stripe.Checkout.Session,
  now: number,
  told?: string
): Promise<{ outcome: Outcome; payment: string | null }> {
  const row =
    (await trx('payments').where({ provider_session: session.id }).first<PaymentRow | undefined>()) ??
    // The server may have died before it could note the session.
    (await trx('payments')
      .where({ id: session.client_reference_id ?? '', method: 'card' })
      .whereNull('provider_session')
      .first<PaymentRow | undefined>());
  if (!row) return { outcome: 'unknown payment', payment: null };
  const answer = (outcome: Outcome) => ({ outcome, payment: row.id });
  if (row.state === 'settled') return answer('known already');
  if (session.payment_status === 'paid') {
    if (
      session.amount_total !== cardAmount(row.amount, row.currency) ||
      session.currency?.toUpperCase() !== row.currency
    )
      return answer('amount differs');
    const intent = session.payment_intent;
    await trx('payments').where({ id: row.id }).update({ provider_session: session.id });
    await settle(
      trx,
      row,
      { providerPayment: typeof intent === 'string' ? intent : (intent?.id ?? null), by: null },
      now
    );
    return answer('settled');
  }
  const failed = told === 'checkout.session.async_payment_failed';
  if (session.status === 'expired' || failed) {
    await trx('payments')
      .where({ id: row.id, state: 'waiting' })
      .update({ state: failed ? 'failed' : 'expired', provider_session: session.id });
    return answer('closed');
  }
  return answer('not paid yet');
}

/** What a refund says. One that was made on the card host's own pages is written down here too. */
async function applyRefund(
  trx: Trx,
  refund: Stripe.Refund,
  now: number
): Promise<{ outcome: Outcome; payment: string | null }> {
  const known =
    (await trx('payments').where({ provider_payment: refund.id }).first<PaymentRow | undefined>()) ??
    (await trx('payments')
      .where({ id: refund.metadata?.payment ?? '', kind: 'refund', method: 'card' })
      .whereNull('provider_payment')
      .first<PaymentRow | undefined>());
  const row = known ?? (await foreignRefund(trx, refund, now));
  if (!row) return { outcome: 'unknown payment', payment: null };
  const answer = (outcome: Outcome) => ({ outcome, payment: row.id });
  if (refund.amount !== cardAmount(row.amount, row.currency)) return answer('amount differs');
  // Failing is the last word of a refund; a late message of its success changes nothing.
  if (row.state === 'failed' && row.provider_payment !== null) return answer('known already');
  await trx('payments').where({ id: row.id }).update({ provider_payment: refund.id });
  if (refund.status === 'succeeded')
    return answer(
      (await settle(trx, row, { providerPayment: refund.id, by: null }, now)) ? 'settled' : 'known already'
    );
  if (refund.status === 'failed' || refund.status === 'canceled') {
    // Banks can send a refund back after it had gone out: then the money is here again.
    await trx('payments')
      .where({ id: row.id })
      .update({ state: 'failed', error: refund.failure_reason ?? 'Not carried out by the card host' });
    return answer('closed');
  }
  return answer('not paid yet');
}

async function foreignRefund(trx: Trx, refund: Stripe.Refund, now: number): Promise<PaymentRow | undefined> {
  const intent = refund.payment_intent;
  const paid = await trx('payments')
    .where({ provider_payment: typeof intent === 'string' ? intent : (intent?.id ?? '') })
    .first<PaymentRow | undefined>();
  if (!paid || refund.currency.toUpperCase() !== paid.currency) return undefined;
  const factor = cardAmount(1, paid.currency) ?? 1;
  const id = newId(now);
  await trx('payments').insert({
    id,
    studio_id: paid.studio_id,
    order_id: paid.order_id,
    quote_id: paid.quote_id,
    kind: 'refund',
    method: 'card',
    state: 'waiting',
    amount: refund.amount / factor,
    currency: paid.currency,
    provider_payment: refund.id,
    refund_of: paid.id,
    receipt_to: paid.receipt_to,
    note: 'Made at the card host',
    created_by: 'card host',
    created_at: now
  });
  return trx('payments').where({ id }).first<PaymentRow | undefined>();
}

/**
 * Asks the card host about payments that wait: those of one order, or all. So a message that was lost is found. Gives how many
 * were asked about.
 */
export async function askAbout(
  which: { studio: string; order: string } | 'all',
  now = Date.now()
): Promise<number> {
  const host = cardHost();
  if (host === null) return 0;
  const query = database()('payments')
    .where({ method: 'card', state: 'waiting' })
    .orderBy('created_at')
    .limit(200);
  if (which !== 'all') query.where({ studio_id: which.studio, order_id: which.order });
  const rows = await query.select<PaymentRow[]>();
  for (const row of rows) {
    if (row.kind === 'refund') {
      await askRefund(host, row, now);
      continue;
    }
    if (row.provider_session === null) {
      // Its page was never shown to anybody, so nobody can have paid it.
      if (row.created_at < now - KEY_LIFE)
        await database()('payments').where({ id: row.id, state: 'waiting' }).update({ state: 'expired' });
      continue;
    }
    try {
      const session = await host.stripe.checkout.sessions.retrieve(row.provider_session);
      const { outcome } = await database().transaction((trx) => applySession(trx, session, now));
      if (outcome === 'amount differs') log.error({ payment: row.id }, 'the card host names another amount');
    } catch (error) {
      log.warn({ payment: row.id, err: error }, 'the card host gave no answer');
    }
  }
  return rows.length;
}

/** Asks at once and every five minutes, for messages that never came. Gives the way to end it. */
export function startAsking(every = 5 * MINUTE): () => Promise<void> {
  let running: Promise<unknown> = Promise.resolve();
  let open = true;
  const go = () => {
    running = running
      .then(() => (open ? askAbout('all') : 0))
      .catch((error) => log.error({ err: error }, 'card payments'));
  };
  const timer = setInterval(go, every);
  timer.unref();
  go();
  return async () => {
    open = false;
    clearInterval(timer);
    await running;
  };
}
