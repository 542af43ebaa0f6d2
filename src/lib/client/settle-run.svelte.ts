import { check } from '$lib/lay/check';
import type { LayDocument } from '$lib/lay/document';
import { readingsOf } from '$lib/lay/readings';
import { same } from '$lib/lay/same';
import type { Readings } from '$lib/lay/verdict';
import { pieces } from '$lib/lay/wording';
import { laidBy, type SettleBest, type SettleChoice, type SettleProgress } from '$lib/settle/run';
import { formatLength } from '$lib/units/length';
import { Offline, Refusal } from './lay-server';
import type { OpenLay } from './open-lay.svelte';
import { isOver, type SettleJob, type SettleRunOnServer, type SettleServer } from './settle-server';

/*
 * The settle run of the open lay: begun, watched, looked at, then taken or left. The server never writes the lay; what is
 * taken goes through the history like any other edit.
 */

export class SettleRun {
  /** The run that goes on or is on offer. */
  run: SettleRunOnServer | null = $state.raw(null);
  /** While the server is asked to begin. */
  beginning = $state(false);
  /** Why the server would not begin, in its words, one for each thing in the way. */
  refusals: readonly string[] = $state.raw([]);
  /** What is wrong with the connection, for the card. */
  trouble: string | null = $state(null);
  readonly lay: OpenLay;
  readonly #server: SettleServer;
  #unfollow: (() => void) | null = null;

  readonly progress: SettleProgress | null = $derived(this.run?.job.result ?? this.run?.job.progress ?? null);
  readonly best: SettleBest | null = $derived(this.progress?.best ?? null);
  readonly goesOn: boolean = $derived(this.run !== null && !isOver(this.run.job));
  readonly #base: LayDocument | null = $derived(this.run?.document ?? null);
  /** The lay that the run makes. */
  readonly laid: LayDocument | null = $derived(this.#base && this.best && laidBy(this.#base, this.best));
  readonly readings: Readings | null = $derived.by(() => this.laid && readingsOf(this.laid, this.lay.book));
  /** The lay before, and whether its length counts: every piece on the cloth, nothing that stops. */
  readonly before: { readonly readings: Readings; readonly counts: boolean } | null = $derived.by(() => {
    if (!this.#base) return null;
    const { readings, findings } = check(this.#base, this.lay.book);
    const counts = readings.pieces.loose === 0 && findings.every(({ severity }) => severity !== 'stops');
    return { readings, counts };
  });
  /** Whether the lay on the table is another one than the run began with. */
  readonly changed: boolean = $derived.by(() => this.#base !== null && !same(this.#base, this.lay.document));

  constructor(lay: OpenLay, server: SettleServer) {
    this.lay = lay;
    this.#server = server;
  }

  /** Looks for a run of this lay: one that goes on, or one whose result waits. */
  async resume(): Promise<void> {
    try {
      const { run } = await this.#server.current();
      if (!run) return;
      const best = (run.job.result ?? run.job.progress)?.best;
      // Nothing to take, or taken in a visit that lost its connection before it could say so.
      if (best && isOver(run.job) && same(best.placements, this.lay.document.placements)) {
        await this.#server.answer(run.job.id, 'taken');
        this.lay.say('The best that settle found is the lay on the table.');
      } else this.#attach(run);
    } catch (failure) {
      this.#failed(failure);
    }
  }

  /** Begins a run; true when it goes on. What stands in the way is in `refusals`. */
  async begin(choice: SettleChoice): Promise<boolean> {
    this.refusals = [];
    this.beginning = true;
    try {
      const version = await this.lay.saveNow();
      if (version === null) {
        this.refusals = ['Not everything is saved yet. Try again once it is.'];
        return false;
      }
      await this.#server.begin({ ...choice, version });
      this.lay.say('Settling: the table stays free meanwhile.');
      await this.resume();
      return true;
    } catch (failure) {
      const faults = failure instanceof Refusal ? failure.extra.faults : undefined;
      this.refusals = Array.isArray(faults)
        ? (faults as { message: string }[]).map(({ message }) => message)
        : [wordsOf(failure)];
      // Somebody else began one of this very lay: watch that.
      if (failure instanceof Refusal && failure.extra.lay === this.lay.id) await this.resume();
      return false;
    } finally {
      this.beginning = false;
    }
  }

  #attach(run: SettleRunOnServer): void {
    this.#unfollow?.();
    this.#unfollow = null;
    this.trouble = null;
    this.run = run;
    if (isOver(run.job)) return;
    this.#unfollow = this.#server.follow(
      run.job.id,
      (job) => this.#told(job),
      (why) => this.#failed(why)
    );
  }

  #told(job: SettleJob): void {
    if (!this.run || this.run.job.id !== job.id) return;
    const hadOne = this.best !== null;
    this.trouble = null;
    this.run = { ...this.run, job };
    if (isOver(job)) this.lay.say(this.#endWords(job), job.state === 'failed');
    else if (!hadOne && job.progress?.best)
      this.lay.say(`A first lay: ${this.#length(job.progress.best.length)}. It goes on.`);
  }

  #endWords(job: SettleJob): string {
    if (!this.best) return job.error ?? 'The settle run ended without a lay.';
    return `Settled: ${this.#length(this.best.length)}. Take it or leave it on the Slip.`;
  }

  #length(mm: number): string {
    return formatLength(mm, this.lay.world.unit, { decimals: 1 });
  }

  /** Ends the search; its best stays on offer. */
  async stop(): Promise<void> {
    if (!this.run || !this.goesOn) return;
    const { id } = this.run.job;
    try {
      const job = await this.#server.stop(id);
      if (isOver(job)) this.#told(job);
    } catch (failure) {
      this.#failed(failure);
    }
  }

  /**
   * Takes the best lay as one step of the history. `knowingly`: although the lay has changed since the run began; what was
   * laid since is then replaced, and undo brings it back.
   */
  async take(knowingly = false): Promise<boolean> {
    const { run, best } = this;
    if (!run || !best || (this.changed && !knowingly)) return false;
    // A garment that the order no longer has can't come back.
    const garments = this.lay.document.garments.map(({ id }) => id);
    const placements = best.placements.filter(({ garment }) => garments.includes(garment));
    const taken = this.lay.do({
      document: { ...this.lay.document, placements },
      said: `Settled lay taken: ${pieces(placements.length)} on ${this.#length(best.length)}.`
    });
    if (!taken) return false;
    this.#close();
    try {
      await this.#server.answer(run.job.id, 'taken');
    } catch (failure) {
      // The next visit finds the lay as the run made it, and says so then.
      if (!(failure instanceof Offline)) this.#failed(failure);
    }
    return true;
  }

  /** Keeps the best as a lay of its own; gives its id. */
  async keepAsLay(name: string): Promise<string | null> {
    if (!this.run || !this.best) return null;
    try {
      const { id } = await this.#server.keepAsLay(this.run.job.id, name);
      this.#close();
      this.lay.say(`Kept as a lay of its own: ${name}.`);
      return id;
    } catch (failure) {
      this.#failed(failure);
      return null;
    }
  }

  /** Leaves the result, and stops the search if it goes on: the lay stays as it is. */
  async leave(): Promise<void> {
    if (!this.run) return;
    await this.#answer(this.run.job.id, 'left');
    if (!this.run) this.lay.say('The settled lay is left: nothing moved.');
  }

  async #answer(job: string, answer: 'taken' | 'left'): Promise<void> {
    try {
      await this.#server.answer(job, answer);
      this.#close();
    } catch (failure) {
      this.#failed(failure);
    }
  }

  #failed(failure: unknown): void {
    this.trouble = wordsOf(failure);
    if (failure instanceof Refusal && failure.status === 404) this.#close();
  }

  #close(): void {
    this.#unfollow?.();
    this.#unfollow = null;
    this.run = null;
    this.trouble = null;
  }

  /** The table is closed: the run goes on at the server. */
  stopWatching(): void {
    this.#unfollow?.();
    this.#unfollow = null;
  }
}

function wordsOf(failure: unknown): string {
  if (failure instanceof Offline) return 'No connection to the studio’s server: waiting for it.';
  return failure instanceof Error ? failure.message : String(failure);
}
