import type { Body, PointId } from '$lib/drafting/measurement-points';
import * as audit from './audit';
import { database } from './database';
import { newId } from './ids';
import { notFound } from './problem';
import type { Scope } from './scope';

/*
 * Dated sets of a client's measurements. A set is never changed: measuring again makes a new one.
 */

export interface Measured {
  readonly point: PointId;
  /** `both`, or left and right where they differ. */
  readonly side: 'both' | 'left' | 'right';
  readonly mm: number;
  readonly typed: string;
  /** A second reading of a girth. */
  readonly second: { readonly mm: number; readonly typed: string } | null;
}

export interface MeasurementSetInput {
  /** Plain date. */
  readonly takenOn: string;
  readonly takenBy: string;
  readonly posture: string;
  readonly worn: string;
  readonly measured: readonly Measured[];
}

export interface MeasurementSet extends MeasurementSetInput {
  readonly id: string;
  readonly clientId: string;
  readonly createdAt: number;
}

export interface ListedSet {
  readonly id: string;
  readonly takenOn: string;
  readonly takenBy: string;
  readonly worn: string;
  readonly count: number;
}

/** A client's sets, the newest first. */
export async function list(scope: Scope, clientId: string): Promise<ListedSet[]> {
  const rows = await database()('measurement_sets')
    .leftJoin('measurements', 'measurements.set_id', 'measurement_sets.id')
    .where({ 'measurement_sets.studio_id': scope.studio, client_id: clientId })
    .groupBy('measurement_sets.id')
    .orderBy([
      { column: 'taken_on', order: 'desc' },
      { column: 'measurement_sets.created_at', order: 'desc' }
    ])
    .select({ id: 'measurement_sets.id', takenOn: 'taken_on', takenBy: 'taken_by', worn: 'worn' })
    .count<(ListedSet & { count: number })[]>({ count: 'point' });
  return rows.map((row) => ({ ...row, count: Number(row.count) }));
}

export async function read(scope: Scope, id: string): Promise<MeasurementSet> {
  const row = await database()('measurement_sets').where({ studio_id: scope.studio, id }).first<
    | {
        id: string;
        client_id: string;
        taken_on: string;
        taken_by: string;
        posture: string;
        worn: string;
        created_at: number;
      }
    | undefined
  >();
  if (!row) throw notFound('set of measurements');
  const rows = await database()('measurements').where({ studio_id: scope.studio, set_id: id }).select<
    {
      point: PointId;
      side: Measured['side'];
      mm: number;
      typed: string;
      second_mm: number | null;
      second_typed: string;
    }[]
  >();
  return {
    id: row.id,
    clientId: row.client_id,
    takenOn: row.taken_on,
    takenBy: row.taken_by,
    posture: row.posture,
    worn: row.worn,
    createdAt: row.created_at,
    measured: rows.map(({ second_mm, second_typed, ...one }) => ({
      ...one,
      second: second_mm === null ? null : { mm: second_mm, typed: second_typed }
    }))
  };
}

export async function create(
  scope: Scope,
  clientId: string,
  set: MeasurementSetInput,
  now = Date.now()
): Promise<string> {
  const client = await database()('clients')
    .where({ studio_id: scope.studio, id: clientId })
    .whereNull('erased_at')
    .first('id');
  if (!client) throw notFound('client');
  const id = newId(now);
  await database().transaction(async (trx) => {
    await trx('measurement_sets').insert({
      id,
      studio_id: scope.studio,
      client_id: clientId,
      taken_on: set.takenOn,
      taken_by: set.takenBy,
      posture: set.posture,
      worn: set.worn,
      created_at: now
    });
    for (const one of set.measured)
      await trx('measurements').insert({
        set_id: id,
        studio_id: scope.studio,
        point: one.point,
        side: one.side,
        mm: one.mm,
        typed: one.typed,
        second_mm: one.second?.mm ?? null,
        second_typed: one.second?.typed ?? ''
      });
    await audit.recordBy(scope, 'measurements: taken', clientId, { set: id }, trx);
  });
  return id;
}

/** The body that a draft takes: of two readings their mean, of left and right the larger, so that the garment closes over both. */
export function bodyOf(measured: readonly Measured[]): Body {
  const body: Partial<Record<PointId, number>> = {};
  for (const { point, mm, second } of measured) {
    const value = second ? (mm + second.mm) / 2 : mm;
    body[point] = Math.max(body[point] ?? 0, value);
  }
  return body;
}
