import { z } from 'zod';
import { readingSchema, type Reading } from '$lib/interchange/reading';
import { Problem } from './problem';
import { runInWorker } from './worker-thread';

/* Reads uploaded drawings in a thread with limits, at most two at a time; further ones wait their turn. */

const TIMEOUT_MS = 20_000;
const MEMORY_MB = 256;
const AT_ONCE = 2;

export type Answer =
  | { readonly reading: Reading }
  /** In words for the person. */
  | { readonly refused: { readonly kind: string; readonly message: string } };

const answerSchema = z.union([
  z.object({ reading: readingSchema }),
  z.object({ refused: z.object({ kind: z.string(), message: z.string() }) })
]);

let running = 0;
const queue: (() => void)[] = [];

/** What a drawing was read as, or why it was refused. Never throws for what is in the file. */
export async function readDrawing(bytes: Uint8Array, timeoutMs: number = TIMEOUT_MS): Promise<Answer> {
  if (running >= AT_ONCE) await new Promise<void>((go) => queue.push(go));
  running += 1;
  try {
    const answer = await runInWorker<unknown>(
      'import',
      { bytes: Uint8Array.from(bytes) },
      { timeoutMs, memoryMb: MEMORY_MB }
    );
    const checked = answerSchema.safeParse(answer);
    if (checked.success) return checked.data;
    return {
      refused: {
        kind: 'unreadable',
        message: 'The drawing has names or numbers that can’t be kept. Save it again and upload it once more.'
      }
    };
  } catch (failure) {
    if (failure instanceof Problem && failure.type === 'too-long')
      return {
        refused: {
          kind: 'too-long',
          message: `Reading the file took longer than the ${Math.round(timeoutMs / 1000)} s allowed. Keep only the panels and upload it again.`
        }
      };
    if (failure instanceof Problem && failure.type === 'too-large')
      return {
        refused: {
          kind: 'too-much-memory',
          message: `Reading the file needed more than the ${MEMORY_MB} MB of memory allowed. Keep only the panels and upload it again.`
        }
      };
    throw failure;
  } finally {
    running -= 1;
    queue.shift()?.();
  }
}
