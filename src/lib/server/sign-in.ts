import * as accounts from './accounts';
import * as audit from './audit';
import { Problem } from './problem';
import * as rateLimits from './rate-limits';

/*
 * Signing in with address and password, with its limits. An unknown address and a wrong password are answered alike and
 * after the same work.
 */

/** @throws Problem 429 when there were too many wrong attempts, 400 when address and password don't belong together. */
export async function signIn(email: string, password: string, place: string): Promise<accounts.Account> {
  const counters = [
    ['sign-in: address and place', email, place],
    ['sign-in: place', place],
    ['sign-in: address', email]
  ] as const;
  // Counted before the password is looked at: attempts side by side can't slip through between count and check.
  const waits = [];
  for (const [limit, ...parts] of counters) waits.push(await rateLimits.attempt(limit, ...parts));
  const wait = Math.max(...waits);
  if (wait > 0) {
    await audit.record({ studioId: null, userId: null, action: 'sign-in: refused', subject: email });
    throw new Problem(429, 'too-many', 'Too many attempts', rateLimits.waitWords(wait));
  }
  const account = await accounts.withPassword(email, password);
  if (!account) {
    await audit.record({ studioId: null, userId: null, action: 'sign-in: failed', subject: email });
    throw new Problem(
      400,
      'wrong-sign-in',
      'Not signed in',
      'This address and this password don’t belong together.'
    );
  }
  for (const [limit, ...parts] of counters) await rateLimits.giveBack(limit, ...parts);
  await rateLimits.forgive('sign-in: address and place', email, place);
  await audit.record({ studioId: null, userId: account.id, action: 'sign-in: done', subject: account.id });
  return account;
}
