import type { LayDocument } from './document';

/*
 * Undo and redo without limit. Documents are immutable and share what did not change, so a step costs little more
 * than the placements it touched. What is chosen on the table is not part of it.
 */

/** One state of the lay, and what the edit that led to it said. */
interface Step {
  readonly document: LayDocument;
  readonly said: string;
  /** Edits of one gesture (a drag, a held arrow key) carry the same name and make one step. */
  readonly gesture: string | null;
}

export interface History {
  readonly past: readonly Step[];
  readonly present: Step;
  readonly future: readonly Step[];
}

/** A history that begins with `document`. */
export function startHistory(document: LayDocument): History {
  return { past: [], present: { document, said: '', gesture: null }, future: [] };
}

/** `document` as the newest state. What was undone is gone; a further edit of the same gesture makes no new step. */
export function record(
  history: History,
  edit: { readonly document: LayDocument; readonly said: string },
  gesture: string | null = null
): History {
  if (edit.document === history.present.document) return history;
  const present = { document: edit.document, said: edit.said, gesture };
  if (gesture !== null && gesture === history.present.gesture)
    return { past: history.past, present, future: [] };
  return { past: [...history.past, history.present], present, future: [] };
}

/** Ends a gesture: the next edit makes a step of its own, whatever it is called. */
export function endGesture(history: History): History {
  return history.present.gesture === null
    ? history
    : { ...history, present: { ...history.present, gesture: null } };
}

export function canUndo(history: History): boolean {
  return history.past.length > 0;
}

export function canRedo(history: History): boolean {
  return history.future.length > 0;
}

/** One step back, and what was undone; the same history when there is nothing to undo. */
export function undo(history: History): { history: History; said: string } {
  const last = history.past.at(-1);
  if (!last) return { history, said: 'Nothing to undo.' };
  return {
    history: {
      past: history.past.slice(0, -1),
      present: { ...last, gesture: null },
      future: [history.present, ...history.future]
    },
    said: `Undone: ${history.present.said}`
  };
}

/** One step forward again, and what was done again. */
export function redo(history: History): { history: History; said: string } {
  const [next, ...future] = history.future;
  if (!next) return { history, said: 'Nothing to do again.' };
  return {
    history: { past: [...history.past, history.present], present: { ...next, gesture: null }, future },
    said: `Done again: ${next.said}`
  };
}

/**
 * Every state through `change`: for what the server owns (garments, needs, facts of the cloth), which no undo may
 * bring back.
 */
export function mapHistory(history: History, change: (document: LayDocument) => LayDocument): History {
  const through = (step: Step): Step => ({ ...step, document: change(step.document) });
  return {
    past: history.past.map(through),
    present: through(history.present),
    future: history.future.map(through)
  };
}
