import { database } from '$lib/server/database';
import { emptySheet } from '$lib/server/price-sheet';
import * as prices from '$lib/server/prices';
import * as quotes from '$lib/server/quotes';
import type { Scope } from '$lib/server/scope';
import { makeOrder, type OrderRows } from './lay-orders';

/* An order with a price, as far as a test needs it. */

export const words: quotes.QuoteWords = {
  validUntil: '2099-01-01',
  fittings: 2,
  dates: '',
  alterations: 'Small ones.',
  exclusions: '',
  terms: 'Pay first.'
};

/** The newest token that was mailed. */
export async function tokenInOutbox(): Promise<string> {
  const rows = await database()('messages').orderBy('created_at').orderBy('id').pluck('body');
  const tokens = rows.flatMap((body: string) =>
    [...body.matchAll(/\/c\/([\w-]{43})/g)].map((found) => found[1]!)
  );
  return tokens.at(-1)!;
}

/** An order whose price is 1000.00 (deposit a half) by hand, quoted as number 1 and sent to its client. */
export async function makeQuoted(
  scope: Scope,
  number = 7,
  price = 100_000
): Promise<OrderRows & { token: string; hash: string }> {
  const rows = await makeOrder(scope, { number });
  await prices.save(scope, rows.order, 0, { ...emptySheet, priceByHand: price });
  await quotes.create(scope, rows.order, words);
  await quotes.send(scope, rows.order, 1, 'ada@far.example');
  const { hash } = await quotes.read(scope, rows.order, 1);
  return { ...rows, token: await tokenInOutbox(), hash };
}

/** The client agrees to quote 1. */
export async function agreeTo(scope: Scope, order: string, number = 1): Promise<void> {
  const { hash } = await quotes.read(scope, order, number);
  await quotes.agree(scope, order, { number, hash, name: 'Ada Lund', place: '192.0.2.9' }, 'ada@far.example');
}
