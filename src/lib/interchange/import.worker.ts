import { parentPort, workerData } from 'node:worker_threads';
import { LIMITS, ReadingRefused } from './limits';
import { readPanelFile } from './read-file';

/*
 * Reads one uploaded file away from the server: whatever is in it, at most this thread is lost.
 * Takes { bytes }, posts { done: { reading } } or { done: { refused } }.
 */

function answer(bytes: Uint8Array) {
  try {
    return { reading: readPanelFile(bytes) };
  } catch (refusal) {
    if (refusal instanceof ReadingRefused)
      return { refused: { kind: refusal.kind, message: refusal.message } };
    if (refusal instanceof RangeError && /call stack/i.test(refusal.message))
      return {
        refused: {
          kind: 'too-deep',
          message: `The file is nested too deep (${LIMITS.depth} levels are allowed).`
        }
      };
    throw refusal;
  }
}

parentPort!.postMessage({ done: answer((workerData as { bytes: Uint8Array }).bytes) });
