import { parentPort, workerData } from 'node:worker_threads';
import { GuideRefusal, makeGuide, type Guide } from './guide';
import type { GuideChoice } from './guide-choice';
import type { GuideInput } from './guide-input';
import type { GuideFonts } from './pdf';

/** What the thread is given. */
export interface GuideWork {
  readonly input: GuideInput;
  readonly choice: GuideChoice;
  readonly fonts: GuideFonts;
}

/** What it answers: the guide, or why it can't be made as chosen. */
export type GuideAnswer = { readonly guide: Guide } | { readonly refused: string };

const { input, choice, fonts } = workerData as GuideWork;
try {
  const guide = await makeGuide(input, choice, fonts, (progress) => parentPort!.postMessage({ progress }));
  parentPort!.postMessage({ done: { guide } satisfies GuideAnswer }, [guide.bytes.buffer as ArrayBuffer]);
} catch (refusal) {
  if (!(refusal instanceof GuideRefusal)) throw refusal;
  parentPort!.postMessage({ done: { refused: refusal.message } satisfies GuideAnswer });
}
