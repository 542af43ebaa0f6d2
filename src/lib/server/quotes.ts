import { createHash } from 'node:crypto';
import type { Knex } from 'knex';
import type { QuoteDocument } from '$lib/guide/quote-paper';
import type { ClothRole } from '$lib/pattern/panel';
import { dayAt, formatInstant } from '$lib/units/days';
import type { Minor } from '$lib/units/measure';
import * as audit from './audit';
import * as clientLinks from './client-links';
import * as mails from './client-mails';
import { database } from './database';
import { newId } from './ids';
import { LAW_NOTICE } from './money-defaults';
import { advanceStage } from './order-progress';
import type { Order } from './orders';
import * as orders from './orders';
import * as outbox from './outbox';
import * as prices from './prices';
import { invalid, notFound, Problem } from './problem';
import { openQuote, sealed } from './quote-document';
import type { Scope } from './scope';
import * as studios from './studios';

/*
 * Quotes: made from the price as it stands, kept as immutable bytes, numbered within the order. Only the newest that was
 * sent can be agreed, as long as it is valid and the order is still what was quoted.
 */

export const quoteStates = ['draft', 'sent', 'agreed', 'superseded', 'declined', 'withdrawn'] as const;
export type QuoteState = (typeof quoteStates)[number];

export interface ListedQuote {
  readonly id: string;
  readonly number: number;
  readonly state: QuoteState;
  /** Sent, but its last day is over. */
  readonly runOut: boolean;
  readonly total: Minor;
  readonly deposit: Minor;
  readonly currency: string;
  readonly validUntil: string;
  readonly sentTo: string | null;
  readonly sentAt: number | null;
  readonly agreedName: string | null;
  readonly agreedAt: number | null;
  readonly createdAt: number;
}

export interface Quote extends ListedQuote {
  readonly hash: string;
  readonly document: QuoteDocument;
  /** Whether the order's garments and cloths are still those that were quoted. */
  readonly orderUnchanged: boolean;
  /** Where the agreement came from, as the network knows it. */
  readonly agreedPlace: string | null;
}

/** What a person says in a quote beside the price. */
export interface QuoteWords {
  readonly validUntil: string;
  readonly fittings: number;
  readonly dates: string;
  readonly alterations: string;
  readonly exclusions: string;
  readonly terms: string;
}

interface QuoteRow {
  id: string;
  order_id: string;
  number: number;
  state: QuoteState;
  bytes: Buffer;
  hash: string;
  currency: string;
  total: number;
  deposit: number;
  valid_until: string;
  fingerprint: string;
  sent_to: string | null;
  sent_at: number | null;
  agreed_name: string | null;
  agreed_at: number | null;
  agreed_place: string | null;
  created_at: number;
}

/** How a client reads what a cloth is for. */
const roleWords: Readonly<Record<ClothRole, string>> = {
  main: 'Main cloth',
  lining: 'Lining',
  interlining: 'Interlining',
  contrast: 'Contrast',
  toile: 'Toile'
};

/** What an order asks for, hashed: lines, sizes, numbers, cloths. */
export function fingerprintOf(order: Pick<Order, 'items'>): string {
  const asked = order.items.map(({ style, label, quantity, roles }) => [
    style.versionId,
    label,
    quantity,
    roles.map(({ role, cloth }) => [role, cloth?.id ?? null])
  ]);
  return createHash('sha256').update(JSON.stringify(asked)).digest('hex');
}

function listedOf(row: QuoteRow, today: string): ListedQuote {
  return {
    id: row.id,
    number: row.number,
    state: row.state,
    runOut: row.state === 'sent' && row.valid_until < today,
    total: row.total,
    deposit: row.deposit,
    currency: row.currency,
    validUntil: row.valid_until,
    sentTo: row.sent_to,
    sentAt: row.sent_at,
    agreedName: row.agreed_name,
    agreedAt: row.agreed_at,
    createdAt: row.created_at
  };
}

async function today(scope: Scope, now: number): Promise<string> {
  return dayAt(now, (await studios.read(scope)).timeZone);
}

const rowsOf = (scope: Scope, orderId: string, db: Knex = database()) =>
  db('quotes').where({ studio_id: scope.studio, order_id: orderId });

/** The quotes of an order, the newest first. */
export async function list(scope: Scope, orderId: string, now = Date.now()): Promise<ListedQuote[]> {
  const day = await today(scope, now);
  const rows = await rowsOf(scope, orderId).orderBy('number', 'desc').select<QuoteRow[]>();
  return rows.map((row) => listedOf(row, day));
}

/** One quote with what it says. 404 for what is not this studio's. */
export async function read(scope: Scope, orderId: string, number: number, now = Date.now()): Promise<Quote> {
  const order = await orders.read(scope, orderId);
  const row = await rowsOf(scope, orderId).where({ number }).first<QuoteRow | undefined>();
  if (!row) throw notFound('quote of this order');
  return {
    ...listedOf(row, await today(scope, now)),
    hash: row.hash,
    document: openQuote(row.bytes, row.hash),
    orderUnchanged: row.fingerprint === fingerprintOf(order),
    agreedPlace: row.agreed_place
  };
}

/** What the client is shown: the newest quote that was sent, and the one that is agreed (they may be one). */
export async function forClient(
  scope: Scope,
  orderId: string,
  now = Date.now()
): Promise<{ offered: Quote | null; agreed: Quote | null }> {
  const all = await list(scope, orderId, now);
  const newest = all.find(({ state }) => state === 'sent' || state === 'agreed' || state === 'declined');
  const agreed = all.find(({ state }) => state === 'agreed');
  return {
    offered: newest && newest.state !== 'agreed' ? await read(scope, orderId, newest.number, now) : null,
    agreed: agreed ? await read(scope, orderId, agreed.number, now) : null
  };
}

/**
 * Makes the next quote of an order from its price as it stands, as a draft; an earlier draft gives way. Refused while a cloth's
 * cost is not known, while the order has no line, and when the last day of the quote is over already.
 */
export async function create(
  scope: Scope,
  orderId: string,
  said: QuoteWords,
  now = Date.now()
): Promise<number> {
  const price = await prices.read(scope, orderId);
  const studio = await studios.read(scope);
  const day = dayAt(now, studio.timeZone);
  const { order, build } = price;
  if (order.items.length === 0) throw invalid({ '': 'The order has no line yet: nothing to quote.' });
  if (!build.complete) {
    const open = price.cloths.filter(
      (_, i) => build.cloths[i]!.byHand === null && build.cloths[i]!.computed === null
    );
    throw invalid({
      '': `What ${open.map(({ name }) => `“${name}”`).join(' and ')} will cost is not known: choose a lay and give the cloth a price, or write the sum by hand.`
    });
  }
  if (said.validUntil < day) throw invalid({ validUntil: 'This day is over.' });
  const amounts = price.cloths.map((_, i) => build.cloths[i]!.amount);
  const making = build.price.amount - build.cloth - build.trims - build.extras;
  const id = newId(now);
  return database().transaction(async (trx) => {
    const [last] = await rowsOf(scope, orderId, trx).max<{ number: number | null }[]>({ number: 'number' });
    const number = Number(last?.number ?? 0) + 1;
    const document: QuoteDocument = {
      schema: 1,
      studio: { name: studio.name, letterhead: price.defaults.letterhead },
      order: order.number,
      version: number,
      client: order.clientName,
      currency: price.currency,
      lengthUnit: studio.lengthUnit,
      day,
      validUntil: said.validUntil,
      garments: order.items.map(({ style, label, quantity }) => ({ name: style.name, label, quantity })),
      cloths: price.cloths.map((cloth, i) => ({
        name: cloth.name,
        roles: order.cloths
          .find(({ id }) => id === cloth.id)!
          .roles.map((role) => roleWords[role])
          .join(', '),
        width: cloth.usableWidth,
        length: cloth.length,
        own: cloth.own,
        amount: amounts[i]!
      })),
      trims: price.sheet.trims,
      extras: price.sheet.extras,
      minutes: price.terms.minutes,
      making: making < 0 ? null : making,
      tax: { ...price.terms.tax, amount: build.tax },
      net: build.net,
      total: build.total,
      deposit: build.deposit,
      fittings: said.fittings,
      due: order.dueDate,
      dates: said.dates,
      alterations: said.alterations,
      exclusions: said.exclusions,
      terms: said.terms,
      law: LAW_NOTICE
    };
    const { bytes, hash } = sealed(document);
    await rowsOf(scope, orderId, trx).where({ state: 'draft' }).update({ state: 'superseded' });
    await trx('quotes').insert({
      id,
      studio_id: scope.studio,
      order_id: orderId,
      number,
      state: 'draft',
      bytes,
      hash,
      currency: price.currency,
      total: build.total,
      deposit: build.deposit,
      valid_until: said.validUntil,
      fingerprint: fingerprintOf(order),
      created_by: scope.user,
      created_at: now
    });
    return number;
  });
}

/**
 * Mails a quote with a link of its own; one that was sent before can be sent again. Earlier quotes that wait for an answer are
 * superseded, an enquiry becomes quoted. Refused for a quote that is over, ran out, or of an order that changed since.
 */
export async function send(
  scope: Scope,
  orderId: string,
  number: number,
  to: string,
  now = Date.now()
): Promise<void> {
  const quote = await read(scope, orderId, number, now);
  if (quote.state !== 'draft' && quote.state !== 'sent')
    throw new Problem(
      409,
      'quote-over',
      'This quote can’t be sent any more',
      `It is ${quote.state}. Make a new one.`
    );
  if (quote.validUntil < (await today(scope, now)))
    throw new Problem(409, 'quote-ran-out', 'This quote ran out', 'Make a new one with a later day.');
  if (!quote.orderUnchanged)
    throw new Problem(409, 'quote-of-other-order', 'The order changed since this quote', 'Make a new one.');
  const about = await aboutOf(scope, orderId);
  const key = newId(now);
  await database().transaction(async (trx) => {
    const sent = await rowsOf(scope, orderId, trx)
      .where({ number })
      .whereIn('state', ['draft', 'sent'])
      .update({ state: 'sent', sent_to: to, sent_at: now });
    if (sent === 0)
      throw new Problem(409, 'quote-over', 'This quote can’t be sent any more', 'Load the page again.');
    await rowsOf(scope, orderId, trx)
      .whereIn('state', ['sent', 'draft', 'declined'])
      .where('number', '<', number)
      .update({ state: 'superseded' });
    const { token } = await clientLinks.create(trx, scope, orderId, to, now);
    await outbox.queue(mails.quoteSent(key, about, to, quote.document, token), trx, now);
    await advanceStage(trx, scope, orderId, ['enquiry'], 'quoted', now);
    await audit.recordBy(scope, 'quote: sent', quote.id, { order: about.order, number }, trx);
  });
}

/** Takes back a quote that was not answered. */
export async function withdraw(scope: Scope, orderId: string, number: number): Promise<void> {
  const { id } = await read(scope, orderId, number);
  const done = await rowsOf(scope, orderId)
    .where({ number })
    .whereIn('state', ['draft', 'sent'])
    .update({ state: 'withdrawn' });
  if (done === 0)
    throw new Problem(409, 'quote-over', 'This quote was answered already', 'Load the page again.');
  await audit.recordBy(scope, 'quote: withdrawn', id, { number });
}

/** What an answer names: the number and the hash of what the person read. */
export interface Answered {
  readonly number: number;
  readonly hash: string;
  /** As the client typed it. */
  readonly name: string;
  /** The network address it came from. */
  readonly place: string;
}

/**
 * The client agrees. Holds exactly when the quote named by number and hash is the newest that waits for an answer, its last
 * day is not over, and the order is still what was quoted; otherwise 409, and nothing is changed. Agreeing twice to the same
 * quote is answered like once.
 */
export async function agree(
  scope: Scope,
  orderId: string,
  answer: Answered,
  client: string,
  now = Date.now()
): Promise<void> {
  const quote = await answerable(scope, orderId, answer, now);
  if (quote.state === 'agreed') return;
  const about = await aboutOf(scope, orderId);
  const { timeZone } = await studios.read(scope);
  await database().transaction(async (trx) => {
    const done = await rowsOf(scope, orderId, trx)
      .where({ number: answer.number, hash: answer.hash, state: 'sent' })
      .update({ state: 'agreed', agreed_name: answer.name, agreed_at: now, agreed_place: answer.place });
    if (done === 0) throw answeredMeanwhile();
    await rowsOf(scope, orderId, trx)
      .where({ state: 'agreed' })
      .whereNot({ number: answer.number })
      .update({ state: 'superseded' });
    await advanceStage(trx, scope, orderId, ['enquiry', 'quoted'], 'agreed', now);
    await outbox.queue(
      mails.quoteAgreed(quote.id, about, client, {
        name: answer.name,
        version: quote.number,
        when: formatInstant(now, timeZone),
        total: quote.total,
        deposit: quote.deposit,
        currency: quote.currency
      }),
      trx,
      now
    );
    for (const owner of await studios.ownerAddresses(scope, trx))
      await outbox.queue(
        mails.toldStudioAgreed(`${quote.id} agreed ${owner}`, about, owner, {
          name: answer.name,
          version: quote.number,
          client: quote.document.client,
          did: 'agreed to'
        }),
        trx,
        now
      );
    await audit.record(
      {
        studioId: scope.studio,
        userId: null,
        action: 'quote: agreed',
        subject: quote.id,
        detail: { number: quote.number, hash: quote.hash }
      },
      trx
    );
  });
}

/** The client declines. */
export async function decline(
  scope: Scope,
  orderId: string,
  answer: Answered,
  now = Date.now()
): Promise<void> {
  const quote = await answerable(scope, orderId, answer, now);
  const about = await aboutOf(scope, orderId);
  await database().transaction(async (trx) => {
    const done = await rowsOf(scope, orderId, trx)
      .where({ number: answer.number, hash: answer.hash, state: 'sent' })
      .update({ state: 'declined' });
    if (done === 0) throw answeredMeanwhile();
    for (const owner of await studios.ownerAddresses(scope, trx))
      await outbox.queue(
        mails.toldStudioAgreed(`${quote.id} declined ${owner}`, about, owner, {
          name: quote.document.client,
          version: quote.number,
          client: quote.document.client,
          did: 'declined'
        }),
        trx,
        now
      );
  });
}

const answeredMeanwhile = () =>
  new Problem(
    409,
    'quote-answered',
    'This quote was answered or replaced meanwhile',
    'Look at your page again.'
  );

async function answerable(scope: Scope, orderId: string, answer: Answered, now: number): Promise<Quote> {
  const refuse = (type: string, title: string) =>
    new Problem(409, type, title, 'Look at your page again, or ask the workroom for a new quote.');
  const row = await rowsOf(scope, orderId)
    .where({ number: answer.number, hash: answer.hash })
    .first<QuoteRow | undefined>('number', 'state');
  if (!row || row.state === 'draft' || row.state === 'withdrawn')
    throw refuse('quote-unknown', 'There is no such quote for you');
  if (row.state === 'superseded') throw refuse('quote-superseded', 'This quote was replaced by a newer one');
  const quote = await read(scope, orderId, answer.number, now);
  if (quote.state === 'agreed') return quote;
  if (quote.state === 'declined') throw refuse('quote-declined', 'This quote was declined');
  if (quote.runOut) throw refuse('quote-ran-out', 'This quote ran out');
  if (!quote.orderUnchanged) throw refuse('quote-of-other-order', 'Your order changed since this quote');
  return quote;
}

/** What mails need to know of an order. */
export async function aboutOf(
  scope: Scope,
  orderId: string
): Promise<{ studioId: string; studio: string; order: number; orderId: string; client: string }> {
  const order = await database()('orders')
    .where({ studio_id: scope.studio, id: orderId })
    .first<{ number: number; client_name: string } | undefined>('number', 'client_name');
  if (!order) throw notFound('order');
  const { name } = await studios.read(scope);
  return { studioId: scope.studio, studio: name, order: order.number, orderId, client: order.client_name };
}

/** Mails the client a new link to the order's page. */
export async function sendLink(scope: Scope, orderId: string, to: string, now = Date.now()): Promise<void> {
  const about = await aboutOf(scope, orderId);
  await database().transaction(async (trx) => {
    const { id, token } = await clientLinks.create(trx, scope, orderId, to, now);
    await outbox.queue(mails.linkSent(id, about, to, about.client, token), trx, now);
  });
}
