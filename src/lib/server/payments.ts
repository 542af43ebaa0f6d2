import type { Knex } from 'knex';
import { dayAt, formatInstant } from '$lib/units/days';
import { ledgerOf, type Ledger, type PaymentKind } from '$lib/units/ledger';
import type { Minor } from '$lib/units/measure';
import * as audit from './audit';
import * as mails from './client-mails';
import { database } from './database';
import { newId } from './ids';
import * as outbox from './outbox';
import { invalid, notFound, Problem } from './problem';
import { studioScope, type Scope } from './scope';
import * as studios from './studios';

/*
 * Payments of orders: what came in and went back, whatever the way. Cards are card-payments.ts; here is the account, money by
 * hand, and the one place where a payment becomes settled, with its receipt in the same transaction.
 */

export const methods = ['card', 'cash', 'transfer'] as const;
export type Method = (typeof methods)[number];
export type PaymentState = 'waiting' | 'settled' | 'failed' | 'expired';

export interface Payment {
  readonly id: string;
  readonly kind: PaymentKind;
  readonly method: Method;
  readonly state: PaymentState;
  readonly amount: Minor;
  readonly currency: string;
  readonly refundOf: string | null;
  readonly note: string;
  readonly error: string | null;
  readonly day: string | null;
  readonly createdAt: number;
  readonly receiptTo: string | null;
}

export interface PaymentRow {
  id: string;
  studio_id: string;
  order_id: string;
  quote_id: string | null;
  kind: PaymentKind;
  method: Method;
  state: PaymentState;
  amount: number;
  currency: string;
  provider_session: string | null;
  provider_payment: string | null;
  refund_of: string | null;
  receipt_to: string | null;
  note: string;
  error: string | null;
  day: string | null;
  created_at: number;
}

export interface Account extends Ledger {
  readonly currency: string;
  readonly deposit: Minor;
  /** The agreed quote; null while none is. */
  readonly quote: { readonly id: string; readonly number: number } | null;
  /** The newest first, also those that came to nothing. */
  readonly payments: readonly Payment[];
}

/** The account of an order: what was agreed, what came, what is open. 404 for an order that is not this studio's. */
export async function account(scope: Scope, orderId: string, db: Knex = database()): Promise<Account> {
  const own = { studio_id: scope.studio, order_id: orderId };
  const order = await db('orders')
    .join('studios', 'studios.id', 'orders.studio_id')
    .where({ 'orders.studio_id': scope.studio, 'orders.id': orderId })
    .first<{ currency: string } | undefined>('studios.currency');
  if (!order) throw notFound('order');
  const quote = await db('quotes')
    .where({ ...own, state: 'agreed' })
    .orderBy('number', 'desc')
    .first<{ id: string; number: number; total: number; deposit: number; currency: string } | undefined>(
      'id',
      'number',
      'total',
      'deposit',
      'currency'
    );
  const rows = await db('payments').where(own).orderBy('created_at', 'desc').select<PaymentRow[]>();
  const currency = quote?.currency ?? rows[0]?.currency ?? order.currency;
  return {
    ...ledgerOf(
      quote?.total ?? 0,
      quote?.deposit ?? 0,
      // What came in another currency stands in the list; sums of two currencies would mean nothing.
      rows
        .filter((row) => row.currency === currency)
        .map(({ kind, amount, state }) => ({ kind, amount, settled: state === 'settled' }))
    ),
    currency,
    deposit: quote?.deposit ?? 0,
    quote: quote ? { id: quote.id, number: quote.number } : null,
    payments: rows.map((row) => ({
      id: row.id,
      kind: row.kind,
      method: row.method,
      state: row.state,
      amount: row.amount,
      currency: row.currency,
      refundOf: row.refund_of,
      note: row.note,
      error: row.error,
      day: row.day,
      createdAt: row.created_at,
      receiptTo: row.receipt_to
    }))
  };
}

export interface Totals {
  readonly currency: string;
  readonly agreed: Minor;
  readonly received: Minor;
  readonly refunded: Minor;
  readonly owed: Minor;
}

/** The studio's money over all its orders, by currency: agreed − received + refunded is owed. */
export async function totals(scope: Scope): Promise<Totals[]> {
  const agreed = await database()('quotes')
    .where({ studio_id: scope.studio, state: 'agreed' })
    .groupBy('currency')
    .select<{ currency: string; total: number }[]>('currency', database().raw('sum(total) as total'));
  const moved = await database()('payments')
    .where({ studio_id: scope.studio, state: 'settled' })
    .groupBy('currency')
    .select<{ currency: string; received: number; refunded: number }[]>(
      'currency',
      database().raw(`sum(case when kind = 'refund' then 0 else amount end) as received`),
      database().raw(`sum(case when kind = 'refund' then amount else 0 end) as refunded`)
    );
  const currencies = [...new Set([...agreed, ...moved].map(({ currency }) => currency))].sort();
  return currencies.map((currency) => {
    const total = Number(agreed.find((one) => one.currency === currency)?.total ?? 0);
    const money = moved.find((one) => one.currency === currency);
    const received = Number(money?.received ?? 0);
    const refunded = Number(money?.refunded ?? 0);
    return { currency, agreed: total, received, refunded, owed: total - received + refunded };
  });
}

/** Whether the deposit of an order is asked for and met: what buying cloth and releasing to cutting wait for. */
export async function depositOf(
  scope: Scope,
  orderId: string
): Promise<{ agreed: boolean; asked: Minor; missing: Minor; currency: string }> {
  const { quote, deposit, depositMissing, currency } = await account(scope, orderId);
  return { agreed: quote !== null, asked: deposit, missing: depositMissing, currency };
}

export interface ByHand {
  /** Made with the form: sent twice, it counts once. */
  readonly id: string;
  readonly kind: Exclude<PaymentKind, 'refund'>;
  readonly method: Exclude<Method, 'card'>;
  readonly amount: Minor;
  readonly day: string;
  readonly note: string;
  /** Where the receipt goes; null for none. */
  readonly receiptTo: string | null;
}

/** Records money that came in cash or by bank transfer. */
export async function recordByHand(
  scope: Scope,
  orderId: string,
  paid: ByHand,
  now = Date.now()
): Promise<void> {
  if (paid.amount <= 0) throw invalid({ amount: 'How much came in?' });
  await database().transaction(async (trx) => {
    const { currency, quote } = await account(scope, orderId, trx);
    const added: { id: string }[] = await trx('payments')
      .insert({
        id: paid.id,
        studio_id: scope.studio,
        order_id: orderId,
        quote_id: quote?.id ?? null,
        kind: paid.kind,
        method: paid.method,
        state: 'waiting',
        amount: paid.amount,
        currency,
        receipt_to: paid.receiptTo,
        note: paid.note,
        day: paid.day,
        created_by: scope.user,
        created_at: now
      })
      .onConflict('id')
      .ignore()
      .returning('id');
    if (added.length === 0) return;
    await settle(trx, (await rowOf(trx, scope, paid.id))!, { day: paid.day, by: scope.user }, now);
  });
}

/** Records that money of a payment by hand was given back by hand. `id` as above. */
export async function refundByHand(
  scope: Scope,
  orderId: string,
  refund: { id: string; of: string; amount: Minor; method: Exclude<Method, 'card'>; day: string },
  now = Date.now()
): Promise<void> {
  await database().transaction(async (trx) => {
    const row = await beginRefund(trx, scope, orderId, refund, refund.method, now);
    if (row) await settle(trx, row, { day: refund.day, by: scope.user }, now);
  });
}

/**
 * Writes a refund that waits, within a transaction; null when this very refund was written before. Refused when the payment is
 * not of this order, is not settled, or has less left than is to go back.
 */
export async function beginRefund(
  trx: Knex,
  scope: Scope,
  orderId: string,
  refund: { id: string; of: string; amount: Minor },
  method: Method,
  now: number
): Promise<PaymentRow | null> {
  if (await rowOf(trx, scope, refund.id)) return null;
  const paid = await rowOf(trx, scope, refund.of);
  if (!paid || paid.order_id !== orderId || paid.kind === 'refund') throw notFound('payment of this order');
  if (paid.state !== 'settled') throw new Problem(409, 'not-settled', 'This payment has not come in');
  if (method === 'card' && (paid.method !== 'card' || paid.provider_payment === null))
    throw invalid({ method: 'This payment did not come by card.' });
  const [back] = await trx('payments')
    .where({ studio_id: scope.studio, refund_of: paid.id })
    .whereIn('state', ['waiting', 'settled'])
    .sum<{ amount: number | null }[]>({ amount: 'amount' });
  const left = paid.amount - Number(back?.amount ?? 0);
  if (refund.amount <= 0) throw invalid({ amount: 'How much goes back?' });
  if (refund.amount > left) throw invalid({ amount: 'More than is left of this payment.' });
  await trx('payments').insert({
    id: refund.id,
    studio_id: scope.studio,
    order_id: orderId,
    quote_id: paid.quote_id,
    kind: 'refund',
    method,
    state: 'waiting',
    amount: refund.amount,
    currency: paid.currency,
    refund_of: paid.id,
    receipt_to: paid.receipt_to,
    created_by: scope.user,
    created_at: now
  });
  return (await rowOf(trx, scope, refund.id))!;
}

export async function rowOf(db: Knex, scope: Scope, id: string): Promise<PaymentRow | undefined> {
  return db('payments').where({ studio_id: scope.studio, id }).first<PaymentRow | undefined>();
}

/**
 * The one place where money becomes real: marks a payment as settled, with its receipt and the word to the studio, in the
 * caller's transaction. A payment that is settled already stays as it is; gives whether it changed.
 */
export async function settle(
  trx: Knex,
  payment: PaymentRow,
  how: { providerPayment?: string | null; day?: string; by: string | null },
  now: number
): Promise<boolean> {
  const scope = studioScope(payment.studio_id);
  const studio = await trx('studios')
    .where({ id: payment.studio_id })
    .first<{ name: string; time_zone: string }>('name', 'time_zone');
  const changed = await trx('payments')
    .where({ studio_id: payment.studio_id, id: payment.id })
    .whereNot({ state: 'settled' })
    .update({
      state: 'settled',
      settled_at: now,
      error: null,
      day: how.day ?? dayAt(now, studio.time_zone),
      ...(how.providerPayment ? { provider_payment: how.providerPayment } : {})
    });
  if (changed === 0) return false;
  const order = await trx('orders')
    .where({ studio_id: payment.studio_id, id: payment.order_id })
    .first<{ number: number; client_name: string }>('number', 'client_name');
  const { owed } = await account(scope, payment.order_id, trx);
  const about = {
    studioId: payment.studio_id,
    studio: studio.name,
    order: order.number,
    orderId: payment.order_id
  };
  if (payment.receipt_to !== null)
    await outbox.queue(
      mails.receipt(payment.id, about, payment.receipt_to, {
        client: order.client_name,
        kind: payment.kind,
        method: payment.method,
        amount: payment.amount,
        currency: payment.currency,
        when: formatInstant(now, studio.time_zone),
        owed
      }),
      trx,
      now
    );
  if (payment.method === 'card' && payment.kind !== 'refund')
    for (const owner of await studios.ownerAddresses(scope, trx))
      await outbox.queue(
        mails.toldStudioPaid(`${payment.id} ${owner}`, about, owner, {
          client: order.client_name,
          amount: payment.amount,
          currency: payment.currency,
          owed
        }),
        trx,
        now
      );
  await audit.record(
    {
      studioId: payment.studio_id,
      userId: how.by,
      action: payment.kind === 'refund' ? 'payment: given back' : 'payment: received',
      subject: payment.id,
      detail: { order: order.number, method: payment.method }
    },
    trx
  );
  return true;
}

/** A name for a payment by hand, for the form that records it. */
export const newPaymentId = (): string => newId();
