import { randomUUID } from 'node:crypto';
import { database } from './database';
import * as jobs from './jobs';
import { log } from './log';
import { Problem } from './problem';
import type { Scope } from './scope';
import { studioScope } from './scope';
import * as studios from './studios';

/*
 * Runs the jobs of the table. A job is claimed with a lease that is prolonged while it runs; when the process dies, the
 * lease runs out and the job is claimed again. The next job comes from the studio that has waited longest for a turn.
 */

/** How long a claimed job may go without a sign of life, ms. */
export const lease = 30_000;
const heartbeatEvery = 10_000;
const progressEvery = 1000;
const pollEvery = 1000;
/** How many jobs run at a time. */
const slots = { quick: 2, long: 1 } as const;
type Lane = keyof typeof slots;

interface ClaimedRow {
  id: string;
  studio_id: string | null;
  kind: string;
  input: string;
  progress: string | null;
  attempts: number;
  created_by: string;
}

/** What one process runs; tests make their own. */
export class JobRunner {
  readonly #owner = randomUUID();
  readonly #running = new Map<string, { lane: Lane; abort: AbortController; end: Promise<void> }>();
  /** When each studio ('' for the installation) last had a turn. */
  readonly #turns = new Map<string, number>();
  #turn = 0;
  #timer: NodeJS.Timeout | undefined;
  #unwatch: (() => void) | undefined;
  #filling: Promise<void> = Promise.resolve();
  #open = true;

  /** Begins to look for jobs: at once whenever one is queued, and every second. */
  start(): void {
    this.#timer = setInterval(() => void this.fill(), pollEvery);
    this.#timer.unref();
    this.#unwatch = jobs.onQueued(() => void this.fill());
    void this.fill();
  }

  /** Takes no more jobs, tells those that run to stop, and waits for them. They are claimed again after the restart. */
  async shutDown(): Promise<void> {
    this.#open = false;
    clearInterval(this.#timer);
    this.#unwatch?.();
    await this.#filling;
    for (const { abort } of this.#running.values()) abort.abort(new Error('The server shuts down'));
    await Promise.all([...this.#running.values()].map(({ end }) => end));
  }

  /** Starts as many jobs as there are free slots. */
  fill(): Promise<void> {
    this.#filling = this.#filling
      .then(() => this.#fill())
      .catch((error) => log.error({ err: error }, 'jobs'));
    return this.#filling;
  }

  /** Runs everything that can be run now, and returns when nothing is left: for tests and commands. */
  async drain(): Promise<void> {
    do {
      await this.fill();
      await Promise.all([...this.#running.values()].map(({ end }) => end));
    } while (
      this.#open &&
      (await this.#candidates('quick')).length + (await this.#candidates('long')).length > 0
    );
  }

  async #fill(): Promise<void> {
    for (const lane of ['quick', 'long'] as const)
      while (this.#open && this.#count(lane) < slots[lane]) {
        const row = await this.#claim(lane);
        if (!row) break;
        const abort = new AbortController();
        const end = this.#run(row, abort)
          .catch((error) => log.error({ job: row.id, kind: row.kind, err: error }, 'job'))
          .finally(() => {
            this.#running.delete(row.id);
            if (this.#open) void this.fill();
          });
        this.#running.set(row.id, { lane, abort, end });
      }
  }

  #count(lane: Lane): number {
    return [...this.#running.values()].filter((job) => job.lane === lane).length;
  }

  /** The oldest claimable job of each studio. */
  async #candidates(lane: Lane): Promise<(ClaimedRow & { created_at: number })[]> {
    const now = Date.now();
    const kinds = jobs.kindNames().filter((kind) => (jobs.kindOf(kind).lane ?? 'quick') === lane);
    const rows = await database()('jobs')
      .whereIn('kind', kinds)
      .where((either) =>
        either
          .where((waits) => waits.where({ state: 'waiting' }).where('not_before', '<=', now))
          .orWhere((lost) => lost.where({ state: 'running' }).where('lease_until', '<', now))
      )
      .orderBy('created_at')
      .orderBy('id')
      .limit(500)
      .select<(ClaimedRow & { created_at: number })[]>(
        'id',
        'studio_id',
        'kind',
        'input',
        'progress',
        'attempts',
        'created_by',
        'created_at'
      );
    const first = new Map<string, ClaimedRow & { created_at: number }>();
    for (const row of rows) if (!first.has(row.studio_id ?? '')) first.set(row.studio_id ?? '', row);
    return [...first.values()];
  }

  async #claim(lane: Lane): Promise<ClaimedRow | null> {
    const turnOf = (row: ClaimedRow) => this.#turns.get(row.studio_id ?? '') ?? 0;
    const [row] = (await this.#candidates(lane)).sort((a, b) => turnOf(a) - turnOf(b));
    if (!row) return null;
    const now = Date.now();
    const claimed = await database()('jobs')
      .where({ id: row.id, attempts: row.attempts })
      .whereIn('state', ['waiting', 'running'])
      .update({
        state: 'running',
        lease_owner: this.#owner,
        lease_until: now + lease,
        attempts: row.attempts + 1,
        updated_at: now
      });
    this.#turns.set(row.studio_id ?? '', (this.#turn += 1));
    return claimed === 1 ? { ...row, attempts: row.attempts + 1 } : this.#claim(lane);
  }

  async #run(row: ClaimedRow, abort: AbortController): Promise<void> {
    const kind = jobs.kindOf(row.kind);
    const mine = () => database()('jobs').where({ id: row.id, lease_owner: this.#owner });
    const most = kind.attempts ?? 3;
    // A job that takes the process down each time must not do so for ever.
    if (row.attempts > most + 1) {
      await this.#close(row, { state: 'failed', error: 'This was tried several times without success.' });
      return;
    }
    let stopWanted = false;
    let newest: { value: unknown } | null = null;
    let lastWrite = 0;
    let writing: Promise<unknown> = Promise.resolve();
    const write = () => {
      if (!newest) return;
      const text = JSON.stringify(newest.value);
      newest = null;
      lastWrite = Date.now();
      writing = mine()
        .update({ progress: text, updated_at: lastWrite })
        .then(() => jobs.changed(row.id))
        .catch(reportAs(row));
    };
    const lookForStop = async () => {
      const now = await mine().first<{ stop_wanted: number } | undefined>('stop_wanted');
      // No row of ours: another process holds the lease, or the job is gone. Either way it is over here.
      stopWanted = now?.stop_wanted === 1;
      if (stopWanted || !now) abort.abort(new Error('Stopped'));
    };
    const unwatch = jobs.watch(row.id, () => void lookForStop().catch(reportAs(row)));
    const progressTimer = setInterval(write, progressEvery);
    const heartbeat = setInterval(() => {
      void mine()
        .update({ lease_until: Date.now() + lease })
        .then(lookForStop)
        .catch(reportAs(row));
    }, heartbeatEvery);

    let outcome: Outcome;
    try {
      const result = await kind.run(kind.input.parse(JSON.parse(row.input)), {
        id: row.id,
        scope: await scopeOf(row),
        previous: row.progress === null ? null : JSON.parse(row.progress),
        progress(value) {
          newest = { value };
          if (Date.now() - lastWrite >= progressEvery) write();
        },
        stopped: () => stopWanted,
        signal: abort.signal,
        othersWait: async () =>
          (await this.#candidates(kind.lane ?? 'quick')).some(({ studio_id }) => studio_id !== row.studio_id)
      });
      outcome = { state: stopWanted ? 'stopped' : 'done', result };
    } catch (failure) {
      outcome = this.#outcomeOf(failure, row, most, stopWanted);
    } finally {
      clearInterval(progressTimer);
      clearInterval(heartbeat);
      unwatch();
      write();
      await writing;
    }
    await this.#close(row, outcome);
  }

  #outcomeOf(failure: unknown, row: ClaimedRow, most: number, stopWanted: boolean): Outcome {
    if (stopWanted) return { state: 'stopped' };
    // Interrupted by the shutdown, or only giving way: the attempt does not count.
    if (!this.#open || failure instanceof jobs.HandedBack)
      return { state: 'waiting', notBefore: 0, attempts: row.attempts - 1 };
    if (failure instanceof Problem) return { state: 'failed', error: failure.message };
    log.error({ job: row.id, kind: row.kind, attempt: row.attempts, err: failure }, 'job failed');
    if (row.attempts < most) return { state: 'waiting', notBefore: Date.now() + 2000 * 4 ** row.attempts };
    return { state: 'failed', error: `Something went wrong on our side. Our name for it: ${row.id}` };
  }

  async #close(row: ClaimedRow, outcome: Outcome): Promise<void> {
    await database()('jobs')
      .where({ id: row.id, lease_owner: this.#owner })
      .update({
        state: outcome.state,
        result: outcome.result === undefined ? null : JSON.stringify(outcome.result),
        error: outcome.error ?? null,
        ...(outcome.notBefore === undefined ? {} : { not_before: outcome.notBefore }),
        ...(outcome.attempts === undefined ? {} : { attempts: outcome.attempts }),
        lease_owner: null,
        lease_until: null,
        updated_at: Date.now()
      });
    jobs.changed(row.id);
  }
}

interface Outcome {
  state: jobs.JobState;
  result?: unknown;
  error?: string;
  notBefore?: number;
  attempts?: number;
}

const reportAs = (row: ClaimedRow) => (error: unknown) => log.error({ job: row.id, err: error }, 'job');

/** In whose name a job runs: its person with the role they have today. */
async function scopeOf(row: ClaimedRow): Promise<Scope | null> {
  if (row.studio_id === null) return null;
  if (row.created_by === 'system') return studioScope(row.studio_id);
  const entered = await studios.enter(row.studio_id, row.created_by);
  if (!entered)
    throw new Problem(403, 'not-allowed', 'Not allowed', 'Whoever asked for this has left the studio.');
  return entered.scope;
}
