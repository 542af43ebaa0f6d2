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
import { hashToken, newToken } from './tokens';

/*
 * A person's new e-mail address. It counts when the link sent there is opened by the signed-in person; the old address
 * is told when it is asked for and when it counts. Whether the new one has an account elsewhere is told only to it.
 */

const validFor = 86_400_000;

const request = z.object({ userId: z.string(), email: z.string() });

/** Asks for the link. The caller has had the password checked. */
export async function ask(userId: string, email: string): Promise<void> {
  await jobs.enqueue(null, 'address-change', { userId, email });
}

export const job: jobs.JobKind<z.infer<typeof request>> = {
  input: request,
  permission: null,
  async run({ userId, email }, { id: key }) {
    const account = await accounts.read(userId);
    const now = Date.now();
    const { token, hash } = newToken();
    await database().transaction(async (trx) => {
      await outbox.queue(mails.addressChangeAsked(key, account.email, account.name, email), trx);
      if (await accounts.findByEmail(email, trx)) return outbox.queue(mails.newAddressTaken(key, email), trx);
      await trx('address_changes').insert({
        id: newId(now),
        user_id: userId,
        token_hash: hash,
        email,
        expires_at: now + validFor,
        created_at: now
      });
      await outbox.queue(mails.newAddressLink(key, email, account.name, token), trx);
    });
  }
};

interface Change {
  readonly id: string;
  readonly email: string;
}

/** The address that a link of this person is for. @throws Problem 410 */
export async function read(
  userId: string,
  token: string,
  now = Date.now(),
  db: Knex = database()
): Promise<Change> {
  const row = await db('address_changes')
    .where({ token_hash: hashToken(token), user_id: userId })
    .whereNull('used_at')
    .where('expires_at', '>', now)
    .first<Change | undefined>('id', 'email');
  if (!row) throw linkDead();
  return row;
}

/** Makes the new address count. Other open links of the person, resets too, stop working. */
export async function complete(userId: string, token: string, now = Date.now()): Promise<void> {
  const before = await accounts.read(userId);
  await database().transaction(async (trx) => {
    const { id, email } = await read(userId, token, now, trx);
    if (await accounts.findByEmail(email, trx)) throw linkDead();
    await trx('users').where({ id: userId }).update({ email });
    for (const table of ['address_changes', 'password_resets'])
      await trx(table).where({ user_id: userId }).whereNull('used_at').update({ used_at: now });
    await outbox.queue(mails.addressChanged(id, before.email, before.name, email), trx);
    await audit.record({ studioId: null, userId, action: 'address: changed' }, trx);
  });
}
