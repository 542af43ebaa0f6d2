import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { integrityFaults } from '$lib/server/database';
import * as payments from '$lib/server/payments';
import { startFakeCardHost, type FakeCardHost } from '../fakes/fake-card-host';
import { makeCast, type Cast } from './cast';
import { agreeTo, makeQuoted } from './money';
import { isBuilt, postForm, startBuild, type RealServer } from './real-server';

/*
 * The built server killed around a card payment: nothing lost, nothing twice. The client's page is used over HTTP, the card host is
 * the local one.
 */

let folder: string;
let file: string;
let cast: Cast;
let fake: FakeCardHost;
let server: RealServer;
let order: string;
let token: string;

beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'payment-'));
  file = path.join(folder, 'db.sqlite');
  cast = await makeCast(file);
  fake = await startFakeCardHost();
  ({ order, token } = await makeQuoted(cast.here.owner.scope));
  await agreeTo(cast.here.owner.scope, order);
});
afterEach(async () => {
  await server?.kill();
  await fake.close();
  await cast.close();
  rmSync(folder, { recursive: true });
});

async function start(): Promise<void> {
  server = await startBuild(file, fake.env);
  fake.webhookUrl = `${server.address}/api/payments/webhook`;
}

const button = (kind: 'deposit' | 'balance') => postForm(server, `/c/${token}?/pay`, { kind });

/** Presses a button on the client's page, as a browser without scripts does; gives the session. */
async function press(kind: 'deposit' | 'balance'): Promise<string> {
  const answer = await button(kind);
  expect(answer.status).toBe(200);
  expect(answer.headers.get('set-cookie')).toMatch(/warpwise-client=.*HttpOnly/i);
  return /\/pay\/(cs_\w+)/.exec(await answer.text())![1]!;
}

/** Waits until `received` has come in, in so many payments, each with its one receipt and nothing left under way. */
async function expectOnce(received: number, count: number): Promise<void> {
  const account = () => payments.account(cast.here.owner.scope, order);
  await expect.poll(async () => (await account()).received, { timeout: 15_000 }).toBe(received);
  expect((await account()).payments.map(({ state }) => state)).toEqual(Array(count).fill('settled'));
  expect(await cast.db('messages').where({ template: 'receipt' })).toHaveLength(count);
  expect(await integrityFaults(cast.db)).toEqual([]);
}

describe.skipIf(!isBuilt)('the server killed', () => {
  it('at each step of a payment by card loses nothing and counts nothing twice', async () => {
    // While the button was pressed: pressing again is the same payment.
    await start();
    const pressed = button('deposit').catch(() => null);
    await expect.poll(async () => (await cast.db('payments')).length).toBe(1);
    await server.kill();
    await pressed;
    await start();
    const session = await press('deposit');
    expect(await cast.db('payments')).toHaveLength(1);
    expect(fake.sessions.size).toBe(1);

    // Between the payment and its message: the next start finds the money, and the late message adds nothing.
    await server.kill();
    await fake.pay(session);
    await start();
    await expectOnce(50_000, 1);
    expect(await fake.deliver(fake.events.at(-1)!)).toBe(200);
    await expectOnce(50_000, 1);

    // While a message comes in many times over.
    fake.lose = true;
    await fake.pay(await press('balance'));
    const event = fake.events.at(-1)!;
    const storm = Promise.all(Array.from({ length: 30 }, () => fake.deliver(event)));
    await new Promise((resolve) => setTimeout(resolve, 12));
    await server.kill();
    await storm;
    await start();
    expect(await fake.deliver(event)).toBe(200);
    await expectOnce(100_000, 2);
    expect(await cast.db('payment_events').where({ id: event.id })).toHaveLength(1);
  });
});
