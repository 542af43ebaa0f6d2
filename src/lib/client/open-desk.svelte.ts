import type { Edited } from '$lib/pattern/edited';
import type { Panel } from '$lib/pattern/panel';
import { withEdit, type PanelDraft } from '$lib/pattern/panel-draft';
import { ask, post, type SaveAnswer } from './lay-server';
import { LaySaving, type SavingWorld } from './lay-saving.svelte';
import { browserStore, movesKey } from './unsaved-moves';

/*
 * The panel desk in the browser: the working copy, undo without limit, saving by itself. Every change goes through an operation that
 * answers with panels that hold, or says why not.
 */

/** What the operations give: some panels changed, one added or taken away. */
export interface Change {
  readonly panels: readonly Panel[];
  readonly removed?: readonly string[];
}

interface Step {
  readonly document: PanelDraft;
  readonly said: string;
}

export class OpenDesk {
  document: PanelDraft = $state.raw()!;
  /** The panel on the desk. */
  panelId: string = $state('');
  said: { words: string; refused: boolean; count: number } = $state.raw({
    words: '',
    refused: false,
    count: 0
  });
  readonly saving: LaySaving<PanelDraft>;
  #before: Step[] = $state.raw([]);
  #after: Step[] = $state.raw([]);

  constructor(
    copy: { readonly version: number; readonly document: PanelDraft; readonly savedAt: number | null },
    panel: string,
    private readonly style: string,
    world: (desk: OpenDesk) => SavingWorld<PanelDraft>
  ) {
    this.document = copy.document;
    this.panelId = panel;
    this.saving = new LaySaving(
      { version: copy.version, document: copy.document },
      copy.savedAt,
      world(this)
    );
  }

  get panels(): readonly Panel[] {
    return this.document.panels;
  }

  /** The panel on the desk; the first one where it has gone. */
  get panel(): Panel {
    return this.panels.find(({ id }) => id === this.panelId) ?? this.panels[0]!;
  }

  get mayUndo(): boolean {
    return this.#before.length > 0;
  }

  get mayRedo(): boolean {
    return this.#after.length > 0;
  }

  say(words: string, refused = false): void {
    this.said = { words, refused, count: this.said.count + 1 };
  }

  /** Takes what an operation made of the panel on the desk; `what` names it for the list of hand edits. False when it was refused. */
  take(edited: Edited, what: string): boolean {
    if (edited.refused !== undefined) {
      this.say(edited.refused, true);
      return false;
    }
    if (edited.made === this.panel) return true;
    return this.change({ panels: [edited.made] }, what);
  }

  /** Takes several panels at once. Refused while two panels would have one name. */
  change({ panels, removed = [] }: Change, what: string): boolean {
    const kept = this.panels
      .filter(({ id }) => !removed.includes(id))
      .map((one) => panels.find(({ id }) => id === one.id) ?? one);
    const known = kept.map(({ id }) => id);
    const next = [...kept, ...panels.filter(({ id }) => !known.includes(id))];
    const names = next.map(({ name }) => name.toLowerCase());
    const twice = names.find((name, i) => names.indexOf(name) !== i);
    if (twice !== undefined) {
      this.say(`Two panels can’t both be called ${twice}.`, true);
      return false;
    }
    const edits = panels.reduce((list, panel) => withEdit(list, panel, what), [...this.document.edits]);
    this.#before = [...this.#before, { document: this.document, said: what }];
    this.#after = [];
    this.#show({ ...this.document, panels: next, edits });
    this.say(`${what[0]!.toUpperCase()}${what.slice(1)}.`);
    return true;
  }

  undo(): void {
    const step = this.#before[this.#before.length - 1];
    if (!step) return this.say('Nothing to undo.', true);
    this.#before = this.#before.slice(0, -1);
    this.#after = [...this.#after, { document: this.document, said: step.said }];
    this.#show(step.document);
    this.say(`Undone: ${step.said}.`);
  }

  redo(): void {
    const step = this.#after[this.#after.length - 1];
    if (!step) return this.say('Nothing to do again.', true);
    this.#after = this.#after.slice(0, -1);
    this.#before = [...this.#before, { document: this.document, said: step.said }];
    this.#show(step.document);
    this.say(`Done again: ${step.said}.`);
  }

  #show(document: PanelDraft): void {
    this.document = document;
    this.saving.edited(document);
  }

  /** Takes up what a former visit left unsaved in this browser. */
  async recover(): Promise<void> {
    const kept = await this.saving.recover();
    if (!kept) return;
    this.document = kept;
    this.say('What was not saved at your last visit is on the desk again.');
  }

  /** Two people at one desk: goes on with `mine`, over what the other one saved, or with theirs. */
  resolve(which: 'mine' | 'theirs'): void {
    const { state } = this.saving;
    if (state.kind !== 'conflict') return;
    const document =
      which === 'mine' ? { ...this.document, base: state.theirs.document.base } : state.theirs.document;
    this.#before = [...this.#before, { document: this.document, said: 'the other person’s changes' }];
    this.#after = [];
    this.document = document;
    this.saving.resolve(document);
    this.say(which === 'mine' ? 'Your panels are kept.' : 'The other person’s panels are on the desk.');
  }

  /** Makes the next version of the style. Rejects with the server's words. */
  async saveAsVersion(note: string): Promise<number> {
    await this.saving.flush();
    if (this.saving.unsaved)
      throw new Error('The working copy is not saved yet: wait for the connection, or settle the conflict.');
    const made = await post<{ number: number }>(
      `/api/styles/${encodeURIComponent(this.style)}/desk/version`,
      {
        version: this.saving.base.version,
        note
      }
    );
    return made.number;
  }

  /** Leaves the working copy. */
  async leave(): Promise<void> {
    await this.saving.flush();
    await ask(`/api/styles/${encodeURIComponent(this.style)}/desk`, {
      method: 'DELETE',
      body: JSON.stringify({ version: this.saving.base.version })
    });
  }
}

/** What saving needs, in a browser. */
export function deskWorld(style: string, user: string): (desk: OpenDesk) => SavingWorld<PanelDraft> {
  return (desk) => ({
    server: {
      save: (save, closing) => {
        const body = JSON.stringify(save);
        return ask<SaveAnswer>(`/api/styles/${encodeURIComponent(style)}/desk`, {
          method: 'PUT',
          body,
          // The fetch standard's limit for a page that closes.
          keepalive: closing === true && body.length < 60_000
        });
      }
    },
    store: browserStore<PanelDraft>(),
    key: movesKey(user, `desk/${style}`),
    now: () => Date.now(),
    newId: () => crypto.randomUUID(),
    later: (work, milliseconds) => {
      const timer = setTimeout(work, milliseconds);
      return () => clearTimeout(timer);
    },
    saved: () => undefined,
    cannotKeep: (why) => desk.say(`This browser can’t keep unsaved changes: ${why}`, true)
  });
}
