import { copyFileSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { openDatabase, useDatabase } from '$lib/server/database';
import { may, roles, type Permission, type Role } from '$lib/server/permissions';
import { ending, eventFor, makeCast, signedOut, type Call, type Cast, type House } from './cast';
import { makeProps, secrets, type Props } from './props';
import { plainPages, routeTable, type Entry } from './route-table';

/*
 * Every handler of every route × every role, signed out, without a studio, and a foreign studio; foreign ids in paths
 * and in bodies; what must not appear. The real handlers are called, on a copy of one prepared database each.
 */

type Handler = (event: unknown) => unknown;
type Module = Record<string, unknown> & { actions?: Record<string, Handler>; load?: Handler };
const modules = import.meta.glob<Module>('../../src/routes/**/+{server,page.server,layout.server}.ts');
const pages = Object.keys(import.meta.glob('../../src/routes/**/+page.svelte'));

/** '/orders/[id]' of '../../src/routes/(app)/orders/[id]/+page.server.ts'. Layouts keep their group: '/(app)'. */
function routeOf(file: string): string {
  const folder = path.posix.dirname(file.replace('../../src/routes', ''));
  return (file.includes('+layout') ? folder : folder.replaceAll(/\/\([^)]+\)/g, '')) || '/';
}

interface Route {
  readonly key: string;
  readonly kind: 'api' | 'page';
  readonly handler: Handler;
}

async function routesThatExist(): Promise<Route[]> {
  const routes: Route[] = [];
  for (const [file, open] of Object.entries(modules)) {
    const module = await open();
    const route = routeOf(file);
    if (file.endsWith('+server.ts')) {
      for (const method of ['GET', 'POST', 'PUT', 'PATCH', 'DELETE', 'OPTIONS', 'HEAD', 'fallback'])
        if (module[method])
          routes.push({ key: `${route} ${method}`, kind: 'api', handler: module[method] as Handler });
      continue;
    }
    const load = file.includes('+layout') ? 'layout' : 'load';
    if (module.load) routes.push({ key: `${route} ${load}`, kind: 'page', handler: module.load });
    for (const [name, handler] of Object.entries(module.actions ?? {}))
      routes.push({ key: `${route} ?/${name}`, kind: 'page', handler });
  }
  return routes;
}

let folder: string;
let golden: string;
let cast: Cast;
let here: Props;
let elsewhere: Props;
let routes: Map<string, Route>;

beforeAll(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'matrix-'));
  golden = path.join(folder, 'golden.sqlite');
  cast = await makeCast(golden);
  here = await makeProps(cast.here);
  elsewhere = await makeProps(cast.elsewhere);
  await cast.db.raw('PRAGMA wal_checkpoint(TRUNCATE)');
  await cast.close();
  routes = new Map((await routesThatExist()).map((route) => [route.key, route]));
});
afterAll(() => rmSync(folder, { recursive: true }));

let db: ReturnType<typeof openDatabase>;
let untouched: string | undefined;
let calls = 0;
beforeEach(() => fresh());
afterAll(() => db.destroy());

/** How many rows this connection has written, those of undone transactions too. */
async function written(): Promise<number> {
  const [row] = await db.raw('SELECT total_changes() AS n');
  return row.n;
}

/** Every call finds the database as it was prepared. */
async function fresh(): Promise<void> {
  if (untouched !== undefined) {
    if ((await written()) === 0) return;
    await db.destroy();
  }
  const file = path.join(folder, 'copy.sqlite');
  for (const side of ['', '-wal', '-shm']) rmSync(file + side, { force: true });
  copyFileSync(golden, file);
  db = openDatabase(file);
  useDatabase(db);
  untouched ??= await everything();
}

/** Everything that is stored, the record of who did what excepted. */
async function everything(): Promise<string> {
  const tables = await db('sqlite_master').where({ type: 'table' }).orderBy('name').pluck('name');
  const kept = tables.filter((name: string) => !/^(sqlite_|knex_|audit_entries$)/.test(name));
  return JSON.stringify(await Promise.all(kept.map((name: string) => db(name).orderBy('rowid'))));
}

async function expectUntouched(words?: string): Promise<void> {
  if ((await written()) > 0) expect(await everything(), words).toBe(untouched);
}

type Outcome = { status: number; location: string; text: string };

/** Calls a handler and tells how it ended, whatever kind of route it is. */
async function outcomeOf(key: string, locals: App.Locals, call: Call): Promise<Outcome> {
  const route = routes.get(key)!;
  const method =
    /^(POST|PUT|PATCH|DELETE)$/.exec(key.split(' ')[1]!)?.[0] ?? (key.includes(' ?/') ? 'POST' : 'GET');
  const form = key.includes(' ?/') && !call.form ? {} : call.form;
  calls += 1;
  // Each call from a place of its own: the limits of the door are not what is tested here.
  const place = `10.${calls >> 16}.${(calls >> 8) & 255}.${calls & 255}`;
  const event = eventFor({ method, locals, place, ...call, ...(form ? { form } : {}) });
  const end = await ending(() => route.handler(event));
  if (end.kind === 'redirect') return { status: end.status, location: end.location, text: '' };
  if (end.kind === 'error') return { status: end.status, location: '', text: end.message };
  const value = end.value;
  if (value instanceof Response)
    return { status: value.status, location: value.headers.get('location') ?? '', text: await value.text() };
  const failure = value as { status?: number; data?: unknown } | null | undefined;
  const status = failure && typeof failure.status === 'number' && 'data' in failure ? failure.status : 200;
  return { status, location: '', text: JSON.stringify(value) ?? '' };
}

const callOf = (entry: Entry, own: Props): Call => entry.call?.(own) ?? {};
/** A call from here whose path names a thing of elsewhere; nothing else in it is foreign. */
const foreignPath = (entry: Entry): Call => ({
  ...callOf(entry, here),
  params: callOf(entry, elsewhere).params ?? {}
});
const isPermission = (access: Entry['access']): access is Permission =>
  access !== 'anyone' && access !== 'person';
const entries = Object.entries(routeTable);
const guarded = entries.filter(([, { access }]) => access !== 'anyone');
const byPermission = entries.filter(([, { access }]) => isPermission(access));
const isApi = (key: string) => routes.get(key)?.kind === 'api';
const localsOf = (house: House, role: Role) => house[role].locals;

const refusesPrices = (role: Role) => !may(role, 'prices: see');
function expectNoSecrets(text: string, key: string): void {
  for (const secret of secrets) expect(text, `${key}: ${secret}`).not.toContain(secret);
  expect(text, `${key}: a price`).not.toMatch(/"(price|cost)\w*":(?!null|false)/i);
}

describe('the table', () => {
  it('names every handler that exists, and none that does not', () => {
    expect(Object.keys(routeTable).sort()).toEqual([...routes.keys()].sort());
  });

  it('knows every page without a load of its own', () => {
    const without = pages
      .filter((page) => !modules[page.replace('+page.svelte', '+page.server.ts')])
      .map(routeOf)
      .sort();
    expect(without).toEqual(plainPages);
  });

  it('gives each entry with ids in its path a call about things of its own studio', () => {
    for (const [key, entry] of entries)
      if (key.includes('[')) expect(Object.keys(callOf(entry, here).params ?? {}), key).not.toEqual([]);
  });
});

describe('signed out', () => {
  it.each(guarded)('%s is refused and changes nothing', async (key, entry) => {
    const { status, location, text } = await outcomeOf(key, signedOut, callOf(entry, here));
    if (isApi(key)) expect(status).toBe(401);
    else expect([status, location.split('?')[0]]).toEqual([303, '/sign-in']);
    expectNoSecrets(text, key);
    await expectUntouched();
  });

  it.each(entries.filter(([, { access }]) => access === 'anyone'))('%s is answered', async (key, entry) => {
    const { status, location, text } = await outcomeOf(key, signedOut, callOf(entry, here));
    expect([200, 303, 400, 410]).toContain(status);
    expect(location).not.toContain('next=');
    expectNoSecrets(text, key);
  });
});

describe('signed in without a studio', () => {
  it.each(byPermission)('%s is refused and changes nothing', async (key, entry) => {
    const locals = { ...cast.here.owner.locals, scope: null, studio: null };
    const { status, location } = await outcomeOf(key, locals, callOf(entry, here));
    if (isApi(key)) expect(status).toBe(403);
    else expect([status, location]).toEqual([303, '/studios']);
    await expectUntouched();
  });
});

describe.each(roles)('as %s', (role) => {
  const open = guarded.filter(([, { access }]) => !isPermission(access) || may(role, access));
  const shut = byPermission.filter(([, { access }]) => !may(role, access as Permission));

  it.each(open)('%s answers about things of the own studio', async (key, entry) => {
    const { status, location, text } = await outcomeOf(key, localsOf(cast.here, role), callOf(entry, here));
    expect(entry.answers ?? (entry.byCode ? [200, 410] : [200, 303]), text.slice(0, 300)).toContain(status);
    expect(location).not.toContain('next=');
    if (refusesPrices(role)) expectNoSecrets(text, key);
  });

  if (shut.length > 0)
    it.each(shut)('%s is refused and changes nothing', async (key, entry) => {
      const { status, text } = await outcomeOf(key, localsOf(cast.here, role), callOf(entry, here));
      expect(status).toBe(403);
      expectNoSecrets(text, key);
      await expectUntouched();
    });

  const withIds = open.filter(([key, { byCode }]) => key.includes('[') && !byCode);
  it.each(withIds)("%s: another studio's things are not there", async (key, entry) => {
    const { status, text } = await outcomeOf(key, localsOf(cast.here, role), foreignPath(entry));
    expect(status, text.slice(0, 300)).toBe(404);
    expectNoSecrets(text, key);
    await expectUntouched();
  });

  it.each(withIds)('%s: what does not exist is answered like what is foreign', async (key, entry) => {
    const call = callOf(entry, here);
    const nothing = {
      ...call,
      params: Object.fromEntries(Object.keys(call.params!).map((name) => [name, 'nothing']))
    };
    const locals = localsOf(cast.here, role);
    const [one, other] = [
      await outcomeOf(key, locals, nothing),
      await outcomeOf(key, locals, foreignPath(entry))
    ];
    expect(one).toEqual(other);
  });

  const withForeign = open.filter(([, { foreign }]) => foreign);
  it.each(withForeign)('%s: foreign ids in a body are refused and change nothing', async (key, entry) => {
    for (const [name, call] of Object.entries(entry.foreign!(here, elsewhere))) {
      await fresh();
      const { status, text } = await outcomeOf(key, localsOf(cast.here, role), call);
      expect([400, 404], `${name}: ${text.slice(0, 300)}`).toContain(status);
      await expectUntouched(name);
    }
  });
});

describe('what the matrix looks for', () => {
  it('is a change of any row', async () => {
    await db('cloths').where({ id: here.cloth }).update({ colour: '#000000' });
    await expect(expectUntouched()).rejects.toThrow();
  });

  it('is a price, which owners are shown', async () => {
    const { text } = await outcomeOf(
      '/cloths/[id] load',
      cast.here.owner.locals,
      callOf(routeTable['/cloths/[id] load']!, here)
    );
    expect(() => expectNoSecrets(text, 'owner')).toThrow();
  });
});
