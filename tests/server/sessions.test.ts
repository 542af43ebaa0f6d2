import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import { session as sessionHook } from '$lib/server/hooks/session';
import * as sessions from '$lib/server/sessions';
import { hashToken } from '$lib/server/tokens';
import { cookieJar, eventFor, makeCast, sessionOf, type Cast } from './cast';

const day = 86_400_000;
let cast: Cast;
beforeAll(async () => {
  cast = await makeCast();
});
afterAll(() => cast.close());
afterEach(() => vi.useRealTimers());

const tokenOf = (jar: ReturnType<typeof cookieJar>) => jar.get(sessions.cookieName)!;

describe('a session', () => {
  it('stores only the hash of what the cookie holds', async () => {
    const token = tokenOf(await sessionOf(cast.here.owner));
    expect(Buffer.from(token, 'base64url')).toHaveLength(32);
    const rows = await cast.db('sessions').where({ user_id: cast.here.owner.id });
    expect(JSON.stringify(rows)).not.toContain(token);
    expect(rows.map((row: { id: string }) => row.id)).toContain(hashToken(token));
  });

  it('sets a cookie that scripts and other sites do not get', async () => {
    const jar = await sessionOf(cast.here.owner);
    expect(jar.options.get(sessions.cookieName)).toMatchObject({
      httpOnly: true,
      sameSite: 'lax',
      path: '/'
    });
  });

  it('is renewed in use, keeps its token, and a new sign-in afterwards has a token of its own', async () => {
    vi.useFakeTimers({ toFake: ['Date'] });
    const jar = await sessionOf(cast.here.cutter);
    const token = tokenOf(jar);
    for (const days of [10, 10]) {
      vi.setSystemTime(Date.now() + days * day);
      expect(await sessions.read(token)).not.toBeNull();
    }
    // 20 days in: past half of lucia's span, so the second reading renewed it.
    vi.setSystemTime(Date.now() + 13 * day);
    const renewed = await sessions.read(token);
    expect(renewed?.user.id).toBe(cast.here.cutter.id);
    await sessions.start(jar, cast.here.cutter.id, cast.here.id, 'again');
    expect(tokenOf(jar)).not.toBe(token);
    expect(await sessions.read(token)).toBeNull();
    expect(await sessions.read(tokenOf(jar))).not.toBeNull();
  });

  it('ends after the idle limit, and not before', async () => {
    vi.useFakeTimers({ toFake: ['Date'] });
    const token = tokenOf(await sessionOf(cast.here.owner));
    vi.setSystemTime(Date.now() + sessions.idleLimit - 1);
    expect(await sessions.read(token)).not.toBeNull();
    vi.setSystemTime(Date.now() + sessions.idleLimit);
    expect(await sessions.read(token)).toBeNull();
    expect(await cast.db('sessions').where({ id: hashToken(token) })).toHaveLength(0);
  });

  it('ends at the absolute limit however much it is used', async () => {
    vi.useFakeTimers({ toFake: ['Date'] });
    const started = Date.now();
    const token = tokenOf(await sessionOf(cast.here.owner));
    for (let at = started; at < started + sessions.absoluteLimit; at += 5 * day) {
      vi.setSystemTime(at);
      expect(await sessions.read(token)).not.toBeNull();
    }
    vi.setSystemTime(started + sessions.absoluteLimit);
    expect(await sessions.read(token)).toBeNull();
  });

  it('is listed under a public id that opens nothing, and ended by it', async () => {
    const one = tokenOf(await sessionOf(cast.elsewhere.owner));
    const two = tokenOf(await sessionOf(cast.elsewhere.owner));
    const listed = await sessions.list(cast.elsewhere.owner.id);
    expect(listed).toHaveLength(2);
    for (const { publicId } of listed) expect(await sessions.read(publicId)).toBeNull();
    const { session } = (await sessions.read(one))!;
    await expect(sessions.endListed(cast.here.owner.id, session.publicId)).rejects.toMatchObject({
      status: 404
    });
    await sessions.endListed(cast.elsewhere.owner.id, session.publicId);
    expect(await sessions.read(one)).toBeNull();
    expect(await sessions.read(two)).not.toBeNull();
  });

  it('ends everywhere, or everywhere else', async () => {
    const tokens = [];
    for (let i = 0; i < 3; i += 1) tokens.push(tokenOf(await sessionOf(cast.elsewhere.cutter)));
    const kept = (await sessions.read(tokens[0]!))!.session.publicId;
    await sessions.endAll(cast.elsewhere.cutter.id, kept);
    expect(await Promise.all(tokens.map(async (token) => (await sessions.read(token)) !== null))).toEqual([
      true,
      false,
      false
    ]);
    await sessions.endAll(cast.elsewhere.cutter.id);
    expect(await sessions.read(tokens[0]!)).toBeNull();
  });
});

describe('the session hook', () => {
  const through = async (jar: ReturnType<typeof cookieJar>) => {
    const event = eventFor({ cookies: jar });
    await sessionHook({ event, resolve: async () => new Response('ok') });
    return event.locals;
  };

  it('knows the person, the studio and the role of a cookie', async () => {
    const locals = await through(await sessionOf(cast.here.patternMaker));
    expect(locals.person.user?.email).toBe('piet@linden.example');
    expect(locals.scope).toEqual({
      studio: cast.here.id,
      user: cast.here.patternMaker.id,
      role: 'patternMaker'
    });
    expect(locals.studio?.name).toBe('Linden Row');
  });

  it('takes an unknown cookie away', async () => {
    const jar = cookieJar({ [sessions.cookieName]: 'made-up' });
    const locals = await through(jar);
    expect(locals.person.user).toBeNull();
    expect(jar.get(sessions.cookieName)).toBeUndefined();
  });

  it('gives no scope in a studio that the person does not belong to', async () => {
    const jar = cookieJar();
    await sessions.start(jar, cast.here.owner.id, cast.elsewhere.id, '');
    const locals = await through(jar);
    expect(locals.person.user?.id).toBe(cast.here.owner.id);
    expect(locals.scope).toBeNull();
  });
});
