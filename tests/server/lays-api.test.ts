import type { RequestEvent } from '@sveltejs/kit';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import type { LayDocument } from '$lib/lay/document';
import { newId } from '$lib/server/ids';
import * as lays from '$lib/server/lays';
import * as lay from '../../src/routes/api/lays/[id]/+server';
import * as check from '../../src/routes/api/lays/[id]/check/+server';
import * as choose from '../../src/routes/api/lays/[id]/choose/+server';
import * as duplicate from '../../src/routes/api/lays/[id]/duplicate/+server';
import * as release from '../../src/routes/api/lays/[id]/release/+server';
import * as reopen from '../../src/routes/api/lays/[id]/reopen/+server';
import * as restore from '../../src/routes/api/lays/[id]/restore/+server';
import * as revisions from '../../src/routes/api/lays/[id]/revisions/+server';
import * as revision from '../../src/routes/api/lays/[id]/revisions/[number]/+server';
import * as orderLays from '../../src/routes/api/orders/[id]/lays/+server';
import { eventFor, localsOf, makeCast, signedOut, type Cast } from './cast';
import { good, makeOrder, type OrderRows } from './lay-orders';

let cast: Cast;
let rows: OrderRows;
let id: string;
let document: LayDocument;

beforeEach(async () => {
  cast = await makeCast();
  const { scope } = cast.here.owner;
  rows = await makeOrder(scope);
  ({ id } = await lays.create(scope, { orderId: rows.order, clothId: rows.main, name: 'First' }));
  document = good((await lays.read(scope, id)).document);
  await lays.save(scope, id, { version: 1, saveId: newId(), document });
});
afterEach(() => cast.close());

type Handler = (event: never) => Promise<Response>;
interface Route {
  readonly name: string;
  readonly handler: Handler;
  readonly method: string;
  readonly params?: Record<string, string>;
  /** A body that is accepted. */
  readonly body?: () => unknown;
}

const routes: Route[] = [
  { name: 'GET lay', handler: lay.GET as Handler, method: 'GET' },
  {
    name: 'PUT lay',
    handler: lay.PUT as Handler,
    method: 'PUT',
    body: () => ({ version: 2, saveId: newId(), document })
  },
  { name: 'check', handler: check.POST as Handler, method: 'POST', body: () => ({ version: 2 }) },
  { name: 'choose', handler: choose.POST as Handler, method: 'POST', body: () => ({}) },
  { name: 'duplicate', handler: duplicate.POST as Handler, method: 'POST', body: () => ({ name: 'Copy' }) },
  { name: 'list revisions', handler: revisions.GET as Handler, method: 'GET' },
  {
    name: 'keep revision',
    handler: revisions.POST as Handler,
    method: 'POST',
    body: () => ({ version: 2, name: 'Kept' })
  },
  {
    name: 'release',
    handler: release.POST as Handler,
    method: 'POST',
    body: () => ({ version: 2, name: 'For cutting' })
  },
  {
    name: 'new lay',
    handler: orderLays.POST as Handler,
    method: 'POST',
    params: {},
    body: () => ({ clothId: rows.main, name: 'Another' })
  }
];

function call(route: Route, locals: App.Locals, body = route.body?.()): Promise<Response> {
  const params = { id: route.name === 'new lay' ? rows.order : id, ...route.params };
  const event = eventFor<RequestEvent>({ locals, params, method: route.method, json: body });
  return route.handler(event as never);
}

describe('every route of a lay', () => {
  test.each(routes)('$name: for every role of the studio, nobody else', async (route) => {
    expect((await call(route, signedOut)).status).toBe(401);
    for (const role of ['owner', 'patternMaker', 'cutter'] as const) {
      const stranger = await call(route, localsOf(cast.elsewhere, role));
      expect(stranger.status).toBe(404);
      expect(await stranger.json()).toMatchObject({ type: '/problems/not-found' });
    }
    const before = await cast.db('lays').where({ id }).first();
    expect(before.version).toBe(2);
    expect((await call(route, localsOf(cast.here, 'cutter'))).status).toBe(200);
  });

  test.each(routes.filter(({ body }) => body && body !== undefined))(
    '$name: refuses a body that does not fit',
    async (route) => {
      const parts = route.body!() as Record<string, unknown>;
      for (const key of Object.keys(parts).filter((one) => one !== 'document')) {
        const answer = await call(route, localsOf(cast.here, 'owner'), { ...parts, [key]: [] });
        expect(answer.status).toBe(400);
        expect(answer.headers.get('content-type')).toBe('application/problem+json');
      }
    }
  );
});

describe('what the answers look like', () => {
  const owner = () => localsOf(cast.here, 'owner');
  const run = async (
    handler: unknown,
    json: unknown,
    params: Record<string, string> = {},
    locals = owner()
  ) => {
    const response = await (handler as Handler)(
      eventFor<RequestEvent>({ locals, params: { id, ...params }, json }) as never
    );
    return { status: response.status, body: await response.json() };
  };

  test('no price reaches a cutter by any of them', async () => {
    const cutter = localsOf(cast.here, 'cutter');
    const texts: string[] = [];
    for (const route of routes) texts.push(await (await call(route, cutter)).text());
    texts.push(JSON.stringify(await run(revision.GET, undefined, { number: '1' }, cutter)));
    for (const text of texts) {
      expect(text).not.toMatch(/price|1234|5678|Mill by the weir/i);
    }
    const open = await run(lay.GET, undefined);
    expect(open.body.cloth.price).toEqual({ minor: 1234, unit: 'metre', currency: 'EUR' });
  });

  test('a foreign cloth in the body is no such cloth', async () => {
    const foreign = await makeOrder(cast.elsewhere.owner.scope);
    const answer = await run(orderLays.POST, { clothId: foreign.main, name: 'x' }, { id: rows.order });
    expect(answer).toMatchObject({ status: 404, body: { title: 'No such cloth' } });
  });

  test('released, reopened, restored: the whole way', async () => {
    expect(await run(release.POST, { version: 2, name: 'For cutting' })).toMatchObject({
      status: 200,
      body: { revision: { number: 1, name: 'For cutting', hash: expect.stringMatching(/^[0-9a-f]{64}$/) } }
    });
    expect(await run(lay.PUT, { version: 2, saveId: newId(), document })).toMatchObject({
      status: 409,
      body: { type: '/problems/lay-released' }
    });
    expect(await run(reopen.POST, {})).toEqual({ status: 200, body: { version: 3 } });
    const empty = { ...document, placements: [] };
    expect(await run(lay.PUT, { version: 3, saveId: newId(), document: empty })).toMatchObject({
      body: { version: 4 }
    });
    expect(await run(release.POST, { version: 4, name: 'Too soon' })).toMatchObject({
      status: 409,
      body: { type: '/problems/findings-stop', verdict: { findings: [{ kind: 'missing' }, {}, {}] } }
    });
    expect(await run(restore.POST, { number: 1, version: 4, saveId: newId() })).toMatchObject({
      status: 200,
      body: { version: 5, document }
    });
    expect(await run(revision.GET, undefined, { number: '1' })).toMatchObject({
      status: 200,
      body: { revision: { number: 1 }, document, verdict: { findings: [] } }
    });
    for (const number of ['2', '0', 'x', '1e0'])
      expect((await run(revision.GET, undefined, { number })).status).toBe(404);
  });

  test('a stale save is answered with what is stored', async () => {
    expect(await run(lay.PUT, { version: 1, saveId: newId(), document })).toMatchObject({
      status: 409,
      body: {
        type: '/problems/lay-out-of-date',
        current: { version: 2, document, savedBy: cast.here.owner.name, savedAt: expect.any(Number) }
      }
    });
  });
});
