import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import * as accounts from '$lib/server/accounts';
import { session as sessionHook } from '$lib/server/hooks/session';
import * as invitations from '$lib/server/invitations';
import { registerAllJobs } from '$lib/server/job-kinds';
import { JobRunner } from '$lib/server/job-runner';
import * as people from '$lib/server/people';
import * as sessions from '$lib/server/sessions';
import * as studios from '$lib/server/studios';
import * as invitationPage from '../../src/routes/(door)/invitation/[token]/+page.server';
import * as newAddress from '../../src/routes/(door)/new-address/[token]/+page.server';
import * as peoplePage from '../../src/routes/(app)/people/+page.server';
import * as record from '../../src/routes/(app)/people/record/+page.server';
import * as profile from '../../src/routes/(app)/profile/+page.server';
import * as settings from '../../src/routes/(app)/settings/+page.server';
import * as studiosPage from '../../src/routes/(app)/studios/+page.server';
import {
  cookieJar,
  ending,
  eventFor,
  makeCast,
  password,
  sessionOf,
  type Call,
  type Cast,
  type Member
} from './cast';

let cast: Cast;
let places = 0;
let place: string;
beforeEach(async () => {
  cast = await makeCast();
  registerAllJobs();
  place = `203.0.113.${(places += 1)}`;
});
afterEach(async () => {
  await cast.close();
  vi.useRealTimers();
});

const post = (page: { actions: object }, action: string, call: Call) =>
  ending(() =>
    (page.actions as Record<string, (event: unknown) => unknown>)[action]!(eventFor({ place, ...call }))
  );
const load = (page: { load: unknown }, call: Call) =>
  ending(() => (page.load as (event: unknown) => unknown)(eventFor({ place, ...call })));
const messages = () =>
  cast
    .db('messages')
    .orderBy('created_at')
    .orderBy('id')
    .select('template', 'recipient', 'body', 'studio_id');
const tokenIn = (body: string) => /\/(?:invitation|new-address)\/([\w-]{43})/.exec(body)![1]!;
const phrase = 'nine copper thimbles sing';

async function invited(email: string, role: 'owner' | 'patternMaker' | 'cutter' = 'cutter'): Promise<string> {
  await invitations.create(cast.here.owner.scope, { email, role });
  const sent = await messages();
  return tokenIn(sent.at(-1).body);
}

/** Locals with a real session, so that actions on sessions find it. */
async function signedIn(person: Member) {
  const cookies = await sessionOf(person);
  const event = eventFor({ cookies });
  await sessionHook({ event, resolve: async () => new Response() });
  return { locals: event.locals, cookies };
}

describe('an invitation', () => {
  it('makes an account, a member with the role, and a session', async () => {
    const sent = await post(peoplePage, 'invite', {
      locals: cast.here.owner.locals,
      form: { email: 'New@Hand.example', role: 'cutter' }
    });
    expect(sent).toMatchObject({ kind: 'redirect', location: '/people?done=invited' });
    const [mail] = await messages();
    expect(mail).toMatchObject({ recipient: 'new@hand.example', studio_id: cast.here.id });
    const token = tokenIn(mail.body);
    expect(JSON.stringify(await cast.db('invitations'))).not.toContain(token);
    expect(await load(invitationPage, { params: { token } })).toMatchObject({
      value: { way: 'new account', studioName: 'Linden Row', role: 'cutter' }
    });
    const cookies = cookieJar();
    const joined = await post(invitationPage, 'join', {
      params: { token },
      form: { name: 'Hanna', password: phrase },
      cookies
    });
    expect(joined).toMatchObject({ kind: 'redirect' });
    const found = (await sessions.read(cookies.get(sessions.cookieName)!))!;
    expect(await studios.enter(cast.here.id, found.user.id)).toMatchObject({ scope: { role: 'cutter' } });
    expect(await invitations.list(cast.here.owner.scope)).toEqual([]);
    expect(await load(invitationPage, { params: { token } })).toMatchObject({ status: 410 });
  });

  it('for an account is accepted only by the person who is signed in to it', async () => {
    const token = await invited(cast.elsewhere.cutter.email, 'patternMaker');
    const call = { params: { token } };
    expect(await load(invitationPage, call)).toMatchObject({ value: { way: 'sign in' } });
    expect(await post(invitationPage, 'accept', call)).toMatchObject({
      kind: 'redirect',
      location: /^\/sign-in/
    });
    expect(
      await post(invitationPage, 'join', { ...call, form: { name: 'Thief', password: phrase } })
    ).toMatchObject({ kind: 'error', status: 409 });
    expect(await accounts.withPassword(cast.elsewhere.cutter.email, phrase)).toBeNull();

    const other = await signedIn(cast.elsewhere.owner);
    expect(await load(invitationPage, { ...call, ...other })).toMatchObject({
      value: { way: 'other account' }
    });
    expect(await post(invitationPage, 'accept', { ...call, ...other })).toMatchObject({ status: 403 });

    const right = await signedIn(cast.elsewhere.cutter);
    expect(await post(invitationPage, 'accept', { ...call, ...right })).toMatchObject({ location: '/' });
    const open = await studios.listOf(cast.elsewhere.cutter.id);
    expect(open.map(({ name, role }) => [name, role])).toEqual([
      ['Harbour Bench', 'cutter'],
      ['Linden Row', 'patternMaker']
    ]);
  });

  it('stops working when it is taken back, replaced, or a week old', async () => {
    const first = await invited('late@hand.example');
    const second = await invited('late@hand.example');
    expect(await load(invitationPage, { params: { token: first } })).toMatchObject({ status: 410 });
    const [listed] = await invitations.list(cast.here.owner.scope);
    await expect(invitations.revoke(cast.elsewhere.owner.scope, listed!.id)).rejects.toMatchObject({
      status: 404
    });
    await invitations.revoke(cast.here.owner.scope, listed!.id);
    expect(await load(invitationPage, { params: { token: second } })).toMatchObject({ status: 410 });
    const third = await invited('late@hand.example');
    vi.useFakeTimers({ toFake: ['Date'] });
    vi.setSystemTime(Date.now() + 7 * 86_400_000 + 1);
    expect(await load(invitationPage, { params: { token: third } })).toMatchObject({ status: 410 });
  });

  it('never changes the role of somebody who is a member already', async () => {
    await expect(
      invitations.create(cast.here.owner.scope, { email: cast.here.cutter.email, role: 'owner' })
    ).rejects.toMatchObject({ status: 409 });
    const token = await invited(cast.elsewhere.owner.email, 'cutter');
    await studios.join(cast.here.id, cast.elsewhere.owner.id, 'owner');
    const user = (await signedIn(cast.elsewhere.owner)).locals.person.user!;
    await invitations.acceptAs(token, user);
    expect((await studios.enter(cast.here.id, user.id))!.scope.role).toBe('owner');
  });
});

describe('a role', () => {
  it('counts at the next request, and the change is written down', async () => {
    const { cookies } = await signedIn(cast.here.cutter);
    await people.changeRole(cast.here.owner.scope, cast.here.cutter.id, 'patternMaker');
    const event = eventFor({ cookies });
    await sessionHook({ event, resolve: async () => new Response() });
    expect(event.locals.scope?.role).toBe('patternMaker');
    const [entry] = await cast.db('audit_entries').where({ action: 'person: role changed' });
    expect(JSON.parse(entry.detail)).toEqual({ from: 'cutter', to: 'patternMaker' });
  });

  it('of the last owner stays, and the last owner is not shut out', async () => {
    const { owner, cutter } = cast.here;
    for (const [action, form] of [
      ['changeRole', { userId: owner.id, role: 'cutter' }],
      ['disable', { userId: owner.id }]
    ] as const)
      expect(await post(peoplePage, action, { locals: owner.locals, form })).toMatchObject({
        value: { status: 409, data: { errors: { [owner.id]: expect.stringContaining('owner') } } }
      });
    await people.changeRole(owner.scope, cutter.id, 'owner');
    await people.changeRole(owner.scope, owner.id, 'cutter');
    // A disabled owner does not count as one.
    await people.changeRole(cutter.scope, owner.id, 'owner');
    await people.disable(cutter.scope, owner.id);
    await expect(people.changeRole(cutter.scope, cutter.id, 'cutter')).rejects.toMatchObject({
      type: 'last-owner'
    });
  });

  it('of two owners who give it up at once, one stays', async () => {
    const { owner, cutter } = cast.here;
    await people.changeRole(owner.scope, cutter.id, 'owner');
    const both = await Promise.allSettled([
      people.changeRole(owner.scope, owner.id, 'cutter'),
      people.changeRole(cutter.scope, cutter.id, 'cutter')
    ]);
    expect(both.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
  });

  it("of another studio's member is nobody's business", async () => {
    const { owner } = cast.here;
    for (const deed of [
      people.changeRole(owner.scope, cast.elsewhere.cutter.id, 'owner'),
      people.disable(owner.scope, cast.elsewhere.cutter.id),
      people.enable(owner.scope, cast.elsewhere.cutter.id)
    ])
      await expect(deed).rejects.toMatchObject({ status: 404 });
    expect(await people.list(owner.scope)).toHaveLength(3);
  });
});

describe('shutting out', () => {
  it('ends the sessions in this studio only, and letting in again works', async () => {
    const { owner, cutter } = cast.here;
    await studios.join(cast.elsewhere.id, cutter.id, 'cutter');
    const here = (await sessionOf(cutter)).get(sessions.cookieName)!;
    const jar = cookieJar();
    await sessions.start(jar, cutter.id, cast.elsewhere.id, '');
    await people.disable(owner.scope, cutter.id);
    expect(await sessions.read(here)).toBeNull();
    expect(await sessions.read(jar.get(sessions.cookieName)!)).not.toBeNull();
    expect(await studios.enter(cast.here.id, cutter.id)).toBeNull();
    expect(await studios.landing(cutter.id)).toBe(cast.elsewhere.id);
    await people.enable(owner.scope, cutter.id);
    expect(await studios.enter(cast.here.id, cutter.id)).not.toBeNull();
  });
});

describe('several studios', () => {
  it('are switched between, and others are refused', async () => {
    const { cutter } = cast.here;
    await studios.join(cast.elsewhere.id, cutter.id, 'patternMaker');
    const { locals, cookies } = await signedIn(cutter);
    expect(await post(studiosPage, 'enter', { locals, form: { id: cast.elsewhere.id } })).toMatchObject({
      kind: 'redirect'
    });
    const event = eventFor({ cookies });
    await sessionHook({ event, resolve: async () => new Response() });
    expect(event.locals.scope).toMatchObject({ studio: cast.elsewhere.id, role: 'patternMaker' });

    const stranger = await signedIn(cast.here.patternMaker);
    expect(
      await post(studiosPage, 'enter', { locals: stranger.locals, form: { id: cast.elsewhere.id } })
    ).toMatchObject({ value: { status: 404 } });
  });

  it('can be opened by anybody who has an account, who then owns it', async () => {
    const { locals } = await signedIn(cast.here.cutter);
    await post(studiosPage, 'open', { locals, form: { name: 'Own Bench' } });
    expect(await studios.listOf(cast.here.cutter.id)).toMatchObject([
      { name: 'Linden Row', role: 'cutter' },
      { name: 'Own Bench', role: 'owner' }
    ]);
  });
});

describe('the profile', () => {
  it('changes the password only with the present one, and ends the other sessions', async () => {
    const { locals } = await signedIn(cast.here.cutter);
    const other = (await sessionOf(cast.here.cutter)).get(sessions.cookieName)!;
    expect(
      await post(profile, 'changePassword', { locals, form: { password: 'wrong', newPassword: phrase } })
    ).toMatchObject({ value: { data: { errors: { password: expect.any(String) } } } });
    expect(
      await post(profile, 'changePassword', { locals, form: { password, newPassword: 'qwertyuiop12' } })
    ).toMatchObject({ value: { data: { errors: { newPassword: expect.any(String) } } } });
    expect(
      await post(profile, 'changePassword', { locals, form: { password, newPassword: phrase } })
    ).toMatchObject({
      location: '/profile?done=password'
    });
    expect(await sessions.read(other)).toBeNull();
    expect(await sessions.isOpen(locals.person.session!.publicId)).toBe(true);
    expect(await accounts.withPassword(cast.here.cutter.email, phrase)).not.toBeNull();
    expect((await messages()).at(-1)).toMatchObject({ template: 'password-changed' });
  });

  it('lets nobody try present passwords for ever', async () => {
    const { locals } = await signedIn(cast.here.patternMaker);
    let last: unknown;
    for (let i = 0; i < 11; i += 1)
      last = await post(profile, 'changePassword', {
        locals,
        form: { password: `wrong ${i}`, newPassword: phrase }
      });
    expect(last).toMatchObject({
      value: { data: { errors: { password: expect.stringContaining('Wait') } } }
    });
  });

  it('changes the address only over the password and the new mailbox, and tells the old one', async () => {
    const { locals } = await signedIn(cast.here.cutter);
    const ask = (form: Record<string, string>) => post(profile, 'changeAddress', { locals, form });
    expect(await ask({ email: 'cato@new.example', addressPassword: 'wrong' })).toMatchObject({
      value: {
        data: { values: { email: 'cato@new.example' }, errors: { addressPassword: expect.any(String) } }
      }
    });
    expect(await ask({ email: 'cato@new.example', addressPassword: password })).toMatchObject({
      location: '/profile?done=address-asked'
    });
    await new JobRunner().drain();
    const sent = await messages();
    expect(
      sent
        .map(({ template, recipient }: { template: string; recipient: string }) => [template, recipient])
        .sort()
    ).toEqual([
      ['address-change-asked', cast.here.cutter.email],
      ['new-address', 'cato@new.example']
    ]);
    const { body } = sent.find(({ template }: { template: string }) => template === 'new-address');
    const token = tokenIn(body);
    expect(await accounts.findByEmail('cato@new.example')).toBeNull();
    const stranger = await signedIn(cast.elsewhere.owner);
    expect(await post(newAddress, 'default', { ...stranger, params: { token } })).toMatchObject({
      status: 410
    });
    expect(await post(newAddress, 'default', { locals, params: { token } })).toMatchObject({
      kind: 'redirect'
    });
    expect((await accounts.findByEmail('cato@new.example'))?.id).toBe(cast.here.cutter.id);
    expect((await messages()).at(-1)).toMatchObject({
      template: 'address-changed',
      recipient: cast.here.cutter.email
    });
  });

  it('answers the same for an address that has an account', async () => {
    const { locals } = await signedIn(cast.here.owner);
    const answer = await post(profile, 'changeAddress', {
      locals,
      form: { email: cast.elsewhere.owner.email, addressPassword: password }
    });
    expect(answer).toMatchObject({ location: '/profile?done=address-asked' });
    await new JobRunner().drain();
    expect(await cast.db('address_changes')).toEqual([]);
    const templates = (await messages()).map(({ template }: { template: string }) => template);
    expect(templates.sort()).toEqual(['address-change-asked', 'new-address-taken']);
  });

  it('lists the sessions, ends one, the others, or all', async () => {
    const { locals, cookies } = await signedIn(cast.here.cutter);
    await sessionOf(cast.here.cutter);
    await sessionOf(cast.here.cutter);
    const page = await load(profile, { locals });
    const listed = (page as { value: { sessions: { publicId: string; isThis: boolean }[] } }).value.sessions;
    expect(listed.map(({ isThis }) => isThis).sort()).toEqual([false, false, true]);
    const { publicId } = listed.find(({ isThis }) => !isThis)!;
    await post(profile, 'endSession', { locals, form: { publicId } });
    expect(await sessions.list(cast.here.cutter.id)).toHaveLength(2);
    expect(await post(profile, 'endSession', { locals, form: { publicId } })).toMatchObject({
      value: { status: 404 }
    });
    await post(profile, 'endOthers', { locals });
    expect(await sessions.list(cast.here.cutter.id)).toMatchObject([
      { publicId: locals.person.session!.publicId }
    ]);
    await post(profile, 'endAll', { locals, cookies });
    expect(await sessions.list(cast.here.cutter.id)).toEqual([]);
  });
});

describe('the record', () => {
  it('tells who did what to whom, of this studio only, the newest first', async () => {
    const { owner, cutter } = cast.here;
    await people.changeRole(owner.scope, cutter.id, 'patternMaker');
    await invited('late@hand.example');
    await people.disable(cast.elsewhere.owner.scope, cast.elsewhere.cutter.id);
    const page = await load(record, { locals: owner.locals });
    const { entries } = (page as { value: { entries: Record<string, unknown>[] } }).value;
    expect(entries.map(({ personName, action, about }) => [personName, action, about])).toEqual([
      ['Odile', 'person: invited', 'late@hand.example'],
      ['Odile', 'person: role changed', 'Cato']
    ]);
  });
});

describe('the settings of a studio', () => {
  it('are saved by the owner, and refused at the field', async () => {
    const { locals } = cast.here.owner;
    const form = { name: 'Linden Row', currency: 'GBP', lengthUnit: 'in', timeZone: 'Europe/London' };
    expect(await post(settings, 'default', { locals, form })).toMatchObject({ location: '/settings?saved' });
    expect(await studios.read(cast.here.owner.scope)).toMatchObject({ currency: 'GBP', lengthUnit: 'in' });
    expect((await studios.read(cast.elsewhere.owner.scope)).currency).toBe('EUR');
    expect(
      await post(settings, 'default', {
        locals,
        form: { ...form, currency: 'XXZ', timeZone: 'Mars/Olympus', lengthUnit: 'ell' }
      })
    ).toMatchObject({
      value: {
        data: {
          values: { timeZone: 'Mars/Olympus' },
          errors: {
            currency: expect.any(String),
            timeZone: expect.any(String),
            lengthUnit: expect.any(String)
          }
        }
      }
    });
  });
});
