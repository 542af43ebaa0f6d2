import type { Cookies, RequestEvent } from '@sveltejs/kit';
import type { Knex } from 'knex';
import * as accounts from '$lib/server/accounts';
import { migrate, openDatabase, useDatabase } from '$lib/server/database';
import { hashPassword } from '$lib/server/passwords';
import type { Role } from '$lib/server/permissions';
import type { Scope } from '$lib/server/scope';
import * as sessions from '$lib/server/sessions';
import * as studios from '$lib/server/studios';

/*
 * The cast of the server tests: a database with two studios that must never see each other, each with an owner, a
 * pattern maker and a cutter, and events with which the real handlers are called directly.
 */

export const password = 'eleven lanterns by the canal';

export interface Member {
  readonly scope: Scope;
  readonly id: string;
  readonly email: string;
  readonly name: string;
  readonly locals: App.Locals;
}

export interface House {
  readonly id: string;
  readonly name: string;
  readonly owner: Member;
  readonly patternMaker: Member;
  readonly cutter: Member;
}

export interface Cast {
  readonly db: Knex;
  /** The studio that a test acts in. */
  readonly here: House;
  /** Another studio of the same installation. */
  readonly elsewhere: House;
  /** Closes the database: in `afterAll` or `afterEach`. */
  close(): Promise<void>;
}

let hash: Promise<string> | undefined;

/** Opens a fresh database (in memory unless a file is named), makes it the application's, and fills it with the cast. */
export async function makeCast(file = ':memory:'): Promise<Cast> {
  const db = openDatabase(file);
  await migrate(db);
  useDatabase(db);
  return {
    db,
    here: await house('Linden Row', 'linden'),
    elsewhere: await house('Harbour Bench', 'harbour'),
    async close() {
      useDatabase(null);
      await db.destroy();
    }
  };
}

async function house(name: string, short: string): Promise<House> {
  const passwordHash = await (hash ??= hashPassword(password));
  const account = (person: string) =>
    accounts.create({ email: `${person.toLowerCase()}@${short}.example`, name: person, passwordHash });
  const owner = await account('Odile');
  const id = await studios.create({ name, owner });
  const patternMaker = await account('Piet');
  await studios.join(id, patternMaker, 'patternMaker');
  const cutter = await account('Cato');
  await studios.join(id, cutter, 'cutter');
  return {
    id,
    name,
    owner: await member(id, owner),
    patternMaker: await member(id, patternMaker),
    cutter: await member(id, cutter)
  };
}

async function member(studioId: string, userId: string): Promise<Member> {
  const { name, email } = await accounts.read(userId);
  const entered = (await studios.enter(studioId, userId))!;
  const locals: App.Locals = {
    requestId: 'test-request',
    person: { user: { id: userId, name, email }, session: { publicId: `session-of-${userId}` } },
    scope: entered.scope,
    studio: entered.studio
  };
  return { scope: entered.scope, id: userId, email, name, locals };
}

/** Nobody: the locals of a request without a session. */
export const signedOut: App.Locals = {
  requestId: 'test-request',
  person: { user: null, session: null },
  scope: null,
  studio: null
};

/** The locals of a person in a role of a house; `null` is somebody who is signed out. */
export const localsOf = (house: House, role: Role | null): App.Locals =>
  role === null ? signedOut : house[role].locals;

export interface Call {
  locals?: App.Locals;
  params?: Record<string, string>;
  /** Path and query. */
  path?: string;
  method?: string;
  /** Sent as JSON. */
  json?: unknown;
  /** Sent as a form. */
  form?: Record<string, string | Blob> | FormData;
  cookies?: Cookies;
  /** The caller's network address; limits count by it. */
  place?: string;
}

/** An event for a real handler: `await POST(eventFor({ locals, params, json }))`. The type parameter is the handler's own. */
export function eventFor<E = RequestEvent>(call: Call = {}): E {
  const url = new URL(call.path ?? '/', 'http://localhost:3000');
  const init: RequestInit = { method: call.method ?? 'GET' };
  if (call.json !== undefined) {
    init.method = call.method ?? 'POST';
    init.body = JSON.stringify(call.json);
    init.headers = { 'content-type': 'application/json' };
  } else if (call.form) {
    init.method = 'POST';
    init.body = call.form instanceof FormData ? call.form : formData(call.form);
  }
  const request = new Request(url, init);
  const event = {
    url,
    request,
    params: call.params ?? {},
    locals: structuredClone(call.locals ?? signedOut),
    cookies: call.cookies ?? cookieJar(),
    getClientAddress: () => call.place ?? '192.0.2.1',
    setHeaders: () => {},
    depends: () => {},
    untrack: (work: () => unknown) => work(),
    parent: async () => ({}),
    fetch,
    platform: undefined,
    route: { id: null },
    isDataRequest: false,
    isSubRequest: false,
    isRemoteRequest: false
  };
  return event as E;
}

function formData(fields: Record<string, string | Blob>): FormData {
  const form = new FormData();
  for (const [name, value] of Object.entries(fields)) form.set(name, value);
  return form;
}

/** Cookies that are kept in a map, with what the handler asked for each. */
export function cookieJar(initial: Record<string, string> = {}): Cookies & {
  held: Map<string, string>;
  options: Map<string, Record<string, unknown>>;
} {
  const held = new Map(Object.entries(initial));
  const options = new Map<string, Record<string, unknown>>();
  return {
    held,
    options,
    get: (name) => held.get(name),
    getAll: () => [...held].map(([name, value]) => ({ name, value })),
    set(name, value, given) {
      options.set(name, { ...given });
      if (value === '' || given.maxAge === 0) held.delete(name);
      else held.set(name, value);
    },
    delete(name) {
      held.delete(name);
    },
    serialize: () => ''
  };
}

/** Signs a member in for real: a jar with the cookie of a new session. */
export async function sessionOf(person: Member): Promise<ReturnType<typeof cookieJar>> {
  const jar = cookieJar();
  await sessions.start(jar, person.id, person.scope.studio, 'test browser');
  return jar;
}

/** Runs a page's load or action and tells how it ended: its value, a redirect, or an error page. */
export async function ending(
  work: () => unknown
): Promise<
  | { kind: 'value'; value: unknown }
  | { kind: 'redirect'; status: number; location: string }
  | { kind: 'error'; status: number; message: string }
> {
  try {
    return { kind: 'value', value: await work() };
  } catch (thrown) {
    const t = thrown as { status?: number; location?: string; body?: { message: string } };
    if (typeof t.status === 'number' && typeof t.location === 'string')
      return { kind: 'redirect', status: t.status, location: t.location };
    if (typeof t.status === 'number' && t.body)
      return { kind: 'error', status: t.status, message: t.body.message };
    throw thrown;
  }
}
