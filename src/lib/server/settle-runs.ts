import type { LayDocument } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import { openLayDocument } from '$lib/lay/stored-lay';
import { problemFaults } from '$lib/settle/faults';
import { beyondSettle } from '$lib/settle/from-lay';
import {
  laidBy,
  problemOfRun,
  type SettleBest,
  type SettleChoice,
  type SettleProgress
} from '$lib/settle/run';
import { database } from './database';
import * as jobs from './jobs';
import { current, outOfDate, refuseUnlessOpen, rowOf } from './lay-current';
import * as lays from './lays';
import { invalid, notFound, Problem } from './problem';
import type { Scope } from './scope';

/*
 * Settle runs: each is a job that lays the pieces of one lay, as it was when the run began. The lay itself is never
 * written: the person takes the result, or leaves it. settle-job.ts runs them.
 */

/** A run with the lay that it began with. */
export interface SettleRun {
  readonly job: jobs.Job;
  readonly lay: string;
  /** The version of the lay, and the lay itself, when the run began. */
  readonly version: number;
  readonly document: LayDocument;
  readonly choice: SettleChoice;
}

export type SettleAnswer = 'taken' | 'left';

interface RunRow {
  job_id: string;
  lay_id: string;
  lay_version: number;
  document: string;
  panels: string;
  choice: string;
  answer: SettleAnswer | null;
}

/**
 * Begins a settle run of the lay's `version` and gives its job. 409 when that version is no longer current, when the lay is
 * released, or when a run of this studio goes on; 400 `cannot-settle` with every piece that stands in the way.
 */
export async function create(
  scope: Scope,
  layId: string,
  { version, ...choice }: SettleChoice & { readonly version: number },
  now = Date.now()
): Promise<{ job: string }> {
  const { row, document, panels } = await current(scope, layId);
  refuseUnlessOpen(row);
  if (row.version !== version) throw await outOfDate(scope, layId);
  refuseHopeless(document, panels, choice);
  return database().transaction(async (trx) => {
    const running = await trx('settle_runs')
      .join('jobs', 'jobs.id', 'settle_runs.job_id')
      .join('lays', 'lays.id', 'settle_runs.lay_id')
      .where({ 'settle_runs.studio_id': scope.studio })
      .whereIn('jobs.state', ['waiting', 'running'])
      // One that was told to stop ends in a moment.
      .where({ 'jobs.stop_wanted': 0 })
      .first<{ job: string; lay: string; name: string } | undefined>({
        job: 'jobs.id',
        lay: 'lays.id',
        name: 'lays.name'
      });
    if (running) throw oneAtATime(running, layId);
    await trx('settle_runs')
      .where({ studio_id: scope.studio, lay_id: layId })
      .whereNull('answer')
      .update({ answer: 'left' });
    const job = await jobs.enqueue(scope, 'settle', {}, { db: trx, now });
    await trx('settle_runs').insert({
      job_id: job,
      studio_id: scope.studio,
      lay_id: layId,
      lay_version: version,
      document: JSON.stringify(document),
      panels: JSON.stringify(panels),
      choice: JSON.stringify(choice),
      created_at: now
    });
    return { job };
  });
}

function oneAtATime(running: { job: string; lay: string; name: string }, layId: string): Problem {
  return new Problem(
    409,
    'settle-running',
    'A settle run goes on',
    running.lay === layId
      ? 'This lay is being settled already. Stop that run first, or wait for it.'
      : `“${running.name}” is being settled. A studio settles one lay at a time: stop that run first, or wait for it.`,
    { job: running.job, lay: running.lay, layName: running.name }
  );
}

/** Refuses what no search could lay, before anything runs. */
function refuseHopeless(document: LayDocument, panels: PanelBook, choice: SettleChoice): void {
  const beyond = beyondSettle(document);
  if (beyond !== null) throw new Problem(400, 'cannot-settle', 'This cloth can’t be settled on', beyond);
  const { problem } = problemOfRun(document, panels, choice, null).settle;
  if (problem.pieces.length === 0)
    throw new Problem(
      400,
      'nothing-to-settle',
      'Nothing to settle',
      choice.pieces === 'loose'
        ? 'No piece hangs on the Rail. Settle all pieces instead.'
        : 'Every piece on the cloth is locked, and none hangs on the Rail.'
    );
  // What only stays, because the loose pieces are laid around it, may lie as badly as it likes: the check tells of it.
  const free = new Set(document.placements.filter(({ locked }) => !locked).map(({ id }) => id));
  const faults = problemFaults(problem).filter(({ pieces }) => !pieces.some((id) => free.has(id)));
  if (faults.length > 0)
    throw new Problem(
      400,
      'cannot-settle',
      'These pieces can’t be settled',
      faults.map(({ message }) => message).join(' '),
      { faults: faults.slice(0, 50) }
    );
}

const columns = ['job_id', 'lay_id', 'lay_version', 'document', 'panels', 'choice', 'answer'].map(
  (name) => `settle_runs.${name}`
);

/** The lay's run that goes on, or whose result the person has neither taken nor left; null when there is none. */
export async function read(scope: Scope, layId: string): Promise<SettleRun | null> {
  await rowOf(scope, layId);
  const row = await database()('settle_runs')
    .where({ studio_id: scope.studio, lay_id: layId })
    .whereNull('answer')
    .orderBy('created_at', 'desc')
    .orderBy('job_id', 'desc')
    .first<RunRow | undefined>(columns);
  if (!row) return null;
  return {
    job: await jobs.read(scope, row.job_id),
    lay: row.lay_id,
    version: row.lay_version,
    document: openLayDocument(JSON.parse(row.document)),
    choice: JSON.parse(row.choice) as SettleChoice
  };
}

/** What the job of a run works with. 404 when its lay is gone. */
export async function inputOf(
  job: string
): Promise<{ document: LayDocument; panels: PanelBook; choice: SettleChoice }> {
  const row = await database()('settle_runs').where({ job_id: job }).first<RunRow | undefined>(columns);
  if (!row) throw notFound('lay');
  return {
    document: openLayDocument(JSON.parse(row.document)),
    panels: JSON.parse(row.panels) as PanelBook,
    choice: JSON.parse(row.choice) as SettleChoice
  };
}

/** Whether anybody can still want the result: false once the lay is gone. */
export async function isWanted(job: string): Promise<boolean> {
  return (await database()('settle_runs').where({ job_id: job }).first('job_id')) !== undefined;
}

async function runOfLay(scope: Scope, layId: string, job: string): Promise<RunRow> {
  const row = await database()('settle_runs')
    .where({ studio_id: scope.studio, lay_id: layId, job_id: job })
    .first<RunRow | undefined>(columns);
  if (!row) throw notFound('settle run');
  return row;
}

/** The best lay of a job, whether it is over or not; null while there is none. */
export function bestOf(job: jobs.Job): SettleBest | null {
  return ((job.result ?? job.progress) as SettleProgress | null)?.best ?? null;
}

/** The person has taken the result into the lay, or leaves it: it is offered no more, and a run that goes on is stopped. */
export async function answer(
  scope: Scope,
  layId: string,
  job: string,
  answered: SettleAnswer
): Promise<Record<string, never>> {
  await runOfLay(scope, layId, job);
  await jobs.stop(scope, job);
  await database()('settle_runs')
    .where({ studio_id: scope.studio, job_id: job })
    .update({ answer: answered });
  return {};
}

/** Keeps the best of a run as a lay of its own beside the one that it began with, and gives its id. */
export async function keepAsLay(
  scope: Scope,
  layId: string,
  job: string,
  name: string,
  now = Date.now()
): Promise<{ id: string }> {
  const row = await runOfLay(scope, layId, job);
  const best = bestOf(await jobs.read(scope, job));
  if (!best) throw invalid({ job: 'This settle run has no lay yet.' });
  const document = laidBy(openLayDocument(JSON.parse(row.document)), best);
  const made = await lays.duplicate(scope, layId, name, now, document);
  await answer(scope, layId, job, 'taken');
  return made;
}
