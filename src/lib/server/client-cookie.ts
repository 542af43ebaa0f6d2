import type { Cookies } from '@sveltejs/kit';
import { config } from './config';

/*
 * Which client's page to come back to from the card host: kept in the browser for an hour, so that the token of the page never goes
 * to anybody else.
 */

const name = 'warpwise-client';
const options = { path: '/c', httpOnly: true, sameSite: 'lax', secure: config.secureCookies } as const;

export const clientCookie = {
  set: (cookies: Cookies, token: string): void => cookies.set(name, token, { ...options, maxAge: 3600 }),
  /** The token, if there is one that looks like one; it opens nothing by itself. */
  get(cookies: Cookies): string | null {
    const token = cookies.get(name) ?? '';
    return /^[\w-]{43}$/.test(token) ? token : null;
  }
};
