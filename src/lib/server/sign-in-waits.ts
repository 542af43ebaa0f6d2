import type { Cookies } from '@sveltejs/kit';
import * as accounts from './accounts';
import { config } from './config';
import { database } from './database';
import * as secondFactor from './second-factor';
import * as sessions from './sessions';
import * as studios from './studios';
import { hashToken, newToken } from './tokens';

/*
 * Between the password and the code: the browser holds a token that opens nothing but the question for the code.
 */

const MINUTES = 10;
const name = config.secureCookies ? '__Host-warpwise-code' : 'warpwise-code';
const attributes = { secure: config.secureCookies, sameSite: 'lax', path: '/', httpOnly: true } as const;

/**
 * What follows a right password: a session, or, for a person with a second factor, the question for a code. Gives the
 * path to go on to; `next` is where the person wanted to go.
 */
export async function admit(
  cookies: Cookies,
  userId: string,
  userAgent: string,
  next: string,
  now = Date.now()
): Promise<string> {
  if (!(await secondFactor.has(userId))) {
    await sessions.start(cookies, userId, await studios.landing(userId), userAgent);
    return next;
  }
  const { token, hash } = newToken();
  await database()('sign_in_waits').where('expires_at', '<=', now).orWhere({ user_id: userId }).delete();
  await database()('sign_in_waits').insert({
    token_hash: hash,
    user_id: userId,
    expires_at: now + MINUTES * 60_000
  });
  cookies.set(name, token, { ...attributes, maxAge: MINUTES * 60 });
  return `/sign-in/code?next=${encodeURIComponent(next)}`;
}

/** Who is waiting for the question; null when nobody is, or not any more. */
export async function waiting(cookies: Cookies, now = Date.now()): Promise<accounts.Account | null> {
  const token = cookies.get(name);
  if (!token) return null;
  const row = await database()('sign_in_waits')
    .where({ token_hash: hashToken(token) })
    .where('expires_at', '>', now)
    .first<{ user_id: string } | undefined>('user_id');
  return row ? accounts.read(row.user_id) : null;
}

/** Lets the person in after a right code. */
export async function finish(cookies: Cookies, userId: string, userAgent: string): Promise<void> {
  await database()('sign_in_waits').where({ user_id: userId }).delete();
  cookies.delete(name, attributes);
  await sessions.start(cookies, userId, await studios.landing(userId), userAgent);
}
