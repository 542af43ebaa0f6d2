import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { z } from 'zod';
import { integrityFaults } from '$lib/server/database';
import { JobRunner, lease } from '$lib/server/job-runner';
import * as jobs from '$lib/server/jobs';
import * as people from '$lib/server/people';
import { Problem } from '$lib/server/problem';
import type { Scope } from '$lib/server/scope';
import * as sessions from '$lib/server/sessions';
import { GET as readJob } from '../../src/routes/api/jobs/[id]/+server';
import { GET as jobEvents } from '../../src/routes/api/jobs/[id]/events/+server';
import { POST as stopJob } from '../../src/routes/api/jobs/[id]/stop/+server';
import { eventFor, makeCast, sessionOf, type Cast, type Member } from './cast';

let cast: Cast;
let runner: JobRunner;
let folder: string;
const any = z.unknown();

beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'jobs-'));
  cast = await makeCast(path.join(folder, 'db.sqlite'));
  runner = new JobRunner();
});
afterEach(async () => {
  await runner.shutDown();
  expect(await integrityFaults(cast.db)).toEqual([]);
  await cast.close();
  rmSync(folder, { recursive: true });
  vi.useRealTimers();
});

const rowOf = (id: string) => cast.db('jobs').where({ id }).first();

describe('a job', () => {
  it('runs in the name of its person and keeps its result', async () => {
    jobs.registerJob('test: sum', {
      input: z.object({ a: z.number(), b: z.number() }),
      permission: 'lays: see',
      run: async ({ a, b }, { scope }) => ({ sum: a + b, role: scope!.role })
    });
    const id = await jobs.enqueue(cast.here.cutter.scope, 'test: sum', { a: 2, b: 3 });
    await runner.drain();
    const job = await jobs.read(cast.here.owner.scope, id);
    expect(job).toMatchObject({ state: 'done', result: { sum: 5, role: 'cutter' }, error: null });
  });

  it('is refused for a person who has left the studio meanwhile', async () => {
    jobs.registerJob('test: late', { input: any, permission: 'lays: see', run: async () => 'done' });
    const id = await jobs.enqueue(cast.here.cutter.scope, 'test: late', null);
    await people.disable(cast.here.owner.scope, cast.here.cutter.id);
    await runner.drain();
    expect((await jobs.read(cast.here.owner.scope, id)).state).toBe('failed');
  });

  it('shows a refusal in its own words and a fault of the program only by name', async () => {
    jobs.registerJob('test: refuse', {
      input: any,
      permission: 'lays: see',
      run: async () => {
        throw new Problem(422, 'too-wide', 'Too wide', 'The cloth is narrower than this piece.');
      }
    });
    jobs.registerJob('test: break', {
      input: any,
      permission: 'lays: see',
      attempts: 1,
      run: async () => {
        throw new Error('secret inner words');
      }
    });
    const refused = await jobs.enqueue(cast.here.owner.scope, 'test: refuse', null);
    const broken = await jobs.enqueue(cast.here.owner.scope, 'test: break', null);
    await runner.drain();
    expect((await rowOf(refused)).error).toBe('The cloth is narrower than this piece.');
    const { state, error } = await rowOf(broken);
    expect(state).toBe('failed');
    expect(error).toContain(broken);
    expect(error).not.toContain('secret');
  });

  it('is tried again after a fault, later, and then succeeds', async () => {
    let tries = 0;
    jobs.registerJob('test: shaky', {
      input: any,
      permission: 'lays: see',
      run: async () => {
        tries += 1;
        if (tries === 1) throw new Error('first time');
        return tries;
      }
    });
    const id = await jobs.enqueue(cast.here.owner.scope, 'test: shaky', null);
    await runner.drain();
    expect(await rowOf(id)).toMatchObject({ state: 'waiting', attempts: 1 });
    expect((await rowOf(id)).not_before).toBeGreaterThan(Date.now());
    await cast.db('jobs').update({ not_before: 0 });
    await runner.drain();
    expect((await jobs.read(cast.here.owner.scope, id)).result).toBe(2);
  });

  it('takes turns between studios', async () => {
    const order: string[] = [];
    jobs.registerJob('test: turn', {
      input: z.string(),
      permission: 'lays: see',
      lane: 'long',
      run: async (name) => void order.push(name)
    });
    let now = Date.now() - 100;
    const queue = (scope: Scope, name: string) =>
      jobs.enqueue(scope, 'test: turn', name, { now: (now += 1) });
    for (const i of [1, 2, 3, 4]) await queue(cast.here.owner.scope, `here ${i}`);
    for (const i of [1, 2]) await queue(cast.elsewhere.owner.scope, `elsewhere ${i}`);
    await runner.drain();
    expect(order).toEqual(['here 1', 'elsewhere 1', 'here 2', 'elsewhere 2', 'here 3', 'here 4']);
  });

  it('stops when asked and keeps the best so far', async () => {
    let running: () => void;
    const started = new Promise<void>((resolve) => (running = resolve));
    jobs.registerJob('test: search', {
      input: any,
      permission: 'lays: see',
      lane: 'long',
      run: async (_input, { stopped, signal }) => {
        running();
        await new Promise((resolve) => signal.addEventListener('abort', resolve));
        return { best: 7, stopped: stopped() };
      }
    });
    const id = await jobs.enqueue(cast.here.owner.scope, 'test: search', null);
    const drained = runner.drain();
    await started;
    await jobs.stop(cast.here.cutter.scope, id);
    await drained;
    expect(await jobs.read(cast.here.owner.scope, id)).toMatchObject({
      state: 'stopped',
      result: { best: 7, stopped: true }
    });
  });

  it('writes its progress seldom however often it tells it, and the newest in the end', async () => {
    jobs.registerJob('test: talkative', {
      input: any,
      permission: 'lays: see',
      run: async (_input, { progress }) => {
        for (let i = 1; i <= 500; i += 1) progress({ step: i });
      }
    });
    const id = await jobs.enqueue(cast.here.owner.scope, 'test: talkative', null);
    let changes = 0;
    const unwatch = jobs.watch(id, () => (changes += 1));
    await runner.drain();
    unwatch();
    expect((await jobs.read(cast.here.owner.scope, id)).progress).toEqual({ step: 500 });
    // The first, the last, the end.
    expect(changes).toBeLessThanOrEqual(3);
  });

  it('that still waits is stopped without being run', async () => {
    const run = vi.fn(async () => 1);
    jobs.registerJob('test: waits', { input: any, permission: 'lays: see', run });
    const id = await jobs.enqueue(cast.here.owner.scope, 'test: waits', null);
    expect((await jobs.stop(cast.here.owner.scope, id)).state).toBe('stopped');
    await runner.drain();
    expect(run).not.toHaveBeenCalled();
  });
});

describe('a restart', () => {
  it('goes on from the last progress when the lease of a dead process has run out, and not before', async () => {
    const seen: unknown[] = [];
    jobs.registerJob('test: settle', {
      input: any,
      permission: 'lays: see',
      lane: 'long',
      run: async (_input, { previous }) => {
        seen.push(previous);
        return previous;
      }
    });
    const id = await jobs.enqueue(cast.here.owner.scope, 'test: settle', null);
    await cast
      .db('jobs')
      .where({ id })
      .update({
        state: 'running',
        attempts: 1,
        lease_owner: 'a process that is gone',
        lease_until: Date.now() + lease,
        progress: JSON.stringify({ best: 1234 })
      });
    await runner.drain();
    expect(seen).toEqual([]);
    vi.useFakeTimers({ toFake: ['Date'] });
    vi.setSystemTime(Date.now() + lease + 1);
    await runner.drain();
    expect(seen).toEqual([{ best: 1234 }]);
  });

  it('gives an interrupted job back at once, without counting the attempt', async () => {
    let running: () => void;
    const started = new Promise<void>((resolve) => (running = resolve));
    jobs.registerJob('test: interrupted', {
      input: any,
      permission: 'lays: see',
      run: async (_input, { previous, progress, signal }) => {
        if (previous) return { from: previous };
        progress({ best: 3 });
        running();
        await new Promise((resolve) => signal.addEventListener('abort', resolve));
        signal.throwIfAborted();
      }
    });
    const id = await jobs.enqueue(cast.here.owner.scope, 'test: interrupted', null);
    void runner.fill();
    await started;
    await runner.shutDown();
    expect(await rowOf(id)).toMatchObject({ state: 'waiting', attempts: 0, lease_owner: null });
    runner = new JobRunner();
    await runner.drain();
    expect((await jobs.read(cast.here.owner.scope, id)).result).toEqual({ from: { best: 3 } });
  });

  it('gives up on a job that takes the process down every time', async () => {
    const run = vi.fn(async () => 1);
    jobs.registerJob('test: deadly', { input: any, permission: 'lays: see', attempts: 2, run });
    const id = await jobs.enqueue(cast.here.owner.scope, 'test: deadly', null);
    await cast
      .db('jobs')
      .where({ id })
      .update({ state: 'running', attempts: 3, lease_owner: 'gone', lease_until: 1 });
    await runner.drain();
    expect(run).not.toHaveBeenCalled();
    expect((await rowOf(id)).state).toBe('failed');
  });

  it('never lets two runners have one job', async () => {
    const run = vi.fn(async () => 1);
    jobs.registerJob('test: once', { input: any, permission: 'lays: see', run });
    for (let i = 0; i < 12; i += 1) await jobs.enqueue(cast.here.owner.scope, 'test: once', null);
    const other = new JobRunner();
    await Promise.all([runner.drain(), other.drain()]);
    expect(run).toHaveBeenCalledTimes(12);
  });
});

describe('the routes of a job', () => {
  const call = (person: Member, id: string) =>
    eventFor<Parameters<typeof readJob>[0]>({ locals: person.locals, params: { id } });

  it("answer 404 for another studio's job, an unknown one, and one whose kind the role may not see", async () => {
    jobs.registerJob('test: prices', { input: any, permission: 'prices: see', run: async () => 'price 99' });
    const id = await jobs.enqueue(cast.here.owner.scope, 'test: prices', null);
    await runner.drain();
    expect((await readJob(call(cast.here.owner, id))).status).toBe(200);
    for (const event of [
      call(cast.here.cutter, id),
      call(cast.elsewhere.owner, id),
      call(cast.here.owner, 'x')
    ]) {
      for (const route of [readJob, jobEvents, stopJob]) {
        const answer = await route(event as never);
        expect(answer.status).toBe(404);
        expect(await answer.text()).not.toContain('price 99');
      }
    }
  });

  it('stream the state first, then changes, and end with the job', async () => {
    let go: () => void;
    const gate = new Promise<void>((resolve) => (go = resolve));
    jobs.registerJob('test: stream', {
      input: any,
      permission: 'lays: see',
      run: async (_input, { progress }) => {
        progress({ done: 1, of: 2 });
        await gate;
        return 'guide';
      }
    });
    const id = await jobs.enqueue(cast.here.cutter.scope, 'test: stream', null);
    const locals = await signedInLocals(cast.here.cutter);
    const answer = await jobEvents(eventFor({ locals, params: { id } }));
    expect(answer.headers.get('content-type')).toBe('text/event-stream');
    const text = answer.text();
    const drained = runner.drain();
    await vi.waitFor(async () => expect((await rowOf(id)).progress).not.toBeNull());
    go!();
    await drained;
    const states = [...(await text).matchAll(/^data: (.*)$/gm)].map((match) => JSON.parse(match[1]!));
    expect(states[0].state).toBe('waiting');
    expect(states.some((job) => job.state === 'running' && job.progress?.done === 1)).toBe(true);
    expect(states.at(-1)).toMatchObject({ state: 'done', result: 'guide' });
  });

  it.each(['disabled', 'signed out'])('end the stream of a person who is %s meanwhile', async (how) => {
    jobs.registerJob('test: private', {
      input: any,
      permission: 'lays: see',
      run: async () => 'secret result'
    });
    const id = await jobs.enqueue(cast.here.owner.scope, 'test: private', null);
    const locals = await signedInLocals(cast.here.cutter);
    const answer = await jobEvents(eventFor({ locals, params: { id } }));
    if (how === 'disabled') await people.disable(cast.here.owner.scope, cast.here.cutter.id);
    else await sessions.endAll(cast.here.cutter.id);
    await runner.drain();
    expect(await answer.text()).not.toContain('secret result');
  });
});

async function signedInLocals(person: Member): Promise<App.Locals> {
  const jar = await sessionOf(person);
  const found = (await sessions.read(jar.get(sessions.cookieName)!))!;
  return { ...person.locals, person: { user: found.user, session: { publicId: found.session.publicId } } };
}
