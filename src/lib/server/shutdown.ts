import { log } from './log';

/*
 * The order of going down. At the signal: streams that would stay open for ever are closed, no job is taken any more.
 * When the last connection has ended: running jobs are waited for, then the database is closed, and nothing keeps the
 * process alive.
 */

type Step = () => void | Promise<void>;

const held = globalThis as {
  warpwiseShutdown?: { streams: Set<() => void>; atSignal: Step[]; atEnd: Step[]; going: boolean };
};
const state = (held.warpwiseShutdown ??= { streams: new Set(), atSignal: [], atEnd: [], going: false });

/** Registers an open stream's closer; gives the way to take it back when the stream ends by itself. */
export function closeAtShutdown(close: () => void): () => void {
  state.streams.add(close);
  return () => state.streams.delete(close);
}

/** What to do at the signal, while requests are still being answered. */
export function atSignal(step: Step): void {
  state.atSignal.push(step);
}

/** What to do when no request is open any more, in the order given. */
export function atEnd(step: Step): void {
  state.atEnd.push(step);
}

/** Listens to the signals of the system and to the adapter's own event. Once, in production. */
export function watchSignals(): void {
  const onSignal = () => {
    if (state.going) return;
    state.going = true;
    log.info('shutting down');
    for (const close of state.streams) close();
    for (const step of state.atSignal) void attempt(step);
  };
  process.on('SIGTERM', onSignal);
  process.on('SIGINT', onSignal);
  process.on('sveltekit:shutdown', () => void end());
}

async function end(): Promise<void> {
  for (const step of state.atEnd) await attempt(step);
  log.info('shut down');
}

/** One step that fails must not keep the others from being done. */
async function attempt(step: Step): Promise<void> {
  try {
    await step();
  } catch (error) {
    log.error({ err: error }, 'shutdown');
  }
}
