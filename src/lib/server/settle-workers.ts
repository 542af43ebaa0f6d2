import type { Worker } from 'node:worker_threads';
import type { SettleProblem, SettleResult } from '$lib/settle/problem';
import type { SettleWorkerData, SliceAnswer, SliceRequest } from '$lib/settle/settle.worker';
import type { Breach } from '$lib/settle/validate';

/*
 * Settles a problem with several searches side by side. Each has its own seed and goes on from the best lay of all.
 */

export interface SettleRun {
  /** Starts one worker thread. */
  readonly spawn: (data: SettleWorkerData) => Worker;
  readonly workers: number;
  readonly seed: number;
  /** How long to go on; Infinity until the signal aborts or nothing better can exist. */
  readonly seconds: number;
  /** How long a former part of the same run took: the search goes on at that share of the whole. Default 0. */
  readonly spent?: number;
  /**
   * Set for a run that repeats exactly: so many rounds of so many positions a worker, the best lay exchanged after each.
   * `seconds` counts for nothing then.
   */
  readonly repeatable?: { readonly rounds: number; readonly evaluations: number };
  /** Ends the run softly, with the best so far. */
  readonly signal?: AbortSignal;
  /** Each better lay, checked, at most every `tellEvery` ms (default 250). */
  readonly onBest?: (result: SettleResult, seconds: number) => void;
  readonly tellEvery?: number;
  /** Called about ten times a second with all positions looked at. */
  readonly onProgress?: (evaluations: number, seconds: number) => void;
}

export interface SettleOutcome {
  readonly result: SettleResult;
  readonly evaluations: number;
  readonly seconds: number;
  /** Lays that the independent check refused; they were never told. Empty unless the search has a fault. */
  readonly refused: readonly (readonly Breach[])[];
}

const SLICE_MS = 100;
/** Without an end the search explores and squeezes in turns of so many seconds. */
const CYCLE = 120;

/**
 * Runs the searches and gives the best lay found.
 * @throws the error of a worker that fails; an Error if no lay passed the check
 */
export async function settleWithWorkers(problem: SettleProblem, run: SettleRun): Promise<SettleOutcome> {
  const { repeatable, tellEvery = 250, spent = 0 } = run;
  const started = performance.now();
  const elapsed = () => (performance.now() - started) / 1000;
  const horizon = repeatable ? (repeatable.rounds * repeatable.evaluations) / 1e6 : spent + run.seconds;
  const floor = horizon <= 20 ? 0.01 : horizon <= 150 ? 0.006 : 0.004;
  const shareAt = (seconds: number) =>
    Number.isFinite(run.seconds)
      ? (spent + seconds) / (spent + run.seconds)
      : ((spent + seconds) % CYCLE) / CYCLE;

  let best: SettleResult | null = null;
  let shared: Float64Array | null = null;
  let lastTold = -Infinity;
  let ended = false;
  const refused: (readonly Breach[])[] = [];
  const counts = new Float64Array(run.workers);

  const threads = Array.from({ length: run.workers }, (_, index) =>
    openThread(run.spawn({ problem, seed: run.seed * 1000 + index, floor }))
  );

  function take(index: number, answer: SliceAnswer): void {
    counts[index] = answer.evaluations;
    if (answer.breaches.length > 0) refused.push(answer.breaches);
    if (answer.lay && (!shared || answer.lay[0]! < shared[0]!)) shared = answer.lay;
    if (answer.result && (!best || better(answer.result, best))) {
      best = answer.result;
      lastTold = performance.now();
      run.onBest?.(best, elapsed());
    }
    if (answer.done) ended = true;
  }

  try {
    if (repeatable) {
      for (let round = 0; round < repeatable.rounds && !ended && !run.signal?.aborted; round++) {
        const request: SliceRequest = {
          work: { evaluations: repeatable.evaluations },
          share: round / repeatable.rounds,
          offer: shared,
          tell: true
        };
        // Taken in the order of the workers, whichever was first.
        const answers = await Promise.all(threads.map((thread) => thread.ask(request)));
        answers.forEach((answer, index) => take(index, answer));
        run.onProgress?.(sum(counts), elapsed());
      }
    } else {
      await Promise.all(
        threads.map(async (thread, index) => {
          const seen: { lay: Float64Array | null } = { lay: null };
          do {
            const offer: Float64Array | null = shared !== seen.lay ? shared : null;
            seen.lay = shared;
            const left = (run.seconds - elapsed()) * 1000;
            const tell = !best || performance.now() - lastTold >= tellEvery;
            take(
              index,
              await thread.ask({
                work: { milliseconds: best ? Math.max(0, Math.min(SLICE_MS, left)) : 0 },
                share: shareAt(elapsed()),
                offer,
                tell
              })
            );
            if (index === 0) run.onProgress?.(sum(counts), elapsed());
          } while (!ended && !run.signal?.aborted && elapsed() < run.seconds);
        })
      );
    }
    const last: SliceRequest = { work: { evaluations: 0 }, share: 1, offer: null, tell: true };
    for (const [index, thread] of threads.entries()) take(index, await thread.ask(last));
  } finally {
    await Promise.all(threads.map((thread) => thread.close()));
  }
  if (!best) throw new Error(`No lay passed the check: ${JSON.stringify(refused[0]?.slice(0, 3) ?? [])}`);
  return { result: best, evaluations: sum(counts), seconds: elapsed(), refused };
}

/** More pieces placed, or as many on less cloth. */
function better(a: SettleResult, b: SettleResult): boolean {
  return a.leftOver.length !== b.leftOver.length
    ? a.leftOver.length < b.leftOver.length
    : a.length < b.length;
}

const sum = (counts: Float64Array) => counts.reduce((total, count) => total + count, 0);

/** A worker as a question and an answer; its failure fails the question. */
function openThread(worker: Worker) {
  let waiting: { resolve: (answer: SliceAnswer) => void; reject: (error: unknown) => void } | null = null;
  let failure: unknown = null;
  const fail = (error: unknown) => {
    failure = error;
    waiting?.reject(error);
    waiting = null;
  };
  worker.on('message', (answer: SliceAnswer) => {
    waiting?.resolve(answer);
    waiting = null;
  });
  worker.on('error', fail);
  worker.on('messageerror', fail);
  worker.on('exit', (code) => fail(new Error(`The settle worker ended with code ${code}`)));
  return {
    ask: (request: SliceRequest) =>
      new Promise<SliceAnswer>((resolve, reject) => {
        if (failure) return reject(failure);
        waiting = { resolve, reject };
        worker.postMessage(request);
      }),
    close: async () => {
      worker.removeAllListeners('exit');
      await worker.terminate();
    }
  };
}
