import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { JobRunner } from '$lib/server/job-runner';
import { registerAllJobs } from '$lib/server/job-kinds';
import * as jobs from '$lib/server/jobs';
import { log } from '$lib/server/log';
import * as lays from '$lib/server/lays';
import * as settleRuns from '$lib/server/settle-runs';
import * as workers from '$lib/server/settle-workers';
import type { SettleResult } from '$lib/settle/problem';
import type { SettleProgress } from '$lib/settle/run';
import { makeCast, type Cast, type House } from './cast';
import { makeOrder } from './lay-orders';

/*
 * How settle runs share the threads, and what becomes of a search that errs: the search itself is played here.
 */

let cast: Cast;
let runner: JobRunner;

beforeEach(async () => {
  vi.useFakeTimers({ toFake: ['setInterval', 'clearInterval'] });
  cast = await makeCast();
  registerAllJobs();
  runner = new JobRunner();
});
afterEach(async () => {
  await runner.shutDown();
  await cast.close();
  vi.restoreAllMocks();
  vi.useRealTimers();
});

async function begin(house: House): Promise<string> {
  const { scope } = house.owner;
  const rows = await makeOrder(scope);
  const { id } = await lays.create(scope, { orderId: rows.order, clothId: rows.main });
  const { job } = await settleRuns.create(scope, id, {
    version: 1,
    budgetSeconds: 60,
    from: 'scratch',
    pieces: 'all'
  });
  return job;
}

const stateOf = async (job: string): Promise<string> =>
  (await cast.db('jobs').where({ id: job }).first()).state;
const settled = () => new Promise((resolve) => setTimeout(resolve, 30));

it('a studio keeps the threads while nobody waits, and gives them up after a slice when another does', async () => {
  const spent: number[] = [];
  vi.spyOn(workers, 'settleWithWorkers').mockImplementation(async (_problem, run) => {
    spent.push(run.spent!);
    await new Promise((resolve) => run.signal!.addEventListener('abort', resolve));
    const result: SettleResult = { placements: [], length: 0, density: 0, leftOver: [], evaluations: 5 };
    return { result, evaluations: 5, seconds: 15, refused: [] };
  });
  const here = await begin(cast.here);
  await runner.fill();
  await vi.advanceTimersByTimeAsync(15_000);
  await settled();
  expect([await stateOf(here), spent.length]).toEqual(['running', 1]);

  const there = await begin(cast.elsewhere);
  await runner.fill();
  expect(await stateOf(there)).toBe('waiting');
  await vi.advanceTimersByTimeAsync(15_000);
  await vi.waitFor(async () => expect(await stateOf(there)).toBe('running'));
  expect(await cast.db('jobs').where({ id: here }).first()).toMatchObject({ state: 'waiting', attempts: 0 });

  await vi.advanceTimersByTimeAsync(15_000);
  await vi.waitFor(async () => expect(await stateOf(here)).toBe('running'));
  expect(await stateOf(there)).toBe('waiting');
  // It goes on where it was.
  expect(spent).toEqual([0, 0, 15]);
  const { progress } = await jobs.read(cast.here.owner.scope, here);
  expect((progress as SettleProgress).turns).toBeGreaterThanOrEqual(1);
});

it('ends at the end of a slice when its lay is gone, and does not keep the studio from settling', async () => {
  const search = vi.spyOn(workers, 'settleWithWorkers').mockImplementation(async (_problem, run) => {
    await new Promise((resolve) => run.signal!.addEventListener('abort', resolve));
    const result: SettleResult = { placements: [], length: 0, density: 0, leftOver: [], evaluations: 5 };
    return { result, evaluations: 5, seconds: 15, refused: [] };
  });
  const job = await begin(cast.here);
  await runner.fill();
  await vi.waitFor(() => expect(search).toHaveBeenCalled());
  await cast.db('lays').delete();
  await vi.advanceTimersByTimeAsync(15_000);
  await vi.waitFor(async () => expect(await stateOf(job)).toBe('done'));
});

describe('a search that errs', () => {
  it('shows nothing that breaks a rule of the lay, and leaves word of it in the log', async () => {
    const said = vi.spyOn(log, 'error').mockReturnValue(undefined);
    vi.spyOn(workers, 'settleWithWorkers').mockImplementation(async (problem, run) => {
      // Everything in one place.
      const placements = problem.pieces.flatMap(({ id, copies, ways }) =>
        Array.from({ length: copies }, (_, copy) => ({ piece: id, copy, x: 450, y: 450, ...ways[0]! }))
      );
      const result: SettleResult = { placements, length: 500, density: 0.9, leftOver: [], evaluations: 1 };
      run.onBest!(result, 1);
      return { result, evaluations: 1, seconds: 1, refused: [] };
    });
    const job = await begin(cast.here);
    await runner.drain();
    const { result, progress } = await jobs.read(cast.here.owner.scope, job);
    expect((result as SettleProgress).best).toBeNull();
    expect(JSON.stringify(progress)).not.toContain('placements');
    expect(said).toHaveBeenCalledWith(
      expect.objectContaining({
        job,
        findings: expect.arrayContaining([expect.stringContaining('overlap')])
      }),
      expect.stringContaining('not shown')
    );
  });

  it('logs what the independent check refused', async () => {
    const said = vi.spyOn(log, 'error').mockReturnValue(undefined);
    const breach = { rule: 'nap' as const, pieces: ['a#0'], measure: 180 };
    vi.spyOn(workers, 'settleWithWorkers').mockResolvedValue({
      result: { placements: [], length: 0, density: 0, leftOver: [], evaluations: 1 },
      evaluations: 1,
      seconds: 60,
      refused: [[breach]]
    });
    const job = await begin(cast.here);
    await runner.drain();
    expect(said).toHaveBeenCalledWith(
      expect.objectContaining({ job, breaches: [breach] }),
      expect.stringContaining('not shown')
    );
  });
});
