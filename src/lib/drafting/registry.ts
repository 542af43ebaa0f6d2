import { bustier } from './bustier/bustier';
import type { Draft } from './draft';
import { bands } from './drafts/bands';
import { bodiceBlock } from './drafts/bodice-block';
import { circleSkirt } from './drafts/circle-skirt';
import { corset } from './drafts/corset';
import { gatheredSkirt } from './drafts/gathered-skirt';
import { skirtBlock } from './drafts/skirt-block';
import { sleeveBlock } from './drafts/sleeve-block';
import { trouserBlock } from './drafts/trouser-block';

/** Every draft that the product knows, in the order in which they are offered. */
export const drafts: readonly Draft[] = [
  bustier,
  corset,
  bodiceBlock,
  sleeveBlock,
  skirtBlock,
  trouserBlock,
  circleSkirt,
  gatheredSkirt,
  bands
];

export function draftById(id: string): Draft | undefined {
  return drafts.find((draft) => draft.id === id);
}
