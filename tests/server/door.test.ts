import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import * as accounts from '$lib/server/accounts';
import { registerAllJobs } from '$lib/server/job-kinds';
import { JobRunner } from '$lib/server/job-runner';
import { returnPath } from '$lib/server/return-path';
import * as sessions from '$lib/server/sessions';
import * as forgotten from '../../src/routes/(door)/forgotten/+page.server';
import * as reset from '../../src/routes/(door)/reset/[token]/+page.server';
import * as signInPage from '../../src/routes/(door)/sign-in/+page.server';
import { POST as signOut } from '../../src/routes/(door)/sign-out/+server';
import * as signUp from '../../src/routes/(door)/sign-up/+page.server';
import * as signUpLink from '../../src/routes/(door)/sign-up/[token]/+page.server';
import { cookieJar, ending, eventFor, makeCast, password, sessionOf, type Call, type Cast } from './cast';

let cast: Cast;
let places = 0;
/** A network address of its own for each test: attempts of one don't count in another. */
let place: string;

beforeEach(async () => {
  cast = await makeCast();
  registerAllJobs();
  place = `198.51.100.${(places += 1)}`;
});
afterEach(async () => {
  await cast.close();
  vi.useRealTimers();
});

/** Posts a form to a page's action; `default` unless named. */
async function post(page: { actions: object }, call: Call, action = 'default') {
  const handler = (page.actions as Record<string, (event: unknown) => unknown>)[action]!;
  return ending(() => handler(eventFor({ place, ...call })));
}
const load = (page: { load: unknown }, call: Call) =>
  ending(() => (page.load as (event: unknown) => unknown)(eventFor({ place, ...call })));

/** Lets the queued jobs run and gives the mails that wait in the outbox, the oldest first. */
async function mails(): Promise<{ template: string; recipient: string; body: string }[]> {
  await new JobRunner().drain();
  return cast.db('messages').orderBy('created_at').orderBy('id').select('template', 'recipient', 'body');
}
const tokenIn = (body: string) => /\/(?:sign-up|reset|invitation)\/([\w-]{43})/.exec(body)![1]!;

const phrase = 'nine copper thimbles sing';

describe('opening a studio', () => {
  const typed = { studioName: 'North Light', name: 'Nora', email: 'Nora@North.example ' };

  it('goes from the form over the mail to a studio with its owner, signed in', async () => {
    const asked = await post(signUp, { form: typed });
    expect(asked).toEqual({ kind: 'value', value: { sentTo: 'nora@north.example' } });
    const [mail] = await mails();
    expect(mail).toMatchObject({ template: 'sign-up', recipient: 'nora@north.example' });
    const token = tokenIn(mail!.body);
    expect(await load(signUpLink, { params: { token } })).toMatchObject({
      value: { name: 'Nora', email: 'nora@north.example', studioName: 'North Light' }
    });
    const cookies = cookieJar();
    expect(await post(signUpLink, { params: { token }, form: { password: phrase }, cookies })).toMatchObject({
      kind: 'redirect',
      location: '/'
    });
    const signedIn = (await sessions.read(cookies.get(sessions.cookieName)!))!;
    expect(signedIn.user.email).toBe('nora@north.example');
    const membership = await cast.db('memberships').where({ user_id: signedIn.user.id });
    expect(membership).toMatchObject([{ studio_id: signedIn.session.studioId, role: 'owner' }]);
    // Single use.
    expect(await post(signUpLink, { params: { token }, form: { password: phrase } })).toMatchObject({
      kind: 'error',
      status: 410
    });
  });

  it('stores no token and makes nothing before the link is used', async () => {
    await post(signUp, { form: typed });
    const token = tokenIn((await mails())[0]!.body);
    expect(JSON.stringify(await cast.db('sign_ups'))).not.toContain(token);
    expect(await accounts.findByEmail('nora@north.example')).toBeNull();
  });

  it('answers the same for an address with an account, which gets another mail', async () => {
    const known = await post(signUp, { form: { ...typed, email: cast.here.owner.email } });
    expect(known).toEqual({ kind: 'value', value: { sentTo: cast.here.owner.email } });
    const before = await cast.db('users').count({ n: '*' });
    const [mail] = await mails();
    expect(mail).toMatchObject({ template: 'sign-up-known', recipient: cast.here.owner.email });
    expect(mail!.body).toContain('/sign-in');
    expect(await cast.db('sign_ups')).toEqual([]);
    expect(await cast.db('users').count({ n: '*' })).toEqual(before);
  });

  it('does the same work in the request, whoever has the address', async () => {
    const queries = async (email: string) => {
      const seen: string[] = [];
      const listen = ({ sql }: { sql: string }) => void seen.push(sql);
      cast.db.on('query', listen);
      await post(signUp, { form: { ...typed, email } });
      await post(forgotten, { form: { email } });
      cast.db.off('query', listen);
      return seen;
    };
    const known = await queries(cast.here.owner.email);
    expect(known.length).toBeGreaterThan(0);
    expect(await queries('stranger@far.example')).toEqual(known);
  });

  it('refuses an expired link, a made-up one, and a common password, keeping no password', async () => {
    await post(signUp, { form: typed });
    const token = tokenIn((await mails())[0]!.body);
    const refused = await post(signUpLink, { params: { token }, form: { password: 'password2026' } });
    expect(refused).toMatchObject({
      value: { status: 400, data: { errors: { password: expect.any(String) } } }
    });
    expect(JSON.stringify(refused)).not.toContain('password2026');
    expect(await load(signUpLink, { params: { token: 'made-up' } })).toMatchObject({ status: 410 });
    vi.useFakeTimers({ toFake: ['Date'] });
    vi.setSystemTime(Date.now() + 86_400_001);
    expect(await load(signUpLink, { params: { token } })).toMatchObject({ status: 410 });
  });

  it('says what is wrong at the field and keeps what was typed', async () => {
    expect(
      await post(signUp, { form: { studioName: ' ', name: 'Nora', email: 'nora.example' } })
    ).toMatchObject({
      value: {
        status: 400,
        data: {
          values: { name: 'Nora', email: 'nora.example' },
          errors: { studioName: expect.any(String), email: expect.any(String) }
        }
      }
    });
    expect(await mails()).toEqual([]);
  });

  it('sends no fifth mail to one address within the hour, and says nothing of it', async () => {
    for (let i = 0; i < 6; i += 1)
      expect(await post(signUp, { form: { ...typed, email: 'often@north.example' } })).toEqual({
        kind: 'value',
        value: { sentTo: 'often@north.example' }
      });
    expect(await mails()).toHaveLength(4);
  });

  it('asks one place to wait after many addresses', async () => {
    let last: unknown;
    for (let i = 0; i < 21; i += 1)
      last = await post(signUp, { form: { ...typed, email: `n${i}@many.example` } });
    expect(last).toMatchObject({ value: { status: 429 } });
  });
});

describe('signing in', () => {
  const form = () => ({ email: cast.here.cutter.email, password });

  it('starts a session in the studio and goes on to where the person wanted', async () => {
    const cookies = cookieJar();
    expect(await post(signInPage, { form: { ...form(), next: '/lays?sort=due' }, cookies })).toMatchObject({
      kind: 'redirect',
      status: 303,
      location: '/lays?sort=due'
    });
    const found = await sessions.read(cookies.get(sessions.cookieName)!);
    expect(found).toMatchObject({ user: { id: cast.here.cutter.id }, session: { studioId: cast.here.id } });
  });

  it('never goes on to another site', async () => {
    const cookies = cookieJar();
    const next = 'https://elsewhere.example/';
    expect(await post(signInPage, { form: { ...form(), next }, cookies })).toMatchObject({ location: '/' });
  });

  it('gives a new token even to a browser that brought one', async () => {
    const cookies = cookieJar({ [sessions.cookieName]: 'planted-by-somebody' });
    await post(signInPage, { form: form(), cookies });
    expect(cookies.get(sessions.cookieName)).not.toBe('planted-by-somebody');
  });

  it('answers a wrong password and an unknown address alike, keeping the address and no password', async () => {
    const wrong = await post(signInPage, { form: { ...form(), password: 'not the right words' } });
    const unknown = await post(signInPage, {
      form: { email: 'nobody@far.example', password: 'not the right words' }
    });
    expect(wrong).toMatchObject({
      value: { status: 400, data: { values: { email: cast.here.cutter.email } } }
    });
    const said = (answer: unknown) => (answer as { value: { data: { errors: object } } }).value.data.errors;
    expect(said(unknown)).toEqual(said(wrong));
    expect(JSON.stringify([wrong, unknown])).not.toContain('not the right words');
  });

  it.each(['known', 'unknown'])('asks to wait after five wrong attempts at a %s address', async (which) => {
    const email = which === 'known' ? cast.here.cutter.email : 'nobody@far.example';
    for (let i = 0; i < 5; i += 1)
      expect(await post(signInPage, { form: { email, password: `wrong ${i}` } })).toMatchObject({
        value: { status: 400 }
      });
    const right = await post(signInPage, { form: { email, password } });
    expect(right).toMatchObject({ value: { status: 429 } });
  });

  it('forgets the wrong attempts after a right one', async () => {
    for (let round = 0; round < 3; round += 1) {
      for (let i = 0; i < 4; i += 1) await post(signInPage, { form: { ...form(), password: 'wrong' } });
      expect(await post(signInPage, { form: form() })).toMatchObject({ kind: 'redirect' });
    }
  });

  it('is written down, done or failed, without the password', async () => {
    await post(signInPage, { form: { ...form(), password: 'not the right words' } });
    await post(signInPage, { form: form() });
    const entries = await cast
      .db('audit_entries')
      .orderBy('at')
      .orderBy('id')
      .select('action', 'detail', 'subject');
    expect(entries.map(({ action }: { action: string }) => action).sort()).toEqual([
      'sign-in: done',
      'sign-in: failed'
    ]);
    expect(JSON.stringify(entries)).not.toContain('words');
  });

  it('ends at signing out, on the server too', async () => {
    const cookies = await sessionOf(cast.here.cutter);
    const token = cookies.get(sessions.cookieName)!;
    await ending(() => signOut(eventFor({ cookies, method: 'POST' })));
    expect(cookies.get(sessions.cookieName)).toBeUndefined();
    expect(await sessions.read(token)).toBeNull();
  });
});

describe('a forgotten password', () => {
  // Each test asks for another person: the limit of mails to one address counts across them.
  const ask = (email: string) => post(forgotten, { form: { email } });

  it('is replaced over a mail; every session ends, every other link too, and a mail tells of it', async () => {
    const old = (await sessionOf(cast.here.patternMaker)).get(sessions.cookieName)!;
    await ask(cast.here.patternMaker.email);
    await ask(cast.here.patternMaker.email);
    const [first, second] = (await mails()).map(({ body }) => tokenIn(body));
    expect(await post(reset, { params: { token: second! }, form: { password: phrase } })).toMatchObject({
      kind: 'redirect',
      location: '/sign-in?done=reset'
    });
    expect(await sessions.read(old)).toBeNull();
    expect(await load(reset, { params: { token: first! } })).toMatchObject({ status: 410 });
    expect((await mails()).at(-1)).toMatchObject({ template: 'password-changed' });
    expect(await accounts.withPassword(cast.here.patternMaker.email, phrase)).not.toBeNull();
    expect(await accounts.withPassword(cast.here.patternMaker.email, password)).toBeNull();
  });

  it('works once even when the link is used twice at the same moment', async () => {
    await ask(cast.here.cutter.email);
    const token = tokenIn((await mails())[0]!.body);
    const both = await Promise.all(
      ['first phrase of kettles', 'other phrase of kettles'].map((password) =>
        post(reset, { params: { token }, form: { password } })
      )
    );
    expect(both.map(({ kind }) => kind).sort()).toEqual(['error', 'redirect']);
  });

  it('answers the same for an unknown address, which gets no mail', async () => {
    const known = await ask(cast.elsewhere.owner.email);
    const unknown = await ask('nobody@far.example');
    expect(JSON.stringify(unknown).replace('nobody@far.example', cast.elsewhere.owner.email)).toBe(
      JSON.stringify(known)
    );
    expect((await mails()).map(({ recipient }) => recipient)).toEqual([cast.elsewhere.owner.email]);
  });

  it('has a link that expires within the hour', async () => {
    await ask(cast.elsewhere.cutter.email);
    const token = tokenIn((await mails())[0]!.body);
    vi.useFakeTimers({ toFake: ['Date'] });
    vi.setSystemTime(Date.now() + 3_600_001);
    expect(await post(reset, { params: { token }, form: { password: phrase } })).toMatchObject({
      status: 410
    });
  });
});

describe('a return path', () => {
  it.each(['/', '/orders', '/lays/1?tab=check', '/people?done=role'])('may be %s', (path) =>
    expect(returnPath(path)).toBe(path)
  );

  it.each([
    'https://elsewhere.example',
    '//elsewhere.example',
    '/\\elsewhere.example',
    '/\t/elsewhere.example',
    '/..//elsewhere.example',
    '/a/../..//elsewhere.example',
    'javascript:alert(1)',
    'orders',
    '',
    '/sign-out',
    '/sign-in?next=/x',
    null
  ])('may not be %s', (path) => expect(returnPath(path, '/fallback')).toBe('/fallback'));
});
