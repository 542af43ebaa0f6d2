import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { runInWorker } from '$lib/server/worker-thread';

/** Workers that are written for these tests: what is tested is the thread around them. */
const sources = {
  echo: `parentPort.postMessage({ progress: 1 }); parentPort.postMessage({ progress: 2 });
    parentPort.postMessage({ done: { got: workerData, secrets: Object.keys(process.env) } });`,
  endless: `for (;;) {}`,
  hungry: `const held = []; for (;;) held.push(new Array(100000).fill(Math.random()));`,
  broken: `throw new RangeError('the cloth has no width');`,
  silent: `process.exit(0);`,
  listening: `parentPort.on('message', (text) => { parentPort.postMessage({ done: text }); parentPort.close(); });`
};

let folder: string;
const before = process.env.WARPWISE_WORKERS;
beforeAll(() => {
  folder = mkdtempSync(path.join(tmpdir(), 'workers-'));
  for (const [name, source] of Object.entries(sources))
    writeFileSync(
      path.join(folder, `${name}.worker.js`),
      `const { parentPort, workerData } = require('node:worker_threads');\n${source}`
    );
  process.env.WARPWISE_WORKERS = folder;
});
afterAll(() => {
  process.env.WARPWISE_WORKERS = before;
  rmSync(folder, { recursive: true });
});

const limits = { timeoutMs: 20_000, memoryMb: 64 };

describe('work in a thread of its own', () => {
  it('gets its data and gives progress and a result, without the secrets of the server', async () => {
    const progress: number[] = [];
    const result = await runInWorker(
      'echo',
      { cloth: 'linen' },
      { ...limits, onProgress: (n: number) => progress.push(n) }
    );
    expect(result).toEqual({ got: { cloth: 'linen' }, secrets: [] });
    expect(progress).toEqual([1, 2]);
  });

  it('is killed when it takes too long, though it never yields', async () => {
    await expect(runInWorker('endless', null, { ...limits, timeoutMs: 300 })).rejects.toMatchObject({
      status: 422,
      type: 'too-long'
    });
  });

  it('is killed when it takes too much memory, and the server goes on', async () => {
    await expect(runInWorker('hungry', null, limits)).rejects.toMatchObject({
      status: 422,
      type: 'too-large'
    });
    await expect(runInWorker('echo', 1, limits)).resolves.toMatchObject({ got: 1 });
  });

  it('is killed when it is stopped', async () => {
    const stop = new AbortController();
    const work = runInWorker('endless', null, { ...limits, signal: stop.signal });
    setTimeout(() => stop.abort(), 50);
    await expect(work).rejects.toMatchObject({ type: 'stopped' });
    await expect(runInWorker('echo', null, { ...limits, signal: stop.signal })).rejects.toMatchObject({
      type: 'stopped'
    });
  });

  it('fails with its own error, and with one when it ends without a result', async () => {
    await expect(runInWorker('broken', null, limits)).rejects.toThrow('the cloth has no width');
    await expect(runInWorker('silent', null, limits)).rejects.toThrow('no result');
    await expect(runInWorker('unbuilt', null, limits)).rejects.toThrow('build the workers');
  });

  it('can be told something while it runs', async () => {
    expect(await runInWorker('listening', null, { ...limits, onStart: (post) => post('stop softly') })).toBe(
      'stop softly'
    );
  });
});
