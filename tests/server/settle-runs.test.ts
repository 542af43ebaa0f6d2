import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { check } from '$lib/lay/check';
import type { LayDocument } from '$lib/lay/document';
import { readingsOf } from '$lib/lay/readings';
import { newId } from '$lib/server/ids';
import { registerAllJobs } from '$lib/server/job-kinds';
import { JobRunner } from '$lib/server/job-runner';
import * as jobs from '$lib/server/jobs';
import * as lays from '$lib/server/lays';
import type { Problem } from '$lib/server/problem';
import type { Scope } from '$lib/server/scope';
import * as settleRuns from '$lib/server/settle-runs';
import { laidBy, type SettleBest, type SettleChoice, type SettleProgress } from '$lib/settle/run';
import { makeCast, type Cast } from './cast';
import { cutPanel, makeOrder, panels, type OrderRows } from './lay-orders';

let cast: Cast;
let runner: JobRunner;
let scope: Scope;
let rows: OrderRows;
let lay: string;

beforeEach(async () => {
  cast = await makeCast();
  registerAllJobs();
  runner = new JobRunner();
  scope = cast.here.cutter.scope;
  rows = await makeOrder(cast.here.owner.scope, { quantity: 3 });
  ({ id: lay } = await lays.create(scope, { orderId: rows.order, clothId: rows.main }));
});
afterEach(async () => {
  await runner.shutDown();
  await cast.close();
  vi.useRealTimers();
});

const quick: SettleChoice = { budgetSeconds: 2, from: 'scratch', pieces: 'all', seed: 3 };
const versionOf = async (id = lay) => (await lays.read(scope, id)).version;
const begin = async (choice: Partial<SettleChoice> = {}, id = lay, by = scope) =>
  settleRuns.create(by, id, { ...quick, ...choice, version: await versionOf(id) });
const refusal = (work: Promise<unknown>) =>
  work.then(
    () => Promise.reject(new Error('accepted')),
    (problem: Problem) => problem
  );
const told = async (job: string) => {
  const found = await jobs.read(scope, job);
  return (found.result ?? found.progress) as SettleProgress;
};
/** Runs a job until it has a first lay, then stops it: where any lay will do. */
const firstLayOf = async (job: string): Promise<SettleBest> => {
  const drained = runner.drain();
  await vi.waitFor(async () => expect((await told(job))?.best).toBeTruthy(), {
    timeout: 20_000,
    interval: 50
  });
  await jobs.stop(scope, job);
  await drained;
  return (await told(job)).best!;
};
const save = async (change: (document: LayDocument) => LayDocument) => {
  const { document, version } = await lays.read(scope, lay);
  await lays.save(scope, lay, { version, saveId: newId(), document: change(document) });
};

describe('a settle run', () => {
  it('lays every piece by the rules of the check and leaves the lay alone', async () => {
    const before = await lays.read(scope, lay);
    const { job } = await begin();
    await runner.drain();
    const found = await jobs.read(scope, job);
    expect(found).toMatchObject({ kind: 'settle', state: 'done', error: null });
    const { best, seconds, ended } = found.result as SettleProgress;
    expect(best).toMatchObject({ leftOver: 0 });
    expect(['time', 'least']).toContain(ended);
    expect(seconds).toBeGreaterThan(0);
    const laid = laidBy(before.document, best!);
    const { findings, readings } = check(laid, before.panels);
    expect(findings.filter(({ severity }) => severity === 'stops')).toEqual([]);
    expect(readings.pieces).toEqual({ needed: 9, placed: 9, loose: 0 });
    expect(readings.lengthUsed).toBeCloseTo(best!.length, 6);
    expect(best!.length).toBeGreaterThanOrEqual(readings.leastLength.length);
    expect(await lays.read(scope, lay)).toEqual(before);
    // The result is what a normal save accepts.
    await save(() => laid);
    expect((await lays.check(scope, lay, 2)).verdict.findings).toEqual([]);
  });

  it('leaves locked pieces where they are, and settles only loose ones around the rest when asked', async () => {
    const best = await firstLayOf((await begin()).job);
    const [locked, kept, ...rest] = best.placements.map((one, i) =>
      i === 0 ? { ...one, x: one.x + 2000, locked: true } : one
    );
    await save((document) => ({ ...document, placements: [locked!, kept!, ...rest.slice(2)] }));
    const { document } = await lays.read(scope, lay);

    const { job: loose } = await begin({ pieces: 'loose', from: 'here' });
    await runner.drain();
    const placed = (await told(loose)).best!.placements;
    expect(placed).toHaveLength(9);
    expect(placed).toEqual(expect.arrayContaining([...document.placements]));

    const { job: all } = await begin({ from: 'here' });
    await runner.drain();
    expect((await told(all)).best!.placements).toContainEqual(locked);
    expect((await told(all)).best!.placements).toHaveLength(9);
  });

  it('from here never ends with more cloth than the good lay that it began with', async () => {
    const { document, panels: book } = await lays.read(scope, lay);
    const good = laidBy(document, await firstLayOf((await begin()).job));
    await save(() => good);
    const { job } = await begin({ from: 'here' });
    await runner.drain();
    expect((await told(job)).best!.length).toBeLessThanOrEqual(readingsOf(good, book).lengthUsed + 0.001);
  });

  it('says what is left over where the cloth is too short', async () => {
    await save((document) => ({ ...document, strip: { ...document.strip, length: 405 } }));
    const { job } = await begin();
    await runner.drain();
    const { best } = await told(job);
    expect(best!.leftOver).toBeGreaterThan(0);
    expect(best!.placements.length + best!.leftOver).toBe(9);
  });
});

describe('before anything runs', () => {
  it('refuses a piece that is wider than the cloth, with its name and measure', async () => {
    const wide = cutPanel('wide', [
      { x: 0, y: 0 },
      { x: 1200, y: 0 },
      { x: 1200, y: 1100 },
      { x: 0, y: 1100 }
    ]);
    const other = await makeOrder(cast.here.owner.scope, { number: 8, style: [...panels, wide] });
    const { id } = await lays.create(scope, { orderId: other.order, clothId: other.main });
    const problem = await refusal(begin({}, id));
    expect(problem).toMatchObject({ status: 400, type: 'cannot-settle' });
    expect(problem.extra.faults).toMatchObject([{ kind: 'too-wide', measure: 100 }]);
    expect(problem.detail).toContain('Wide');
    expect(problem.detail).toMatch(/1100(\.0)? mm/);
    expect(await cast.db('jobs').where({ kind: 'settle' })).toEqual([]);
  });

  it('refuses locks that contradict each other, and what there is nothing to do with', async () => {
    const best = await firstLayOf((await begin()).job);
    const yokes = best.placements.filter(({ panel }) => panel === 'yoke').map(({ id }) => id);
    // Two yokes 5 mm apart, one on the other.
    await save((document) => ({
      ...document,
      placements: best.placements.map((one) =>
        yokes.indexOf(one.id) === 0 || yokes.indexOf(one.id) === 1
          ? { ...one, x: 100 + 5 * yokes.indexOf(one.id), y: 100, turn: 0, locked: true }
          : one
      )
    }));
    const problem = await refusal(begin());
    expect(problem).toMatchObject({ status: 400, type: 'cannot-settle' });
    expect((problem.extra.faults as { kind: string }[]).map(({ kind }) => kind)).toContain('locks-collide');
    await save((document) => ({ ...document, placements: [...best.placements] }));
    expect(await refusal(begin({ pieces: 'loose' }))).toMatchObject({
      status: 400,
      type: 'nothing-to-settle'
    });
  });

  it('refuses another version, a released lay, and a second run of the studio, naming the first', async () => {
    expect(await refusal(settleRuns.create(scope, lay, { ...quick, version: 9 }))).toMatchObject({
      status: 409,
      type: 'lay-out-of-date'
    });
    const { job } = await begin();
    const { id: second } = await lays.create(scope, { orderId: rows.order, clothId: rows.lining });
    expect(await refusal(begin({}, second))).toMatchObject({
      status: 409,
      type: 'settle-running',
      extra: { job, lay, layName: 'Lay 1' }
    });
    // Another studio has its own.
    const elsewhere = cast.elsewhere.owner.scope;
    const theirs = await makeOrder(elsewhere);
    const { id: other } = await lays.create(elsewhere, { orderId: theirs.order, clothId: theirs.main });
    await settleRuns.create(elsewhere, other, { ...quick, version: 1 });
    // One that was told to stop, but has not ended yet, is no obstacle.
    await cast
      .db('jobs')
      .where({ id: job })
      .update({ state: 'running', lease_until: Date.now() + 1e6 });
    await jobs.stop(scope, job);
    await begin({}, second);
    await cast.db('lays').where({ id: lay }).update({ state: 'cut' });
    expect(await refusal(begin())).toMatchObject({ status: 409, type: 'lay-cut' });
  });
});

describe('the result', () => {
  it('stays on offer with the lay it began with until it is taken or left, even when the lay has changed', async () => {
    const { document } = await lays.read(scope, lay);
    const { job } = await begin();
    await firstLayOf(job);
    await save((now) => ({ ...now, strip: { ...now.strip, reserve: 50 } }));
    expect(await settleRuns.read(cast.here.owner.scope, lay)).toMatchObject({
      version: 1,
      document,
      job: { id: job }
    });
    await settleRuns.answer(scope, lay, job, 'left');
    expect(await settleRuns.read(scope, lay)).toBeNull();
  });

  it('becomes a lay of its own beside the changed one', async () => {
    const { job } = await begin();
    await firstLayOf(job);
    await save((now) => ({ ...now, strip: { ...now.strip, reserve: 50 } }));
    const changed = await lays.read(scope, lay);
    const { id } = await settleRuns.keepAsLay(scope, lay, job, 'Settled');
    expect(await lays.read(scope, lay)).toEqual(changed);
    const made = await lays.read(scope, id);
    expect(made).toMatchObject({ name: 'Settled', state: 'open', version: 1 });
    expect(made.document.placements).toEqual((await told(job)).best!.placements);
    expect(await settleRuns.read(scope, lay)).toBeNull();
  });

  it('of another lay or another studio is not found', async () => {
    const { job } = await begin();
    const { id: second } = await lays.create(scope, { orderId: rows.order, clothId: rows.main });
    const elsewhere = cast.elsewhere.owner.scope;
    for (const work of [
      settleRuns.answer(scope, second, job, 'taken'),
      settleRuns.keepAsLay(scope, second, job, 'Mine'),
      settleRuns.read(elsewhere, lay),
      settleRuns.answer(elsewhere, lay, job, 'left'),
      settleRuns.keepAsLay(elsewhere, lay, job, 'Mine'),
      jobs.read(elsewhere, job)
    ])
      expect(await refusal(work)).toMatchObject({ status: 404 });
  });
});

describe('a run that is interrupted', () => {
  const best = async (job: string) => (await told(job))?.best ?? null;

  it('is stopped with its best so far', async () => {
    const { job } = await begin({ budgetSeconds: null });
    const drained = runner.drain();
    await vi.waitFor(async () => expect(await best(job)).not.toBeNull(), { timeout: 20_000 });
    await jobs.stop(scope, job);
    await drained;
    const found = await jobs.read(scope, job);
    // These few pieces may be closed before anybody can stop.
    expect(['stopped', 'done']).toContain(found.state);
    expect((found.result as SettleProgress).best).not.toBeNull();
  });

  it('goes on from its best after a shutdown, as long as is left of its budget', async () => {
    const { job } = await begin({ budgetSeconds: 4 });
    void runner.fill();
    await vi.waitFor(async () => expect(await best(job)).not.toBeNull(), { timeout: 20_000 });
    await runner.shutDown();
    const interrupted = await told(job);
    runner = new JobRunner();
    await runner.drain();
    const whole = await told(job);
    expect((await jobs.read(scope, job)).state).toBe('done');
    if (interrupted.ended === null) expect(whole.turns).toBe(2);
    expect(whole.best!.length).toBeLessThanOrEqual(interrupted.best!.length);
    expect(whole.best!.placements).toHaveLength(9);
    expect((await lays.read(scope, lay)).version).toBe(1);
  });

  it('goes on from what a dead process had told, and keeps pieces of the Rail and locks apart', async () => {
    const { job: first } = await begin();
    await firstLayOf(first);
    const one = await told(first);
    await save((document) => ({ ...document, placements: one.best!.placements.slice(0, 3) }));
    const { job } = await begin({ pieces: 'loose', from: 'here', budgetSeconds: 3 });
    const stays = (await lays.read(scope, lay)).document.placements;
    await cast
      .db('jobs')
      .where({ id: job })
      .update({
        state: 'running',
        attempts: 1,
        lease_owner: 'a process that is gone',
        lease_until: Date.now() - 1,
        progress: JSON.stringify({ ...one, seconds: 1, turns: 1, ended: null } satisfies SettleProgress)
      });
    await runner.drain();
    const whole = await told(job);
    expect(whole.turns).toBe(2);
    expect(whole.best!.placements).toEqual(expect.arrayContaining([...stays]));
    expect(whole.best!.placements).toHaveLength(9);
    expect(whole.best!.length).toBeLessThanOrEqual(one.best!.length + 0.001);
  });
});
