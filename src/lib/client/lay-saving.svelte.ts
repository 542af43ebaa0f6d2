import type { LayDocument } from '$lib/lay/document';
import { Offline, Refusal, type SaveAnswer, type SavedByOther } from './lay-server';
import type { MovesStore, SentSave } from './unsaved-moves';

/*
 * Saves the open lay, or the working copy of the panel desk, by itself: shortly after a move, each save naming the version it was made from and an id of its
 * own. A save without an answer is sent again under the same id, so that it counts once. What is not acknowledged
 * stays in the browser's database.
 */

export type SavingState<Document = LayDocument> =
  | { readonly kind: 'saved'; readonly at: number | null }
  | { readonly kind: 'waiting' }
  | { readonly kind: 'saving' }
  /** No answer: tried again at `nextAt`. */
  | { readonly kind: 'offline'; readonly why: string; readonly nextAt: number }
  | { readonly kind: 'conflict'; readonly theirs: SavedByOther<Document> }
  | { readonly kind: 'refused'; readonly why: string };

/** What saving needs of the world; tests give their own. */
export interface SavingWorld<Document = LayDocument> {
  readonly server: { save(save: SentSave<Document>, closing?: boolean): Promise<SaveAnswer> };
  readonly store: MovesStore<Document>;
  readonly key: string;
  readonly now: () => number;
  readonly newId: () => string;
  /** Calls back after milliseconds; gives what cancels it. */
  readonly later: (work: () => void, milliseconds: number) => () => void;
  /** After each acknowledged save. */
  readonly saved: (version: number) => void;
  /** When the browser can't keep unsaved moves. */
  readonly cannotKeep: (why: string) => void;
}

const QUIET_MS = 700;
const FIRST_RETRY_MS = 1000;
const LONGEST_RETRY_MS = 30_000;

export class LaySaving<Document = LayDocument> {
  state: SavingState<Document> = $state.raw({ kind: 'saved', at: null });
  /** The version that the server last acknowledged, and its document. */
  base: { version: number; document: Document } = $state.raw()!;
  #document: Document;
  #sent: SentSave<Document> | null = null;
  #failures = 0;
  #cancel: (() => void) | null = null;
  #busy = false;
  #keeping: Promise<void> = Promise.resolve();

  constructor(
    base: { version: number; document: Document },
    savedAt: number | null,
    private readonly world: SavingWorld<Document>
  ) {
    this.base = base;
    this.#document = base.document;
    this.state = { kind: 'saved', at: savedAt };
  }

  /** Whether something is not acknowledged yet. */
  get unsaved(): boolean {
    return this.#document !== this.base.document || this.#sent !== null;
  }

  /** Looks for moves of a former visit. Gives the document to go on with, or null when there are none. */
  async recover(): Promise<Document | null> {
    let kept;
    try {
      kept = await this.world.store.read(this.world.key);
    } catch (failure) {
      this.world.cannotKeep(messageOf(failure));
      return null;
    }
    if (!kept) return null;
    // A person who already moved something in this visit keeps that; the former moves then wait for a conflict.
    if (this.unsaved) return null;
    this.base = kept.base;
    this.#document = kept.document;
    this.#sent = kept.sent;
    this.state = { kind: 'waiting' };
    this.#schedule(0);
    return kept.document;
  }

  /** The lay was edited. */
  edited(document: Document): void {
    if (document === this.#document) return;
    this.#document = document;
    if (this.state.kind === 'conflict' || this.state.kind === 'refused') {
      this.#keep();
      return;
    }
    this.#keep();
    if (this.state.kind !== 'offline') {
      if (!this.#busy) this.state = { kind: 'waiting' };
      this.#schedule(QUIET_MS);
    }
  }

  /** Saves now. Resolves when the try is over, whatever came of it. */
  async flush(closing = false): Promise<void> {
    this.#cancel?.();
    this.#cancel = null;
    if (this.#busy || this.state.kind === 'conflict' || !this.unsaved) return;
    this.#busy = true;
    try {
      // What was sent before and got no answer goes first, unchanged: it may have arrived.
      while (this.unsaved) {
        const save: SentSave<Document> = (this.#sent ??= {
          saveId: this.world.newId(),
          version: this.base.version,
          document: this.#document
        });
        this.#keep();
        this.state = { kind: 'saving' };
        const answer = await this.world.server.save(save, closing);
        this.#failures = 0;
        this.#sent = null;
        this.base = { version: answer.version, document: save.document };
        this.state = { kind: 'saved', at: answer.savedAt };
        if (!this.unsaved) await this.#forget();
        this.world.saved(answer.version);
      }
    } catch (failure) {
      this.#failed(failure);
    } finally {
      this.#busy = false;
    }
  }

  /** The person decided a conflict: `document` goes on from what the other person saved. */
  resolve(document: Document): void {
    if (this.state.kind !== 'conflict') return;
    const { theirs } = this.state;
    this.goOnFrom(theirs.version, theirs.document, theirs.savedAt);
    this.edited(document);
    if (!this.unsaved) void this.#forget();
  }

  /** The server holds `document` as `version` now (restored, reopened, released). */
  goOnFrom(version: number, document: Document, at: number | null): void {
    this.#sent = null;
    this.base = { version, document };
    this.#document = document;
    this.state = { kind: 'saved', at };
    void this.#forget();
  }

  /** Stops trying: the table is closed. What is unsaved stays in the browser's database. */
  stop(): void {
    this.#cancel?.();
    this.#cancel = null;
  }

  #schedule(milliseconds: number): void {
    this.#cancel?.();
    this.#cancel = this.world.later(() => void this.flush(), milliseconds);
  }

  #failed(failure: unknown): void {
    if (
      failure instanceof Refusal &&
      (failure.type === 'lay-out-of-date' || failure.type === 'desk-out-of-date')
    ) {
      this.#sent = null;
      this.state = { kind: 'conflict', theirs: failure.extra.current as SavedByOther<Document> };
      this.#keep();
      return;
    }
    if (failure instanceof Refusal && failure.status !== 401) {
      this.#sent = null;
      this.state = { kind: 'refused', why: failure.message };
      this.#keep();
      return;
    }
    const wait = Math.min(LONGEST_RETRY_MS, FIRST_RETRY_MS * 2 ** this.#failures++);
    const why =
      failure instanceof Refusal
        ? 'You are signed out: sign in again in another tab.'
        : failure instanceof Offline
          ? 'No connection to the studio’s server.'
          : messageOf(failure);
    this.state = { kind: 'offline', why, nextAt: this.world.now() + wait };
    this.#schedule(wait);
  }

  /** Keeps what is unsaved in the browser's database, one write after the other. */
  #keep(): void {
    const moves = { base: this.base, document: this.#document, sent: this.#sent, movedAt: this.world.now() };
    this.#keeping = this.#keeping
      .then(() => this.world.store.write(this.world.key, moves))
      .catch((failure: unknown) => this.world.cannotKeep(messageOf(failure)));
  }

  #forget(): Promise<void> {
    this.#keeping = this.#keeping
      .then(() => (this.unsaved ? undefined : this.world.store.forget(this.world.key)))
      .catch((failure: unknown) => this.world.cannotKeep(messageOf(failure)));
    return this.#keeping;
  }
}

function messageOf(failure: unknown): string {
  return failure instanceof Error ? failure.message : String(failure);
}
