import path from 'node:path';
import { Worker } from 'node:worker_threads';
import { describe, expect, it } from 'vitest';
import { settleWithWorkers, type SettleRun } from '$lib/server/settle-workers';
import type { SettleResult } from '$lib/settle/problem';
import { randomFrom } from '$lib/settle/random';
import { validate } from '$lib/settle/validate';
import { oddOutline, piece, problem } from '../unit/settle/made-up-problem';

const random = randomFrom(11);
const asked = problem(
  Array.from({ length: 10 }, (_, k) =>
    piece(`p${k}`, oddOutline(random, 60 + 120 * random(), 5 + (k % 6)), { copies: 2 })
  ),
  { clearance: 2 }
);

const run = (changes: Partial<SettleRun>) =>
  settleWithWorkers(asked, {
    spawn: (workerData) =>
      new Worker(path.join(process.env.WARPWISE_WORKERS!, 'settle.worker.js'), { workerData }),
    workers: 2,
    seed: 1,
    seconds: 1,
    ...changes
  });

describe('settling with several workers', () => {
  it('repeats exactly when lays are exchanged at fixed counts, and differs by seed', async () => {
    const repeatable = { rounds: 6, evaluations: 6000 };
    const [one, again, other] = await Promise.all([
      run({ repeatable }),
      run({ repeatable }),
      run({ repeatable, seed: 2 })
    ]);
    expect(again.result).toEqual(one.result);
    expect(again.evaluations).toBe(one.evaluations);
    expect(other.result.placements).not.toEqual(one.result.placements);
    expect(validate(asked, one.result)).toEqual([]);
  });

  it('tells each better lay, every one valid, the first at once', async () => {
    const told: SettleResult[] = [];
    const outcome = await run({ onBest: (result) => told.push(result), tellEvery: 20 });
    expect(outcome.refused).toEqual([]);
    expect(told.length).toBeGreaterThan(1);
    expect(told.at(-1)).toEqual(outcome.result);
    for (const [i, result] of told.entries()) {
      expect(validate(asked, result)).toEqual([]);
      if (i > 0) expect(result.length).toBeLessThan(told[i - 1]!.length);
    }
  });

  it('ends softly with its best when it is stopped', async () => {
    const stop = new AbortController();
    const outcome = await run({
      seconds: Infinity,
      signal: stop.signal,
      onBest: () => stop.abort()
    });
    expect(outcome.result.placements).toHaveLength(20);
  });

  it('fails with the error of a worker that fails', async () => {
    const broken = { ...asked, pieces: [{ ...asked.pieces[0]!, outline: null as never }] };
    await expect(
      settleWithWorkers(broken, {
        spawn: (workerData) =>
          new Worker(path.join(process.env.WARPWISE_WORKERS!, 'settle.worker.js'), { workerData }),
        workers: 1,
        seed: 1,
        seconds: 1
      })
    ).rejects.toThrow();
  });
});
