import type { Knex } from 'knex';
import { z } from 'zod';
import * as accounts from './accounts';
import * as audit from './audit';
import { database } from './database';
import * as mails from './door-mails';
import { newId } from './ids';
import * as jobs from './jobs';
import { linkDead } from './one-time-link';
import * as outbox from './outbox';
import { hashPassword } from './passwords';
import * as sessions from './sessions';
import { hashToken, newToken } from './tokens';

/*
 * Forgotten passwords. As with sign-ups, the request only queues a job.
 */

const validFor = 3_600_000;

const request = z.object({ email: z.string() });

/** Asks for a link; whether a mail follows depends on the address, the answer does not. */
export async function ask(email: string): Promise<void> {
  await jobs.enqueue(null, 'password-reset', { email });
}

export const job: jobs.JobKind<z.infer<typeof request>> = {
  input: request,
  permission: null,
  async run({ email }, { id: key }) {
    const account = await accounts.findByEmail(email);
    if (!account) return;
    const now = Date.now();
    const { token, hash } = newToken();
    await database().transaction(async (trx) => {
      await trx('password_resets').insert({
        id: newId(now),
        user_id: account.id,
        token_hash: hash,
        expires_at: now + validFor,
        created_at: now
      });
      await outbox.queue(mails.resetLink(key, account.email, account.name, token), trx);
    });
  }
};

/** Whose password a link may set. @throws Problem 410 */
export async function read(
  token: string,
  now = Date.now(),
  db: Knex = database()
): Promise<accounts.Account> {
  const row = await db('password_resets')
    .join('users', 'users.id', 'password_resets.user_id')
    .where({ token_hash: hashToken(token) })
    .whereNull('used_at')
    .where('expires_at', '>', now)
    .first<accounts.Account | undefined>('users.id', 'users.email', 'users.name');
  if (!row) throw linkDead();
  return row;
}

/** Sets the password, uses up every reset link of the person, and signs them out everywhere. */
export async function complete(token: string, password: string, now = Date.now()): Promise<void> {
  await read(token, now);
  const passwordHash = await hashPassword(password);
  const account = await database().transaction(async (trx) => {
    const found = await read(token, now, trx);
    await accounts.setPasswordHash(found.id, passwordHash, trx);
    await trx('password_resets').where({ user_id: found.id }).whereNull('used_at').update({ used_at: now });
    await outbox.queue(mails.passwordChanged(newId(now), found.email, found.name), trx);
    await audit.record({ studioId: null, userId: found.id, action: 'password: reset' }, trx);
    return found;
  });
  await sessions.endAll(account.id);
}
