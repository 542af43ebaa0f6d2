import { check } from '$lib/lay/check';
import type { LayDocument } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import type { Verdict } from '$lib/lay/verdict';
import { Refusal, type LayServer } from './lay-server';

/*
 * What is wrong with the lay, from two mouths: the same rules in the browser, at once, and the server's verdict after
 * each save, which is the one that counts.
 */

/** The server's verdict on one version. */
export interface ServerVerdict {
  readonly version: number;
  readonly verdict: Verdict;
  /** The document that it was asked about: while it is on the table, the verdict holds. */
  readonly document: LayDocument;
  /** When it came, UTC milliseconds; null for one that was stored with the lay. */
  readonly at: number | null;
}

export interface CheckingWorld {
  readonly server: Pick<LayServer, 'check'>;
  readonly now: () => number;
  readonly later: (work: () => void, milliseconds: number) => () => void;
}

/** How long the table rests before the browser checks it whole. */
const REST_MS = 120;

export class LayChecking {
  server: ServerVerdict | null = $state.raw(null);
  /** Why the server could not be asked; null while it answers. */
  silence: string | null = $state(null);
  asking: boolean = $state(false);
  /** The browser's own findings on what is on the table. */
  own: { readonly verdict: Verdict; readonly of: LayDocument } | null = $state.raw(null);
  #cancel: (() => void) | null = null;
  #newest = 0;

  constructor(
    private readonly world: CheckingWorld,
    private readonly book: PanelBook,
    private readonly document: () => LayDocument
  ) {}

  /**
   * The verdict to show for `document`: the server's when it is about this very state, else the browser's. `stale` while
   * neither is about this state yet.
   */
  verdictOn(document: LayDocument): { verdict: Verdict; byServer: boolean; stale: boolean } | null {
    if (this.server?.document === document)
      return { verdict: this.server.verdict, byServer: true, stale: false };
    return this.own ? { verdict: this.own.verdict, byServer: false, stale: this.own.of !== document } : null;
  }

  /** The lay was edited: the browser checks it when it rests. */
  edited(document: LayDocument): void {
    if (this.server?.document === document) return;
    this.#cancel?.();
    this.#cancel = this.world.later(() => this.#checkHere(), REST_MS);
  }

  #checkHere(): void {
    const document = this.document();
    if (this.own?.of === document) return;
    this.own = { verdict: check(document, this.book), of: document };
  }

  /** Takes a verdict that is already there. */
  known(version: number, document: LayDocument, verdict: Verdict, at: number | null): void {
    this.server = { version, document, verdict, at };
    this.silence = null;
  }

  /** Asks the server about a version; the newest question wins. */
  ask(version: number, document: LayDocument): void {
    if (!this.own) this.edited(document);
    const question = ++this.#newest;
    this.asking = true;
    this.world.server.check(version).then(
      (answer) => {
        if (question !== this.#newest) return;
        this.asking = false;
        this.known(answer.version, document, answer.verdict, this.world.now());
      },
      (failure: unknown) => {
        if (question !== this.#newest) return;
        this.asking = false;
        // Out of date: a newer save is on its way and will ask again.
        this.silence =
          failure instanceof Refusal && failure.status === 409
            ? null
            : `The server could not check: ${failure instanceof Error ? failure.message : String(failure)}`;
      }
    );
  }

  stop(): void {
    this.#cancel?.();
  }
}
