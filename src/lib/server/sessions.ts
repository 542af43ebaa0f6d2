import type { Cookies } from '@sveltejs/kit';
import { Lucia, TimeSpan, type Adapter } from 'lucia';
import { config } from './config';
import { database } from './database';
import { newId } from './ids';
import { notFound } from './problem';
import { hashToken, newToken } from './tokens';

/*
 * Sessions. The cookie holds a random token; the table holds its hash. Three limits: lucia's rolling expiry, an idle
 * limit counted from the last use, and an absolute one counted from the sign-in, which no use prolongs.
 */

const day = 86_400_000;
export const idleLimit = 14 * day;
export const absoluteLimit = 90 * day;
/** Lucia renews in the second half of its span: twice the idle limit, so that it never ends a session in use. */
const rollingSpan = new TimeSpan((2 * idleLimit) / day, 'd');
/** The last use is written at most this often. */
const touchEvery = 5 * 60_000;

interface SessionAttributes {
  public_id: string;
  studio_id: string | null;
  user_agent: string;
  created_at: number;
  last_used_at: number;
}

interface UserAttributes {
  name: string;
  email: string;
}

interface SessionRow extends SessionAttributes {
  id: string;
  user_id: string;
  expires_at: number;
}

declare module 'lucia' {
  interface Register {
    Lucia: typeof lucia;
    DatabaseSessionAttributes: SessionAttributes;
    DatabaseUserAttributes: UserAttributes;
  }
}

function attributesOf({ public_id, studio_id, user_agent, created_at, last_used_at }: SessionRow) {
  return { public_id, studio_id, user_agent, created_at, last_used_at };
}

/** Hashes the id at every call about one session, and hands back the raw id that it was given. */
const adapter: Adapter = {
  async getSessionAndUser(token) {
    const row = await database()('sessions')
      .where({ id: hashToken(token) })
      .first<SessionRow | undefined>();
    if (!row) return [null, null];
    const user = await database()('users')
      .where({ id: row.user_id })
      .first<{ id: string; name: string; email: string } | undefined>('id', 'name', 'email');
    return [
      {
        id: token,
        userId: row.user_id,
        expiresAt: new Date(row.expires_at),
        attributes: attributesOf(row)
      },
      user ? { id: user.id, attributes: { name: user.name, email: user.email } } : null
    ];
  },
  async getUserSessions(userId) {
    const rows = await database()('sessions').where({ user_id: userId }).select<SessionRow[]>('*');
    // The tokens are unknown; what stands in for them opens nothing.
    return rows.map((row) => ({
      id: row.public_id,
      userId: row.user_id,
      expiresAt: new Date(row.expires_at),
      attributes: attributesOf(row)
    }));
  },
  async setSession({ id, userId, expiresAt, attributes }) {
    await database()('sessions').insert({
      ...attributes,
      id: hashToken(id),
      user_id: userId,
      expires_at: expiresAt.getTime()
    });
  },
  async updateSessionExpiration(token, expiresAt) {
    await database()('sessions')
      .where({ id: hashToken(token) })
      .update({ expires_at: expiresAt.getTime() });
  },
  async deleteSession(token) {
    await database()('sessions')
      .where({ id: hashToken(token) })
      .delete();
  },
  async deleteUserSessions(userId) {
    await database()('sessions').where({ user_id: userId }).delete();
  },
  async deleteExpiredSessions() {
    const now = Date.now();
    await database()('sessions')
      .where('expires_at', '<=', now)
      .orWhere('created_at', '<=', now - absoluteLimit)
      .orWhere('last_used_at', '<=', now - idleLimit)
      .delete();
  }
};

const lucia = new Lucia(adapter, {
  sessionExpiresIn: rollingSpan,
  sessionCookie: {
    // The prefix makes the browser insist on Secure, on path / and on no domain.
    name: config.secureCookies ? '__Host-warpwise' : 'warpwise',
    attributes: { secure: config.secureCookies, sameSite: 'lax', path: '/' }
  },
  getSessionAttributes: (row) => ({
    publicId: row.public_id,
    studioId: row.studio_id,
    userAgent: row.user_agent,
    createdAt: row.created_at,
    lastUsedAt: row.last_used_at
  }),
  getUserAttributes: ({ name, email }) => ({ name, email })
});

export const cookieName = lucia.sessionCookieName;

/** Who a token belongs to; null for an unknown, expired or ended session. `fresh`: the cookie should be set again. */
export async function read(token: string): Promise<{
  user: { id: string; name: string; email: string };
  session: { publicId: string; studioId: string | null };
  fresh: boolean;
} | null> {
  const { session, user } = await lucia.validateSession(token);
  if (!session) return null;
  const now = Date.now();
  if (now >= session.createdAt + absoluteLimit || now >= session.lastUsedAt + idleLimit) {
    await lucia.invalidateSession(token);
    return null;
  }
  if (now - session.lastUsedAt >= touchEvery)
    await database()('sessions')
      .where({ id: hashToken(token) })
      .update({ last_used_at: now });
  return {
    user: { id: user.id, name: user.name, email: user.email },
    session: { publicId: session.publicId, studioId: session.studioId },
    fresh: session.fresh
  };
}

/**
 * Starts a session with a token of its own, whatever the browser brought along, and sets the cookie. An older session
 * of the same browser ends.
 */
export async function start(
  cookies: Cookies,
  userId: string,
  studioId: string | null,
  userAgent: string
): Promise<void> {
  const old = cookies.get(cookieName);
  if (old) await lucia.invalidateSession(old);
  const now = Date.now();
  const { token } = newToken();
  await lucia.createSession(
    userId,
    {
      public_id: newId(now),
      studio_id: studioId,
      user_agent: userAgent.slice(0, 300),
      created_at: now,
      last_used_at: now
    },
    { sessionId: token }
  );
  setCookie(cookies, token);
}

/** Sets the cookie (again) for a session that goes on. */
export function setCookie(cookies: Cookies, token: string): void {
  const { name, value, attributes } = lucia.createSessionCookie(token);
  cookies.set(name, value, { ...attributes, path: '/' });
}

/** Takes the cookie away. */
export function clearCookie(cookies: Cookies): void {
  const { name, value, attributes } = lucia.createBlankSessionCookie();
  cookies.set(name, value, { ...attributes, path: '/' });
}

/** Ends the session that the browser brought along. */
export async function end(cookies: Cookies): Promise<void> {
  const token = cookies.get(cookieName);
  if (token) await lucia.invalidateSession(token);
  clearCookie(cookies);
}

/** Ends every session of a person, except one. */
export async function endAll(userId: string, exceptPublicId: string | null = null): Promise<void> {
  if (exceptPublicId === null) await lucia.invalidateUserSessions(userId);
  else
    await database()('sessions').where({ user_id: userId }).whereNot({ public_id: exceptPublicId }).delete();
}

/** Ends one listed session of the person's own. */
export async function endListed(userId: string, publicId: string): Promise<void> {
  const ended = await database()('sessions').where({ user_id: userId, public_id: publicId }).delete();
  if (ended === 0) throw notFound('session');
}

export interface ListedSession {
  readonly publicId: string;
  readonly userAgent: string;
  readonly createdAt: number;
  readonly lastUsedAt: number;
  readonly studioName: string | null;
}

/** A person's live sessions, the last used first. */
export async function list(userId: string): Promise<ListedSession[]> {
  const now = Date.now();
  return database()('sessions')
    .leftJoin('studios', 'studios.id', 'sessions.studio_id')
    .where('sessions.user_id', userId)
    .where('sessions.expires_at', '>', now)
    .where('sessions.created_at', '>', now - absoluteLimit)
    .where('sessions.last_used_at', '>', now - idleLimit)
    .orderBy('sessions.last_used_at', 'desc')
    .select<ListedSession[]>({
      publicId: 'sessions.public_id',
      userAgent: 'sessions.user_agent',
      createdAt: 'sessions.created_at',
      lastUsedAt: 'sessions.last_used_at',
      studioName: 'studios.name'
    });
}

/** Makes a studio the one that the session works in. Whether the person belongs to it is asked by the caller. */
export async function workIn(publicId: string, studioId: string): Promise<void> {
  await database()('sessions').where({ public_id: publicId }).update({ studio_id: studioId });
}

/** Deletes what has expired; asked for once an hour. */
export async function sweep(): Promise<void> {
  await lucia.deleteExpiredSessions();
}

/** Whether a session still goes on: for what stays open longer than a request. */
export async function isOpen(publicId: string, now = Date.now()): Promise<boolean> {
  const row = await database()('sessions')
    .where({ public_id: publicId })
    .where('expires_at', '>', now)
    .where('created_at', '>', now - absoluteLimit)
    .where('last_used_at', '>', now - idleLimit)
    .first('public_id');
  return row !== undefined;
}
