import type { LayDocument } from '$lib/lay/document';
import type { SettleChoice, SettleProgress } from '$lib/settle/run';
import { ask, post } from './lay-server';

/*
 * The routes of settle runs, typed, and the stream of a run's progress.
 */

export interface SettleJob {
  readonly id: string;
  readonly state: 'waiting' | 'running' | 'done' | 'failed' | 'stopped';
  readonly progress: SettleProgress | null;
  readonly result: SettleProgress | null;
  readonly error: string | null;
}

/** A run with the lay that it began with. */
export interface SettleRunOnServer {
  readonly job: SettleJob;
  readonly version: number;
  readonly document: LayDocument;
  readonly choice: SettleChoice;
}

/** Whether nothing more will come of it. */
export const isOver = (job: SettleJob): boolean => job.state !== 'waiting' && job.state !== 'running';

/** How long until a lost stream is opened again, ms. */
const AGAIN_MS = 3000;

/** The settle runs of one lay. */
export class SettleServer {
  readonly #path: string;

  constructor(lay: string) {
    this.#path = `/api/lays/${encodeURIComponent(lay)}/settle`;
  }

  /** The run that goes on or whose result is on offer. */
  current(): Promise<{ run: SettleRunOnServer | null }> {
    return ask(this.#path, { method: 'GET' });
  }

  begin(choice: SettleChoice & { version: number }): Promise<{ job: string }> {
    return post(this.#path, choice);
  }

  answer(job: string, answer: 'taken' | 'left'): Promise<unknown> {
    return post(`${this.#path}/${encodeURIComponent(job)}`, { answer });
  }

  keepAsLay(job: string, name: string): Promise<{ id: string }> {
    return post(`${this.#path}/${encodeURIComponent(job)}/lay`, { name });
  }

  stop(job: string): Promise<SettleJob> {
    return post(`/api/jobs/${encodeURIComponent(job)}/stop`, {});
  }

  /** Tells each change of a job until it is over, over restarts of the server; gives what ends it. */
  follow(job: string, tell: (job: SettleJob) => void, lost: (why: unknown) => void): () => void {
    const path = `/api/jobs/${encodeURIComponent(job)}`;
    let stream: EventSource | null = null;
    let timer: ReturnType<typeof setTimeout> | undefined;
    let open = true;
    const end = (): void => {
      open = false;
      stream?.close();
      clearTimeout(timer);
    };
    const told = (now: SettleJob): void => {
      if (!open) return;
      if (isOver(now)) end();
      tell(now);
    };
    // Without a stream it is asked now and then: that also tells whether the person may still see it.
    const again = async (): Promise<void> => {
      try {
        told(await ask<SettleJob>(path, { method: 'GET' }));
      } catch (failure) {
        lost(failure);
      }
      if (open) listen();
    };
    const listen = (): void => {
      stream = new EventSource(`${path}/events`);
      stream.addEventListener('job', (event) => told(JSON.parse(event.data as string) as SettleJob));
      stream.addEventListener('error', () => {
        if (!open) return;
        stream?.close();
        clearTimeout(timer);
        timer = setTimeout(() => void again(), AGAIN_MS);
      });
    };
    listen();
    return end;
  }
}
