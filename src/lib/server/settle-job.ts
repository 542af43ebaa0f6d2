import { availableParallelism } from 'node:os';
import { z } from 'zod';
import { check } from '$lib/lay/check';
import { readingsOf } from '$lib/lay/readings';
import {
  isBetter,
  laidBy,
  LONGEST_RUN,
  newStops,
  problemOfRun,
  type SettleBest,
  type SettleProgress
} from '$lib/settle/run';
import type { SettleResult } from '$lib/settle/problem';
import { newId } from './ids';
import * as jobs from './jobs';
import { log } from './log';
import * as settleRuns from './settle-runs';
import { settleWithWorkers } from './settle-workers';
import { openWorker } from './worker-thread';

/*
 * The job that a settle run is: searches in threads of its own on all cores but one, and gives its place to another
 * studio that waits after at most one slice.
 */

/** How long a studio keeps the threads while another one waits, ms. */
const SLICE_MS = 15_000;
const MEMORY_MB = 512;
const TELL_EVERY_MS = 1000;
/** Each turn searches with seeds of its own, so that none repeats another. */
const SEEDS_APART = 7919;

const nothingYet: SettleProgress = { seconds: 0, evaluations: 0, turns: 0, best: null, ended: null };

export const job: jobs.JobKind<Record<string, unknown>> = {
  input: z.record(z.string(), z.unknown()),
  permission: 'lays: change',
  lane: 'long',
  async run(_input, run): Promise<SettleProgress> {
    const { document, panels, choice } = await settleRuns.inputOf(run.id);
    const former = (run.previous as SettleProgress | null) ?? nothingYet;
    const turns = former.turns + 1;
    const whole = choice.budgetSeconds ?? LONGEST_RUN;
    const before = { document, verdict: check(document, panels) };
    const { settle, placementsOf } = problemOfRun(document, panels, choice, former.best);
    let best = former.best;
    let told: SettleProgress = { ...former, turns };
    const tell = (seconds: number, evaluations: number): void => {
      told = {
        seconds: former.seconds + seconds,
        evaluations: former.evaluations + evaluations,
        turns,
        best,
        ended: null
      };
      run.progress(told);
    };

    /** Takes a result over if it is better and the lay's own check has nothing against it. */
    function consider(result: SettleResult, seconds: number): void {
      const laid = laidBy(document, { placements: placementsOf(result, newId) });
      const readings = readingsOf(laid, panels);
      const next: SettleBest = {
        placements: laid.placements,
        length: readings.lengthUsed,
        efficiency: readings.efficiency,
        leftOver: result.leftOver.length + settle.notLain,
        at: former.seconds + seconds
      };
      if (!isBetter(next, best)) return;
      const wrong = newStops(before, { document: laid, verdict: check(laid, panels) }, next.leftOver);
      if (wrong.length > 0)
        log.error(
          { job: run.id, findings: wrong.slice(0, 5).map(({ message }) => message) },
          'a settled lay did not pass the check and is not shown'
        );
      else best = next;
    }

    const soft = new AbortController();
    const end = (): void => soft.abort();
    run.signal.addEventListener('abort', end, { once: true });
    if (run.signal.aborted) end();
    let givesWay = false;
    const started = performance.now();
    const endOfSlice = async (): Promise<void> => {
      if (former.seconds + (performance.now() - started) / 1000 >= LONGEST_RUN) return end();
      if (!(await settleRuns.isWanted(run.id))) return end();
      givesWay = await run.othersWait();
      if (givesWay) end();
    };
    const sliceTimer = setInterval(
      () => void endOfSlice().catch((error: unknown) => log.error({ job: run.id, err: error }, 'settle')),
      SLICE_MS
    );

    let ended: SettleProgress['ended'] = 'time';
    const left = Math.max(0, whole - former.seconds);
    try {
      const outcome = await settleWithWorkers(settle.problem, {
        spawn: (data) => openWorker('settle', data, MEMORY_MB),
        workers: Math.max(1, availableParallelism() - 1),
        seed: (choice.seed ?? 1) + former.turns * SEEDS_APART,
        seconds: choice.budgetSeconds === null ? Infinity : left,
        spent: former.seconds,
        signal: soft.signal,
        tellEvery: TELL_EVERY_MS,
        onBest: consider,
        onProgress: (evaluations, seconds) => tell(seconds, evaluations)
      });
      for (const breaches of outcome.refused)
        log.error(
          { job: run.id, breaches: breaches.slice(0, 5) },
          'a settled lay did not pass the independent check and is not shown'
        );
      tell(outcome.seconds, outcome.evaluations);
      if (!soft.signal.aborted && outcome.seconds < left) ended = 'least';
    } finally {
      clearInterval(sliceTimer);
      run.signal.removeEventListener('abort', end);
    }
    if (run.stopped()) ended = 'stopped';
    // The shutdown of the server: the run goes on after the restart.
    else run.signal.throwIfAborted();
    if (givesWay && ended === 'time' && told.seconds < whole) throw new jobs.HandedBack();
    return { ...told, ended };
  }
};
