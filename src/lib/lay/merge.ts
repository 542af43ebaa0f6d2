import type { Strip } from '$lib/cloth/strip';
import type { LayDocument, LayPlacement } from './document';
import { same } from './same';

/*
 * Two people, or one person on two tables, changed the same lay. Three-way: what only one side changed is taken;
 * what both changed differently is a conflict that the person decides.
 */

export type Side = 'mine' | 'theirs';

/** What both sides changed. A null placement was removed on that side. */
export type Conflict =
  | {
      readonly kind: 'placement';
      readonly key: string;
      readonly base: LayPlacement | null;
      readonly mine: LayPlacement | null;
      readonly theirs: LayPlacement | null;
    }
  | { readonly kind: 'cloth'; readonly key: string }
  | { readonly kind: 'facts'; readonly key: string };

export interface Merge {
  /** The merged lay; conflicts are taken from the side that `choose` names. */
  readonly document: LayDocument;
  readonly conflicts: readonly Conflict[];
}

/**
 * The lay with the changes of both sides since `base`. `choose` decides each conflict by its key; until the person has
 * chosen, what is already saved ('theirs') stands. Swapping the sides swaps nothing else. Two placements of the same
 * needed piece both stay: the check finds the surplus.
 */
export function mergeLays(
  base: LayDocument,
  mine: LayDocument,
  theirs: LayDocument,
  choose: (key: string) => Side = () => 'theirs'
): Merge {
  const conflicts: Conflict[] = [];
  const threeWay = <T>(key: string, b: T, m: T, t: T, conflict: () => Conflict): T => {
    if (same(m, t) || same(b, t)) return m;
    if (same(b, m)) return t;
    conflicts.push(conflict());
    return choose(key) === 'mine' ? m : t;
  };
  const part = <K extends 'garments' | 'needs' | 'rules'>(key: K): LayDocument[K] =>
    threeWay(key, base[key], mine[key], theirs[key], () => ({ kind: 'facts', key }));

  const [inBase, inMine, inTheirs] = [byId(base), byId(mine), byId(theirs)];
  const placements: LayPlacement[] = [];
  for (const id of mergedOrder(base, mine, theirs)) {
    const [b, m, t] = [inBase.get(id) ?? null, inMine.get(id) ?? null, inTheirs.get(id) ?? null];
    const key = `placement/${id}`;
    const merged = threeWay(key, b, m, t, () => ({ kind: 'placement', key, base: b, mine: m, theirs: t }));
    if (merged) placements.push(merged);
  }

  const strip = { ...theirs.strip };
  for (const fields of stripParts(base.strip)) {
    const key = `cloth/${fields[0]}`;
    const pick = (from: Strip): Partial<Strip> =>
      Object.fromEntries(fields.map((field) => [field, from[field]]));
    Object.assign(
      strip,
      threeWay(key, pick(base.strip), pick(mine.strip), pick(theirs.strip), () => ({ kind: 'cloth', key }))
    );
  }
  return {
    document: {
      schema: theirs.schema,
      strip,
      garments: part('garments'),
      needs: part('needs'),
      placements,
      rules: part('rules')
    },
    conflicts
  };
}

function byId(document: LayDocument): ReadonlyMap<string, LayPlacement> {
  return new Map(document.placements.map((placement) => [placement.id, placement]));
}

/** Fields of the strip that can be told apart; the width and the spread that covers it belong together. */
function stripParts(strip: Strip): (keyof Strip)[][] {
  const alone = (Object.keys(strip) as (keyof Strip)[]).filter(
    (field) => field !== 'usableWidth' && field !== 'spread'
  );
  return [['usableWidth', 'spread'], ...alone.map((field) => [field])];
}

/** Ids in the order of the base, then what either side added, by id: the same from both sides. */
function mergedOrder(base: LayDocument, mine: LayDocument, theirs: LayDocument): string[] {
  const old = base.placements.map(({ id }) => id);
  const known = new Set(old);
  const added = new Set([...mine.placements, ...theirs.placements].map(({ id }) => id));
  return [...old, ...[...added].filter((id) => !known.has(id)).sort()];
}
