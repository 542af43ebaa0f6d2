import { beforeEach, describe, expect, it } from 'vitest';
import { LaySaving } from '$lib/client/lay-saving.svelte';
import { Offline, Refusal, type SaveAnswer } from '$lib/client/lay-server';
import type { MovesStore, UnsavedMoves } from '$lib/client/unsaved-moves';
import type { LayDocument } from '$lib/lay/document';
import { madeUpLay } from '../../bench/made-up-lay';

type Sent = { version: number; saveId: string; document: LayDocument };

/** A world without network and clock: the server answers what the test says, time passes when the test says so. */
class World {
  kept = new Map<string, UnsavedMoves>();
  sent: Sent[] = [];
  answer: (save: Sent) => Promise<SaveAnswer> = (save) =>
    Promise.resolve({ version: save.version + 1, savedAt: 1000 });
  waiting: { work: () => void; after: number }[] = [];
  saved: number[] = [];
  complaints: string[] = [];
  #ids = 0;
  store: MovesStore = {
    read: (key) => Promise.resolve(this.kept.get(key) ?? null),
    write: (key, moves) => Promise.resolve(void this.kept.set(key, moves)),
    forget: (key) => Promise.resolve(void this.kept.delete(key))
  };
  key = 'me/lay';
  now = (): number => 500;
  newId = (): string => `save-${++this.#ids}`;
  later = (work: () => void, after: number): (() => void) => {
    const entry = { work, after };
    this.waiting.push(entry);
    return () => (this.waiting = this.waiting.filter((other) => other !== entry));
  };
  server = {
    save: (save: Sent): Promise<SaveAnswer> => {
      this.sent.push(save);
      return this.answer(save);
    }
  };
  cannotKeep = (why: string): void => void this.complaints.push(why);

  opened(document: LayDocument, version = 3): LaySaving {
    return new LaySaving({ version, document }, null, {
      ...this,
      saved: (version) => this.saved.push(version)
    });
  }

  /** Lets the next waiting work run, and all that follows from it. */
  async pass(): Promise<void> {
    const [next] = this.waiting.splice(0, 1);
    next?.work();
    for (let i = 0; i < 20; i++) await Promise.resolve();
  }
}

const first = madeUpLay(10, 12).document;
const moved = (by: number): LayDocument => ({
  ...first,
  placements: first.placements.map((placement, i) =>
    i === 0 ? { ...placement, x: placement.x + by } : placement
  )
});

let world: World;
beforeEach(() => (world = new World()));

describe('saving the open lay', () => {
  it('waits for a quiet moment, saves once, and forgets what it kept', async () => {
    const saving = world.opened(first);
    saving.edited(moved(1));
    saving.edited(moved(2));
    const last = moved(3);
    saving.edited(last);
    expect(saving.state.kind).toBe('waiting');
    await world.pass();
    expect(world.sent).toEqual([{ version: 3, saveId: 'save-1', document: last }]);
    expect(saving.state).toEqual({ kind: 'saved', at: 1000 });
    expect(saving.base.version).toBe(4);
    expect(world.saved).toEqual([4]);
    expect(world.kept.size).toBe(0);
  });

  it('sends a save without an answer again under the same id, then what came after it', async () => {
    const saving = world.opened(first);
    world.answer = () => Promise.reject(new Offline('gone'));
    const one = moved(1);
    saving.edited(one);
    await world.pass();
    expect(saving.state.kind).toBe('offline');
    const two = moved(2);
    saving.edited(two);
    await world.pass();
    expect(world.kept.get('me/lay')).toMatchObject({
      document: two,
      sent: { saveId: 'save-1', document: one }
    });
    world.answer = (save) => Promise.resolve({ version: save.version + 1, savedAt: 2000 });
    await world.pass();
    expect(world.sent.map(({ saveId, version }) => [saveId, version])).toEqual([
      ['save-1', 3],
      ['save-1', 3],
      ['save-1', 3],
      ['save-2', 4]
    ]);
    expect(world.sent.at(-1)!.document).toBe(two);
    expect(saving.unsaved).toBe(false);
    expect(world.kept.size).toBe(0);
  });

  it('waits longer after each failure, never longer than half a minute', async () => {
    const saving = world.opened(first);
    world.answer = () => Promise.reject(new Offline('gone'));
    saving.edited(moved(1));
    const waits: number[] = [];
    for (let i = 0; i < 8; i++) {
      await world.pass();
      waits.push(world.waiting[0]!.after);
    }
    expect(waits).toEqual([1000, 2000, 4000, 8000, 16_000, 30_000, 30_000, 30_000]);
    expect(saving.unsaved).toBe(true);
  });

  it('keeps the work in a conflict, and goes on from what the other person saved once it is decided', async () => {
    const saving = world.opened(first);
    const theirs = { version: 9, document: moved(50), savedBy: 'Ama', savedAt: 700 };
    world.answer = () =>
      Promise.reject(new Refusal(409, 'lay-out-of-date', 'Out of date', { current: theirs }));
    const mine = moved(1);
    saving.edited(mine);
    await world.pass();
    expect(saving.state).toEqual({ kind: 'conflict', theirs });
    expect(world.kept.get('me/lay')!.document).toBe(mine);
    await saving.flush();
    expect(world.sent).toHaveLength(1);

    world.answer = (save) => Promise.resolve({ version: save.version + 1, savedAt: 3000 });
    const both = moved(51);
    saving.resolve(both);
    await world.pass();
    expect(world.sent.at(-1)).toEqual({ version: 9, saveId: 'save-2', document: both });
    expect(saving.base.version).toBe(10);
  });

  it('brings back the moves of a former visit and saves them', async () => {
    const kept = moved(7);
    world.kept.set('me/lay', {
      base: { version: 3, document: first },
      document: kept,
      sent: null,
      movedAt: 1
    });
    const saving = world.opened(first);
    expect(await saving.recover()).toBe(kept);
    await world.pass();
    expect(world.sent[0]).toMatchObject({ version: 3, document: kept });
    expect(world.kept.size).toBe(0);
  });

  it('says when the browser cannot keep moves, and saves them all the same', async () => {
    world.store.write = () => Promise.reject(new Error('no room'));
    const saving = world.opened(first);
    saving.edited(moved(1));
    await world.pass();
    expect(world.complaints[0]).toBe('no room');
    expect(saving.state.kind).toBe('saved');
  });
});
