import { parentPort, workerData } from 'node:worker_threads';
import type { SettleProblem, SettleResult } from './problem';
import { createSolver } from './solver';
import { validate, type Breach } from './validate';

/*
 * One search in a thread of its own. It is asked for one slice of work at a time and answers when the slice is done.
 */

export interface SettleWorkerData {
  readonly problem: SettleProblem;
  readonly seed: number;
  readonly floor: number;
}

export interface SliceRequest {
  /** How long to work: milliseconds, or positions looked at where runs must repeat exactly. */
  readonly work: { readonly milliseconds: number } | { readonly evaluations: number };
  /** Share of the whole time that is gone, 0 … 1. */
  readonly share: number;
  /** The best lay of the other workers, to go on from. */
  readonly offer: Float64Array | null;
  /** Whether the best lay is to be told as a result, if it is new. */
  readonly tell: boolean;
}

export interface SliceAnswer {
  /** The best lay, null when it is no better than at the last answer. */
  readonly lay: Float64Array | null;
  readonly result: SettleResult | null;
  /** What the independent check found wrong with that result; it is not told then. */
  readonly breaches: readonly Breach[];
  readonly evaluations: number;
  readonly done: boolean;
  readonly least: number;
}

/** Positions looked at between two looks at the clock. */
const GRAIN = 4000;

const { problem, seed, floor } = workerData as SettleWorkerData;
const solver = createSolver(problem, { seed, floor });
let handed = 0;
let told = 0;

parentPort!.on('message', ({ work, share, offer, tell }: SliceRequest) => {
  if (offer) solver.offer(offer);
  if ('evaluations' in work) solver.step(work.evaluations, share);
  else {
    const until = performance.now() + work.milliseconds;
    do solver.step(GRAIN, share);
    while (!solver.done() && performance.now() < until);
  }
  const version = solver.version();
  let result: SettleResult | null = null;
  let breaches: readonly Breach[] = [];
  if (tell && version !== told) {
    told = version;
    result = solver.result();
    breaches = validate(problem, result);
  }
  const answer: SliceAnswer = {
    lay: version === handed ? null : solver.lay(),
    result: breaches.length === 0 ? result : null,
    breaches,
    evaluations: solver.evaluations(),
    done: solver.done(),
    least: solver.least
  };
  handed = version;
  parentPort!.postMessage(answer);
});
