import type { Knex } from 'knex';
import {
  perHundredSquareMetres,
  perHundredSquareYards,
  pointsOf,
  totalPoints,
  type Points
} from '$lib/cloth/four-point';
import type { Millimetres } from '$lib/units/measure';
import { database } from './database';
import { newId } from './ids';
import { notFound } from './problem';
import type { Scope } from './scope';

/*
 * The flaws of a length of cloth, where they are and what they count. cloth-lengths.ts counts the version of the length.
 */

export interface ClothFlaw {
  readonly id: string;
  /** Middle of the flaw from the start of the length. */
  readonly fromEnd: Millimetres;
  /** Middle of the flaw from where the usable width begins at the near selvedge. */
  readonly fromSelvedge: Millimetres;
  readonly along: Millimetres;
  readonly across: Millimetres;
  readonly hole: boolean;
  readonly note: string;
  readonly points: Points;
}

export type FlawInput = Omit<ClothFlaw, 'id' | 'points'>;

/** Four-point score of a length: points, and per area of it. */
export interface FlawScore {
  readonly points: number;
  readonly perSquareMetres: number;
  readonly perSquareYards: number;
}

export function scoreOf(flaws: readonly FlawInput[], length: Millimetres, width: Millimetres): FlawScore {
  const points = totalPoints(
    flaws.map(({ fromEnd, along, across, hole }) => ({ fromEnd, size: Math.max(along, across), hole }))
  );
  return {
    points,
    perSquareMetres: perHundredSquareMetres(points, length, width),
    perSquareYards: perHundredSquareYards(points, length, width)
  };
}

interface FlawRow {
  id: string;
  length_id: string;
  from_end: number;
  from_selvedge: number;
  along: number;
  across: number;
  hole: number;
  note: string;
}

/** The flaws of some lengths, by length, from the start on. */
export async function byLength(
  scope: Scope,
  ids: readonly string[],
  db: Knex = database()
): Promise<Map<string, ClothFlaw[]>> {
  const rows = await db('cloth_flaws')
    .where({ studio_id: scope.studio })
    .whereIn('length_id', ids)
    .orderBy(['from_end', 'id'])
    .select<FlawRow[]>('id', 'length_id', 'from_end', 'from_selvedge', 'along', 'across', 'hole', 'note');
  const found = new Map<string, ClothFlaw[]>();
  for (const row of rows) {
    const flaws = found.get(row.length_id) ?? [];
    found.set(row.length_id, flaws);
    const hole = row.hole === 1;
    flaws.push({
      id: row.id,
      fromEnd: row.from_end,
      fromSelvedge: row.from_selvedge,
      along: row.along,
      across: row.across,
      hole,
      note: row.note,
      points: pointsOf({ size: Math.max(row.along, row.across), hole })
    });
  }
  return found;
}

/** Adds a flaw, within a transaction of who counts the version of the length. */
export async function insert(trx: Knex, scope: Scope, lengthId: string, flaw: FlawInput): Promise<string> {
  const id = newId();
  await trx('cloth_flaws').insert({
    id,
    studio_id: scope.studio,
    length_id: lengthId,
    from_end: flaw.fromEnd,
    from_selvedge: flaw.fromSelvedge,
    along: flaw.along,
    across: flaw.across,
    hole: flaw.hole ? 1 : 0,
    note: flaw.note
  });
  return id;
}

/** Forgets a flaw. 404 when the length has none of this id. */
export async function remove(trx: Knex, scope: Scope, lengthId: string, id: string): Promise<void> {
  const removed = await trx('cloth_flaws')
    .where({ studio_id: scope.studio, length_id: lengthId, id })
    .delete();
  if (removed === 0) throw notFound('flaw');
}

/** After `cut` was cut from the start: flaws within it go, the others move. */
export async function moveBy(scope: Scope, lengthId: string, cut: Millimetres, db: Knex): Promise<void> {
  const flaws = () => db('cloth_flaws').where({ studio_id: scope.studio, length_id: lengthId });
  await flaws().whereRaw('from_end + along / 2 <= ?', [cut]).delete();
  await flaws().update({ from_end: db.raw('max(0, from_end - ?)', [cut]) });
}
