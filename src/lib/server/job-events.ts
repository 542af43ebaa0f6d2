import * as jobs from './jobs';
import { log } from './log';
import { Problem } from './problem';
import type { Scope } from './scope';
import * as sessions from './sessions';
import { closeAtShutdown } from './shutdown';
import * as studios from './studios';

/** Proxies cut connections on which nothing moves. */
const signOfLifeEvery = 20_000;

/**
 * The event stream of a job: its state as it is (so that nothing is missed between asking and listening), then each
 * change. Before each event the session and the membership are asked again; when one of them is gone, so is the stream.
 */
export function jobEvents(
  job: jobs.Job,
  person: App.Locals['person'],
  scope: Scope,
  signal: AbortSignal
): ReadableStream<Uint8Array> {
  const encoder = new TextEncoder();
  let release: () => void = () => {};
  return new ReadableStream({
    start(controller) {
      let open = true;
      let sending = Promise.resolve();
      const close = () => {
        if (!open) return;
        open = false;
        release();
        controller.close();
      };
      const send = async (known?: jobs.Job) => {
        if (!open) return;
        const now = known ?? (await present(job.id, person, scope));
        if (!open) return;
        if (now) controller.enqueue(encoder.encode(`event: job\ndata: ${JSON.stringify(now)}\n\n`));
        if (!now || jobs.isOver(now)) close();
      };
      const queue = (known?: jobs.Job) => {
        sending = sending
          .then(() => send(known))
          .catch((error) => {
            log.error({ job: job.id, err: error }, 'job events');
            close();
          });
      };
      const unwatch = jobs.watch(job.id, () => queue());
      const forget = closeAtShutdown(close);
      const beat = setInterval(() => {
        if (open) controller.enqueue(encoder.encode(': still here\n\n'));
      }, signOfLifeEvery);
      beat.unref();
      release = () => {
        open = false;
        unwatch();
        forget();
        clearInterval(beat);
        signal.removeEventListener('abort', close);
      };
      signal.addEventListener('abort', close, { once: true });
      // What changed between the reading and the watching comes with the second.
      queue(job);
      queue();
    },
    cancel() {
      release();
    }
  });
}

/** The job as the person may see it at this moment; null when they may not any more. */
async function present(id: string, person: App.Locals['person'], scope: Scope): Promise<jobs.Job | null> {
  if (!person.user || !(await sessions.isOpen(person.session.publicId))) return null;
  const entered = await studios.enter(scope.studio, person.user.id);
  if (!entered) return null;
  try {
    return await jobs.read(entered.scope, id);
  } catch (refusal) {
    if (refusal instanceof Problem) return null;
    throw refusal;
  }
}
