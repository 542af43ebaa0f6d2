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
import * as studios from './studios';
import { hashToken, newToken } from './tokens';

/*
 * Opening a studio. The request only queues a job, so that neither the answer nor its time tells whether the address
 * has an account; the job decides which mail goes out.
 */

const validFor = 24 * 3_600_000;

const request = z.object({ email: z.string(), name: z.string(), studioName: z.string() });

/** Asks for a studio; a mail follows in any case. */
export async function ask(wanted: z.infer<typeof request>): Promise<void> {
  await jobs.enqueue(null, 'sign-up', wanted);
}

export const job: jobs.JobKind<z.infer<typeof request>> = {
  input: request,
  permission: null,
  async run({ email, name, studioName }, { id: key }) {
    const now = Date.now();
    const { token, hash } = newToken();
    await database().transaction(async (trx) => {
      if (await accounts.findByEmail(email, trx)) return outbox.queue(mails.signUpKnown(key, email), trx);
      await trx('sign_ups').insert({
        id: newId(now),
        token_hash: hash,
        email,
        name,
        studio_name: studioName,
        expires_at: now + validFor,
        created_at: now
      });
      await outbox.queue(mails.signUpLink(key, email, name, studioName, token), trx);
    });
  }
};

interface SignUp {
  readonly id: string;
  readonly email: string;
  readonly name: string;
  readonly studioName: string;
}

/** What a link was asked for. @throws Problem 410 */
export async function read(token: string, now = Date.now(), db: Knex = database()): Promise<SignUp> {
  const row = await db('sign_ups')
    .where({ token_hash: hashToken(token) })
    .whereNull('used_at')
    .where('expires_at', '>', now)
    .first<SignUp | undefined>({ id: 'id', email: 'email', name: 'name', studioName: 'studio_name' });
  if (!row) throw linkDead();
  return row;
}

/** Makes the account, the studio and its owner. The link is used up. */
export async function complete(
  token: string,
  password: string,
  now = Date.now()
): Promise<{ userId: string; studioId: string }> {
  await read(token, now);
  const passwordHash = await hashPassword(password);
  return database().transaction(async (trx) => {
    const { id, email, name, studioName } = await read(token, now, trx);
    const userId = await accounts.create({ email, name, passwordHash }, trx, now);
    const studioId = await studios.create({ name: studioName, owner: userId }, trx, now);
    await trx('sign_ups').where({ id }).update({ used_at: now });
    await audit.record({ studioId, userId, action: 'studio: opened', subject: studioId }, trx);
    return { userId, studioId };
  });
}
