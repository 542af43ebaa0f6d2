import type { Draft } from './draft';
import { bands } from './drafts/bands';
import { bustier } from './bustier/bustier';
import { circleSkirt } from './drafts/circle-skirt';
import { gatheredSkirt } from './drafts/gathered-skirt';
import { skirtBlock } from './drafts/skirt-block';

/** Every draft that the product knows, in the order in which they are offered. */
export const drafts: readonly Draft[] = [bustier, skirtBlock, circleSkirt, gatheredSkirt, bands];

export function draftById(id: string): Draft | undefined {
  return drafts.find((draft) => draft.id === id);
}
