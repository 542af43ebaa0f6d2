import type { Draft } from './draft';

/** Every draft that the product knows, in the order in which they are offered. */
export const drafts: readonly Draft[] = [];

export function draftById(id: string): Draft | undefined {
  return drafts.find((draft) => draft.id === id);
}
