import { availableParallelism } from 'node:os';
import { check } from '$lib/lay/check';
import { leastLength } from '$lib/lay/least-length';
import { clothToBuy, readingsOf } from '$lib/lay/readings';
import type { Tried } from '$lib/lay/trial';
import { problemFaults } from '$lib/settle/faults';
import type { SettleResult } from '$lib/settle/problem';
import { laidBy, newStops, problemOfRun } from '$lib/settle/run';
import {
  candidatesOf,
  trialInput,
  type Candidate,
  type TrialInput,
  type TrialProgress
} from './cloth-trials';
import { newId } from './ids';
import * as jobs from './jobs';
import { log } from './log';
import { studioScope } from './scope';
import { settleWithWorkers } from './settle-workers';
import { openWorker } from './worker-thread';

/*
 * The job of a trial: one cloth after the other, each for its share of time. Between two it gives its place to another
 * studio that waits, and goes on with the next cloth at its next turn.
 */

const MEMORY_MB = 512;

export const job: jobs.JobKind<TrialInput> = {
  input: trialInput,
  permission: 'lays: change',
  lane: 'long',
  async run(input, run): Promise<TrialProgress> {
    // Candidates carry no price, so that it does not matter who asked.
    const scope = run.scope ?? studioScope('');
    const candidates = await candidatesOf(scope, input);
    const former = (run.previous as TrialProgress | null)?.tried ?? [];
    const tried = former.filter((one) => candidates.some(({ id }) => id === one.id));
    const of = candidates.length;
    run.progress({ tried, of });
    for (const candidate of candidates) {
      if (tried.some(({ id }) => id === candidate.id)) continue;
      const one = await tryOn(candidate, input.seconds, run);
      if (run.stopped()) break;
      run.signal.throwIfAborted();
      tried.push(one);
      run.progress({ tried, of });
      if (tried.length < of && (await run.othersWait())) throw new jobs.HandedBack();
    }
    return { tried, of };
  }
};

/** The pieces settled on one cloth for `seconds`; what no search could lay is said at once. */
async function tryOn(candidate: Candidate, seconds: number, run: jobs.JobRun): Promise<Tried> {
  const { id, document, book } = candidate;
  const needed = document.needs.reduce((sum, { count }) => sum + count, 0);
  const nothing: Tried = {
    id,
    needed,
    leftOver: needed,
    lengthUsed: 0,
    efficiency: null,
    leastLength: leastLength(document, book).length,
    toBuy: clothToBuy(document.strip, 0),
    shareOfLength: null,
    hopeless: null,
    placements: []
  };
  const choice = { from: 'scratch', pieces: 'all' } as const;
  const { settle, placementsOf } = problemOfRun(document, book, choice, null);
  const [fault] = problemFaults(settle.problem);
  if (fault) return { ...nothing, hopeless: fault.message };
  const before = { document, verdict: check(document, book) };
  let best = nothing;
  const consider = (result: SettleResult): void => {
    const laid = laidBy(document, { placements: placementsOf(result, newId) });
    const verdict = check(laid, book);
    const wrong = newStops(before, { document: laid, verdict }, result.leftOver.length);
    if (wrong.length > 0) {
      log.error(
        { job: run.id, findings: wrong.slice(0, 5).map(({ message }) => message) },
        'a tried lay did not pass the check and is not shown'
      );
      return;
    }
    const readings = readingsOf(laid, book);
    const { strip } = document;
    best = {
      ...nothing,
      leftOver: result.leftOver.length,
      lengthUsed: readings.lengthUsed,
      efficiency: readings.efficiency,
      toBuy: readings.clothToBuy,
      shareOfLength: strip.length === null ? null : Math.min(1, readings.lengthUsed / strip.length),
      placements: laid.placements
    };
  };
  await settleWithWorkers(settle.problem, {
    spawn: (data) => openWorker('settle', data, MEMORY_MB),
    workers: Math.max(1, availableParallelism() - 1),
    seed: 1,
    seconds,
    signal: run.signal,
    tellEvery: 500,
    onBest: consider
  });
  return best;
}
