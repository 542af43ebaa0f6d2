import { beforeEach, describe, expect, it } from 'vitest';
import { Offline, Refusal, type LayOnServer, type LayServer } from '$lib/client/lay-server';
import { OpenLay } from '$lib/client/open-lay.svelte';
import { SettleRun } from '$lib/client/settle-run.svelte';
import type { SettleJob, SettleRunOnServer, SettleServer } from '$lib/client/settle-server';
import * as commands from '$lib/lay/commands';
import { readingsOf } from '$lib/lay/readings';
import type { SettleBest, SettleProgress } from '$lib/settle/run';
import { gainWords, leastWords, timeWords } from '$lib/components/table/settle-words';
import { madeUpLay } from '../../bench/made-up-lay';

/*
 * A settle run as the Lay table sees it: nothing is written without the person, and taking is one step.
 */

const { document, panels } = madeUpLay(6, 12);
const placements = document.placements.map((one) => ({ ...one, x: one.x + 10 }));
const best: SettleBest = { placements, length: 1234, efficiency: 0.8, leftOver: 0, at: 3 };
const progress: SettleProgress = { seconds: 4, evaluations: 9, turns: 1, best, ended: null };
const job = (changes: Partial<SettleJob> = {}): SettleJob => ({
  id: 'job',
  state: 'running',
  progress,
  result: null,
  error: null,
  ...changes
});
const done = job({ state: 'done', result: { ...progress, ended: 'time' } });

class Server {
  run: SettleRunOnServer | null = null;
  answers: string[] = [];
  begun: unknown[] = [];
  refuse: Error | null = null;
  tell: ((job: SettleJob) => void) | null = null;
  current = () => Promise.resolve({ run: this.run });
  begin = (choice: unknown) => {
    if (this.refuse) return Promise.reject(this.refuse);
    this.begun.push(choice);
    this.run = {
      job: job({ progress: null }),
      version: 3,
      document,
      choice: { budgetSeconds: 60, from: 'here', pieces: 'all' }
    };
    return Promise.resolve({ job: 'job' });
  };
  answer = (_job: string, answer: string) => {
    if (this.refuse) return Promise.reject(this.refuse);
    this.answers.push(answer);
    return Promise.resolve({});
  };
  keepAsLay = (_job: string, name: string) => Promise.resolve({ id: `lay ${name}` });
  stop = () => Promise.resolve(job({ state: 'stopped' }));
  follow = (_job: string, tell: (job: SettleJob) => void) => {
    this.tell = tell;
    return () => (this.tell = null);
  };
}

let server: Server;
let lay: OpenLay;
let settle: SettleRun;

beforeEach(() => {
  server = new Server();
  const given = {
    id: 'lay',
    name: 'Lay 1',
    state: 'open',
    version: 3,
    document,
    panels,
    verdict: null,
    verdictVersion: null,
    cloth: { name: 'Wool', price: null },
    updatedAt: 1
  } as unknown as LayOnServer;
  lay = new OpenLay(given, {
    server: { check: () => new Promise(() => {}) } as unknown as LayServer,
    store: {
      read: () => Promise.resolve(null),
      write: () => Promise.resolve(),
      forget: () => Promise.resolve()
    },
    user: 'me',
    unit: 'cm',
    now: () => 5,
    newId: () => 'id',
    later: () => () => {}
  });
  settle = new SettleRun(lay, server as unknown as SettleServer);
});

const choice = { budgetSeconds: 60, from: 'here', pieces: 'all' } as const;

describe('a settle run at the table', () => {
  it('names the version that it begins with, tells its best, and moves nothing', async () => {
    expect(await settle.begin(choice)).toBe(true);
    expect(server.begun).toEqual([{ ...choice, version: 3 }]);
    expect([settle.goesOn, settle.best]).toEqual([true, null]);
    server.tell!(job());
    expect(lay.said.words).toContain('A first lay: 123.4 cm');
    server.tell!(done);
    expect(lay.said.words).toContain('Settled: 123.4 cm');
    expect([settle.goesOn, settle.changed]).toEqual([false, false]);
    expect(lay.document).toBe(document);
  });

  it('is taken in one step that undo takes back', async () => {
    await settle.begin(choice);
    server.tell!(done);
    expect(await settle.take()).toBe(true);
    expect(lay.document.placements).toEqual(placements);
    expect([settle.run, server.answers]).toEqual([null, ['taken']]);
    lay.undo();
    expect(lay.document).toBe(document);
    lay.redo();
    expect(lay.document.placements).toEqual(placements);
  });

  it('is never taken over a lay that has changed, unless knowingly; undo brings the work back', async () => {
    await settle.begin(choice);
    lay.do(commands.move(lay.document, lay.book, [document.placements[0]!.id], 5, 0));
    const mine = lay.document;
    server.tell!(done);
    expect(settle.changed).toBe(true);
    expect(await settle.take()).toBe(false);
    expect(lay.document).toBe(mine);
    expect(await settle.take(true)).toBe(true);
    expect(lay.document.placements).toEqual(placements);
    lay.undo();
    expect(lay.document).toBe(mine);
  });

  it('left, it is offered no more and nothing moves; kept, it is a lay of its own', async () => {
    await settle.begin(choice);
    await settle.leave();
    expect([settle.run, server.answers, lay.document]).toEqual([null, ['left'], document]);
    await settle.begin(choice);
    server.tell!(done);
    expect(await settle.keepAsLay('Closer')).toBe('lay Closer');
    expect([settle.run, lay.document]).toEqual([null, document]);
  });

  it('stopped, it keeps its best on offer', async () => {
    await settle.begin(choice);
    server.tell!(job());
    await settle.stop();
    expect([settle.goesOn, settle.best]).toEqual([false, best]);
  });

  it('that can’t begin says why, each thing by itself', async () => {
    const faults = [{ message: 'Back is 1600 mm across.' }, { message: 'Two are locked into each other.' }];
    server.refuse = new Refusal(400, 'cannot-settle', 'Both', { faults });
    expect(await settle.begin(choice)).toBe(false);
    expect(settle.refusals).toEqual(faults.map(({ message }) => message));
    expect(settle.run).toBeNull();
  });

  it('taken without a connection, it says so at the next visit instead of being offered again', async () => {
    await settle.begin(choice);
    server.tell!(done);
    server.refuse = new Offline('No connection');
    await settle.take();
    expect([settle.run, server.answers]).toEqual([null, []]);
    server.refuse = null;
    server.run = { ...server.run!, job: done };
    const next = new SettleRun(lay, server as unknown as SettleServer);
    await next.resume();
    expect([next.run, server.answers]).toEqual([null, ['taken']]);
  });
});

describe('the words of a run', () => {
  const before = { readings: readingsOf(document, panels), counts: true };
  const after = (length: number, total: number) => ({
    ...before.readings,
    lengthUsed: length,
    clothToBuy: { ...before.readings.clothToBuy, total }
  });
  const price = { minor: 4800, unit: 'metre', currency: 'EUR' } as const;
  const { lengthUsed, clothToBuy } = before.readings;

  it('say the gain in length, and in money only where there is a price', () => {
    const shorter = after(lengthUsed - 152, clothToBuy.total - 100);
    expect(gainWords(before, shorter, 'cm', price).words).toBe('15.2 cm and €4.80 less than before');
    expect(gainWords(before, shorter, 'cm', null).words).toBe('15.2 cm less than before');
    const same = after(lengthUsed - 20, clothToBuy.total);
    expect(gainWords(before, same, 'cm', price).words).toContain('the cloth to buy stays the same');
    const longer = gainWords(before, after(lengthUsed + 100, clothToBuy.total + 100), 'cm', price);
    expect(longer).toEqual({ sense: 'worse', words: '10.0 cm and €4.80 more than before' });
    expect(gainWords({ ...before, counts: false }, shorter, 'cm', price).sense).toBeNull();
  });

  it('say the distance to the least length and the time', () => {
    const least = before.readings.leastLength.length;
    expect(leastWords(after(least + 100, 0), 'cm')).toMatch(/^10\.0 cm above the least length \(/);
    expect(leastWords(after(least, 0), 'cm')).toContain('no lay can be shorter');
    expect(timeWords(choice, progress)).toBe('0:56 left');
    expect(timeWords({ ...choice, budgetSeconds: null }, { ...progress, seconds: 125 })).toBe('2:05 so far');
  });
});
