import { TOTP } from 'otpauth';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { database } from '$lib/server/database';
import { allow } from '$lib/server/guard';
import * as secondFactor from '$lib/server/second-factor';
import * as sessions from '$lib/server/sessions';
import * as studios from '$lib/server/studios';
import { session as sessionHook } from '$lib/server/hooks/session';
import * as codePage from '../../src/routes/(door)/sign-in/code/+page.server';
import * as signInPage from '../../src/routes/(door)/sign-in/+page.server';
import * as factorPage from '../../src/routes/(app)/profile/second-factor/+page.server';
import { cookieJar, ending, eventFor, makeCast, password, type Cast } from './cast';

let cast: Cast;
beforeAll(async () => (cast = await makeCast()));
afterAll(() => cast.close());

const codeAt = (secret: string, at = Date.now()) => new TOTP({ secret }).generate({ timestamp: at });
const noon = 1_780_000_000_000;

describe('codes of a device', () => {
  it('follow RFC 6238: its SHA-1 test values, last six digits', () => {
    // RFC 6238, appendix B: the secret is the ASCII text 12345678901234567890, codes of eight digits.
    const secret = 'GEZDGNBVGY3TQOJQGEZDGNBVGY3TQOJQ';
    for (const [seconds, code] of [
      [59, '287082'],
      [1111111109, '081804'],
      [2000000000, '279037']
    ] as const)
      expect(codeAt(secret, seconds * 1000)).toBe(code);
  });

  it('count once, one step of the clock either way, and never again', async () => {
    const { id, email } = cast.here.cutter;
    const { secret } = await secondFactor.begin({ id, email });
    expect(await secondFactor.has(id)).toBe(false);
    await expect(secondFactor.confirm({ id, email }, '000000', noon)).rejects.toMatchObject({ status: 400 });
    const codes = await secondFactor.confirm({ id, email }, codeAt(secret, noon), noon);
    expect(new Set(codes).size).toBe(10);
    // The code that turned it on is spent.
    await expect(secondFactor.take({ id, email }, codeAt(secret, noon), noon)).rejects.toMatchObject({
      status: 400
    });
    const late = noon + 60_000;
    expect(await secondFactor.take({ id, email }, codeAt(secret, late - 30_000 + 60_000), late)).toBe(
      'device'
    );
    await expect(
      secondFactor.take({ id, email }, codeAt(secret, late + 120_000), late)
    ).rejects.toMatchObject({ status: 400 });
    await secondFactor.turnOff(id);
  });

  it('taken twice at the same moment let one in', async () => {
    const { id, email } = cast.here.patternMaker;
    const { secret } = await secondFactor.begin({ id, email });
    const [recovery] = await secondFactor.confirm({ id, email }, codeAt(secret, noon), noon);
    const next = noon + 90_000;
    const twice = await Promise.allSettled([
      secondFactor.take({ id, email }, codeAt(secret, next), next),
      secondFactor.take({ id, email }, codeAt(secret, next), next)
    ]);
    expect(twice.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
    const again = await Promise.allSettled([
      secondFactor.take({ id, email }, recovery!.toUpperCase(), next),
      secondFactor.take({ id, email }, recovery!.replaceAll('-', ' '), next)
    ]);
    expect(again.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
    expect(await secondFactor.codesLeft(id)).toBe(9);
    await secondFactor.turnOff(id);
  });

  it('are no guessing game: after eight wrong ones even the right one waits', async () => {
    const { id, email } = cast.elsewhere.cutter;
    const { secret } = await secondFactor.begin({ id, email });
    await secondFactor.confirm({ id, email }, codeAt(secret, noon), noon);
    for (let k = 0; k < 8; k++)
      await expect(secondFactor.take({ id, email }, '000000', noon)).rejects.toMatchObject({ status: 400 });
    const next = noon + 90_000;
    await expect(secondFactor.take({ id, email }, codeAt(secret, next), next)).rejects.toMatchObject({
      status: 429
    });
  });
});

describe('signing in with a second factor', () => {
  const person = () => cast.elsewhere.owner;
  let secret = '';
  let codes: string[] = [];
  beforeEach(async () => {
    const { id, email } = person();
    await secondFactor.turnOff(id);
    secret = (await secondFactor.begin({ id, email })).secret;
    codes = await secondFactor.confirm({ id, email }, codeAt(secret, noon), noon);
  });
  const withPassword = async () => {
    const cookies = cookieJar();
    const end = await ending(() =>
      signInPage.actions.default!(
        eventFor({ form: { email: person().email, password, next: '/orders' }, cookies })
      )
    );
    return { cookies, end };
  };

  it('asks for the code before there is a session, and goes where the person wanted to go', async () => {
    const { cookies, end } = await withPassword();
    expect(end).toMatchObject({ kind: 'redirect', location: '/sign-in/code?next=%2Forders' });
    expect(cookies.get(sessions.cookieName)).toBeUndefined();
    const wrong = await ending(() =>
      codePage.actions.default!(eventFor({ form: { code: '000000', next: '/orders' }, cookies }))
    );
    expect(wrong).toMatchObject({ value: { status: 400 } });
    expect(cookies.get(sessions.cookieName)).toBeUndefined();
    const right = await ending(() =>
      codePage.actions.default!(eventFor({ form: { code: codeAt(secret), next: '/orders' }, cookies }))
    );
    expect(right).toMatchObject({ kind: 'redirect', location: '/orders' });
    expect((await sessions.read(cookies.get(sessions.cookieName)!))?.user.id).toBe(person().id);
  });

  it('lets a recovery code in once, and shows where to make new ones', async () => {
    const { cookies } = await withPassword();
    expect(
      await ending(() => codePage.actions.default!(eventFor({ form: { code: codes[3]! }, cookies })))
    ).toMatchObject({ kind: 'redirect', location: '/profile/second-factor' });
    const again = await withPassword();
    expect(
      await ending(() =>
        codePage.actions.default!(eventFor({ form: { code: codes[3]! }, cookies: again.cookies }))
      )
    ).toMatchObject({ value: { status: 400 } });
  });

  it('without a right password there is nothing to give a code to', async () => {
    expect(
      await ending(() => codePage.actions.default!(eventFor({ form: { code: codeAt(secret) } })))
    ).toMatchObject({ kind: 'redirect', location: '/sign-in?done=late' });
    const { cookies } = await withPassword();
    await database()('sign_in_waits').update({ expires_at: 1 });
    expect(
      await ending(() => codePage.actions.default!(eventFor({ form: { code: codeAt(secret) }, cookies })))
    ).toMatchObject({ kind: 'redirect', location: '/sign-in?done=late' });
  });

  it('is turned off only with password and code', async () => {
    const { locals } = person();
    const off = (form: Record<string, string>) =>
      ending(() => factorPage.actions.turnOff!(eventFor({ locals, form })));
    expect(await off({ password: 'not the words', code: codeAt(secret) })).toMatchObject({
      value: { status: 400 }
    });
    expect(await off({ password, code: '000000' })).toMatchObject({ value: { status: 400 } });
    expect(await secondFactor.has(person().id)).toBe(true);
    expect(await off({ password, code: codeAt(secret) })).toMatchObject({ kind: 'redirect' });
    expect(await secondFactor.has(person().id)).toBe(false);
  });
});

describe('a studio that asks its owners for it', () => {
  it('opens nothing else to an owner without one, and all to the others', async () => {
    const { owner, cutter } = cast.here;
    await studios.requireSecondFactor(owner.scope, true);
    const enter = async (userId: string) => {
      const cookies = cookieJar();
      await sessions.start(cookies, userId, cast.here.id, '');
      const event = eventFor({ cookies });
      await sessionHook({ event, resolve: async () => new Response() });
      return event;
    };
    const barred = await enter(owner.id);
    expect(() => allow(barred, 'orders: see')).toThrow(
      expect.objectContaining({ status: 303, location: '/profile/second-factor?due' })
    );
    expect(allow(await enter(cutter.id), 'orders: see').role).toBe('cutter');
    const { secret } = await secondFactor.begin(owner);
    await secondFactor.confirm(owner, codeAt(secret), Date.now());
    expect(allow(await enter(owner.id), 'orders: see').role).toBe('owner');
    await studios.requireSecondFactor(owner.scope, false);
  });
});
