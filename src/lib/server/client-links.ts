import type { Knex } from 'knex';
import { database } from './database';
import { newId } from './ids';
import { linkDead } from './one-time-link';
import { notFound } from './problem';
import type { Scope } from './scope';
import { hashToken, newToken } from './tokens';

/*
 * The client's way in: a link to one order, without an account. The token is random and stored hashed; the link runs out,
 * and can be revoked. It opens that order's page and nothing else.
 */

/** Days that a link works: longer than an order usually takes. */
const LIFE = 180 * 86_400_000;

export interface ClientLink {
  readonly id: string;
  readonly studio: string;
  readonly order: string;
  readonly sentTo: string;
}

export interface ListedLink {
  readonly id: string;
  readonly sentTo: string;
  readonly createdAt: number;
  readonly expiresAt: number;
  readonly revokedAt: number | null;
  readonly openedAt: number | null;
}

/** A new link to an order, within the transaction of what it is mailed with. The token is given once and not kept. */
export async function create(
  trx: Knex,
  scope: Scope,
  orderId: string,
  sentTo: string,
  now = Date.now()
): Promise<{ id: string; token: string }> {
  const { token, hash } = newToken();
  const id = newId(now);
  await trx('client_links').insert({
    id,
    studio_id: scope.studio,
    order_id: orderId,
    token_hash: hash,
    sent_to: sentTo,
    expires_at: now + LIFE,
    created_by: scope.user,
    created_at: now
  });
  return { id, token };
}

/** What a token leads to. One that is unknown, too old or revoked is answered the same: 410. */
export async function open(token: string, now = Date.now()): Promise<ClientLink> {
  const row = await database()('client_links')
    .where({ token_hash: hashToken(token) })
    .whereNull('revoked_at')
    .where('expires_at', '>', now)
    .first<
      | { id: string; studio_id: string; order_id: string; sent_to: string; opened_at: number | null }
      | undefined
    >();
  if (!row) throw linkDead();
  if (row.opened_at === null)
    await database()('client_links').where({ id: row.id }).whereNull('opened_at').update({ opened_at: now });
  return { id: row.id, studio: row.studio_id, order: row.order_id, sentTo: row.sent_to };
}

/** The links of an order, the newest first. */
export async function list(scope: Scope, orderId: string): Promise<ListedLink[]> {
  return database()('client_links')
    .where({ studio_id: scope.studio, order_id: orderId })
    .orderBy('created_at', 'desc')
    .select<ListedLink[]>({
      id: 'id',
      sentTo: 'sent_to',
      createdAt: 'created_at',
      expiresAt: 'expires_at',
      revokedAt: 'revoked_at',
      openedAt: 'opened_at'
    });
}

/** Ends a link at once. 404 for one that is not of this order. */
export async function revoke(scope: Scope, orderId: string, id: string, now = Date.now()): Promise<void> {
  const own = database()('client_links').where({ studio_id: scope.studio, order_id: orderId, id });
  if (!(await own.clone().first('id'))) throw notFound('link of this order');
  await own.whereNull('revoked_at').update({ revoked_at: now });
}

/** Where the client was last written to; null while nothing was sent. */
export async function lastAddress(scope: Scope, orderId: string): Promise<string | null> {
  const row = await database()('client_links')
    .where({ studio_id: scope.studio, order_id: orderId })
    .orderBy('created_at', 'desc')
    .first<{ sent_to: string } | undefined>('sent_to');
  return row?.sent_to ?? null;
}
