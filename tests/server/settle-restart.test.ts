import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { check } from '$lib/lay/check';
import { integrityFaults, openDatabase } from '$lib/server/database';
import * as lays from '$lib/server/lays';
import * as sessions from '$lib/server/sessions';
import { laidBy, type SettleProgress } from '$lib/settle/run';
import { makeCast, sessionOf, type Cast } from './cast';
import { cutPanel, makeOrder } from './lay-orders';
import { isBuilt, startBuild, type RealServer } from './real-server';

if (!isBuilt) console.warn('No build: the settle run that outlives a kill is skipped (npm run build first).');

let folder: string;
let file: string;
let cast: Cast;
let server: RealServer | undefined;

beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'settle-'));
  file = path.join(folder, 'db.sqlite');
  cast = await makeCast(file);
});
afterEach(async () => {
  await server?.kill();
  server = undefined;
  await cast.close();
  rmSync(folder, { recursive: true });
});

/** Odd pieces, so that the search does not come to its end before it is killed. */
const odd = Array.from({ length: 6 }, (_, i) =>
  cutPanel(
    `odd${i}`,
    [
      { x: 0, y: 0 },
      { x: 200 + 31 * i, y: 20 },
      { x: 170 + 17 * i, y: 130 },
      { x: 90, y: 160 + 23 * i },
      { x: -20, y: 90 }
    ],
    { turns: 'bothWays' }
  )
);

describe.skipIf(!isBuilt)('a settle run on the built server', () => {
  it('killed in the middle goes on from its best after the restart, and the lay is unchanged', async () => {
    const { scope } = cast.here.owner;
    const rows = await makeOrder(scope, { quantity: 4, style: odd });
    const { id } = await lays.create(scope, { orderId: rows.order, clothId: rows.main });
    const before = await lays.read(scope, id);
    const jar = await sessionOf(cast.here.owner);
    const headers = {
      cookie: `warpwise=${jar.get(sessions.cookieName)}`,
      'content-type': 'application/json'
    };
    server = await startBuild(file);
    const begun = await fetch(`${server.address}/api/lays/${id}/settle`, {
      method: 'POST',
      headers: { ...headers, origin: server.address },
      body: JSON.stringify({ version: 1, budgetSeconds: 8, from: 'scratch', pieces: 'all', seed: 2 })
    });
    expect(begun.status).toBe(200);
    const { job } = (await begun.json()) as { job: string };
    const rowOf = () => cast.db('jobs').where({ id: job }).first();
    const progress = async () => JSON.parse((await rowOf()).progress ?? 'null') as SettleProgress | null;
    await expect.poll(async () => (await progress())?.seconds ?? 0, { timeout: 30_000 }).toBeGreaterThan(1.5);
    await server.kill();
    const killed = (await progress())!;
    expect(await rowOf()).toMatchObject({ state: 'running', stop_wanted: 0 });
    expect(killed.best).not.toBeNull();
    expect(killed.seconds).toBeLessThan(8);
    const db = openDatabase(file);
    expect(await integrityFaults(db)).toEqual([]);
    await db.destroy();
    // The lease of the dead process runs out.
    await cast
      .db('jobs')
      .where({ id: job })
      .update({ lease_until: Date.now() - 1 });

    server = await startBuild(file);
    const seen: SettleProgress[] = [];
    await expect
      .poll(
        async () => {
          const answer = await fetch(`${server!.address}/api/jobs/${job}`, { headers });
          const now = (await answer.json()) as { state: string; progress: SettleProgress };
          seen.push(now.progress);
          return now.state;
        },
        { timeout: 40_000 }
      )
      .toBe('done');
    for (const told of seen) {
      expect(told.seconds).toBeGreaterThanOrEqual(killed.seconds);
      expect(told.best!.length).toBeLessThanOrEqual(killed.best!.length);
    }
    const result = JSON.parse((await rowOf()).result) as SettleProgress;
    expect(result).toMatchObject({ turns: 2, ended: 'time' });
    expect(result.seconds).toBeLessThan(10);
    expect(check(laidBy(before.document, result.best!), before.panels).findings).toEqual([]);
    expect(await lays.read(scope, id)).toEqual(before);
    const offered = await fetch(`${server.address}/api/lays/${id}/settle`, { headers });
    expect(await offered.json()).toMatchObject({ run: { job: { id: job, state: 'done' }, version: 1 } });
  }, 120_000);
});
