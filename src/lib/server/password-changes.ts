import * as accounts from './accounts';
import * as audit from './audit';
import { database } from './database';
import * as mails from './door-mails';
import { newId } from './ids';
import * as outbox from './outbox';
import { hashPassword } from './passwords';
import { Problem } from './problem';
import * as rateLimits from './rate-limits';
import * as sessions from './sessions';

/** Asks a signed-in person for the present password before something weighty. @throws Problem 400 or 429 */
export async function confirm(userId: string, password: string): Promise<void> {
  const seconds = await rateLimits.attempt('password: person', userId);
  if (seconds > 0) throw new Problem(429, 'too-many', 'Too many attempts', rateLimits.waitWords(seconds));
  if (!(await accounts.hasPassword(userId, password)))
    throw new Problem(400, 'wrong-password', 'Wrong password', 'This is not your present password.');
  await rateLimits.forgive('password: person', userId);
}

/** Sets a new password, ends the person's other sessions, and tells them by mail. */
export async function change(
  user: accounts.Account,
  newPassword: string,
  keptSession: string,
  now = Date.now()
): Promise<void> {
  const passwordHash = await hashPassword(newPassword);
  await database().transaction(async (trx) => {
    await accounts.setPasswordHash(user.id, passwordHash, trx);
    await trx('password_resets').where({ user_id: user.id }).whereNull('used_at').update({ used_at: now });
    await outbox.queue(mails.passwordChanged(newId(now), user.email, user.name), trx);
    await audit.record({ studioId: null, userId: user.id, action: 'password: changed' }, trx);
  });
  await sessions.endAll(user.id, keptSession);
}
