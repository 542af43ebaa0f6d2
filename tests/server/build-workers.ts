import { rmSync } from 'node:fs';
import path from 'node:path';
import { buildWorkers } from '../../worker-build.js';

/** Builds the worker threads once for the whole run, into a folder of its own inside the project (their packages are there). */
export default async function setup(): Promise<() => void> {
  const folder = path.resolve(`.svelte-kit/test-jobs-${process.pid}`);
  await buildWorkers(folder);
  process.env.WARPWISE_WORKERS = folder;
  return () => rmSync(folder, { recursive: true, force: true });
}
