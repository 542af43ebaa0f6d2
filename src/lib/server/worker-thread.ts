import { existsSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { Worker, type Transferable } from 'node:worker_threads';
import { Problem } from './problem';

/*
 * Work that must not hold up the server, or must not be trusted: a thread of its own, with limits of time and memory.
 *
 * What a worker file (`lib/<floor>/<name>.worker.ts`) does: takes `workerData`, posts `{ progress: value }` as often as
 * it likes, posts `{ done: value }` once. An error that it throws fails the work. It imports nothing from lib/server.
 */

export interface WorkerLimits<P = unknown> {
  /** Killed after so long, ms. */
  readonly timeoutMs: number;
  /** Heap of the thread, MB. */
  readonly memoryMb: number;
  readonly onProgress?: (value: P) => void;
  /** Kills the thread when aborted. A worker that should end softly gets messages through `onStart`. */
  readonly signal?: AbortSignal;
  /** Gets a function that posts a message to the running worker. */
  readonly onStart?: (post: (message: unknown) => void) => void;
  readonly transfer?: readonly Transferable[];
}

/**
 * Runs `<name>.worker.js` with `data` and gives what it posts as `done`.
 * @throws Problem 'too-long' or 'too-large' when a limit is passed, 'stopped' when the signal aborts; the worker's own
 * error otherwise.
 */
export async function runInWorker<R, P = unknown>(
  name: string,
  data: unknown,
  limits: WorkerLimits<P>
): Promise<R> {
  const { timeoutMs, memoryMb, onProgress, signal, onStart, transfer } = limits;
  if (signal?.aborted) throw stopped();
  const worker = openWorker(name, data, memoryMb, transfer);
  let timer: NodeJS.Timeout | undefined;
  let onAbort: (() => void) | undefined;
  try {
    return await new Promise<R>((resolve, reject) => {
      worker.on('message', (message: { progress?: P; done?: R }) => {
        if ('done' in message) resolve(message.done as R);
        else if ('progress' in message) onProgress?.(message.progress as P);
      });
      worker.on('error', (error: Error & { code?: string }) =>
        reject(error.code === 'ERR_WORKER_OUT_OF_MEMORY' ? tooLarge(memoryMb) : error)
      );
      worker.on('messageerror', reject);
      worker.on('exit', (code) => reject(new Error(`${name} ended with code ${code} and no result`)));
      timer = setTimeout(() => reject(tooLong(timeoutMs)), timeoutMs);
      onAbort = () => reject(stopped());
      signal?.addEventListener('abort', onAbort, { once: true });
      onStart?.((message) => worker.postMessage(message));
    });
  } finally {
    clearTimeout(timer);
    if (onAbort) signal?.removeEventListener('abort', onAbort);
    await worker.terminate();
  }
}

/** Starts `<name>.worker.js` with `data`: for work that asks and answers many times. The caller ends it. */
export function openWorker(
  name: string,
  data: unknown,
  memoryMb: number,
  transfer: readonly Transferable[] = []
): Worker {
  return new Worker(workerFile(name), {
    workerData: data,
    transferList: [...transfer],
    resourceLimits: { maxOldGenerationSizeMb: memoryMb, maxYoungGenerationSizeMb: Math.ceil(memoryMb / 4) },
    env: {},
    stdout: false
  });
}

const tooLong = (ms: number) =>
  new Problem(
    422,
    'too-long',
    'Took too long',
    `This took longer than the ${Math.round(ms / 1000)} s allowed.`
  );
const tooLarge = (mb: number) =>
  new Problem(422, 'too-large', 'Too large', `This needed more than the ${mb} MB of memory allowed.`);
const stopped = () => new Problem(409, 'stopped', 'Stopped', 'This was stopped before it was done.');

/** Where the bundled worker is: beside the running build, or where dev and the tests build it. */
function workerFile(name: string): string {
  const file = `${name}.worker.js`;
  const own = fileURLToPath(import.meta.url);
  const folders = process.env.WARPWISE_WORKERS ? [process.env.WARPWISE_WORKERS] : [];
  for (let up = path.dirname(own); up !== path.dirname(up); up = path.dirname(up)) {
    folders.push(path.join(up, import.meta.env?.DEV ? '.svelte-kit/jobs' : 'jobs'));
  }
  const found = folders.map((folder) => path.join(folder, file)).find((candidate) => existsSync(candidate));
  if (!found) throw new Error(`No worker ${file}: build the workers first`);
  return path.resolve(found);
}
