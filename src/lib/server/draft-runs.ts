import { z } from 'zod';
import { drawDraft, type Drawn } from '$lib/drafting/draft';
import { pointIds, type Body } from '$lib/drafting/measurement-points';
import { draftById } from '$lib/drafting/registry';
import { publishedTables } from '$lib/drafting/size-tables';
import * as audit from './audit';
import { database } from './database';
import { newId } from './ids';
import * as sets from './measurement-sets';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';
import * as sizeCharts from './size-charts';
import * as styles from './styles';

/*
 * What was drafted: from whose measurements or which size, with which choices. Panels and sheet are drawn anew from these, always the
 * same; once kept as a version of a style the outlines stand there. Never for cutters.
 */

/** Where the measurements come from. */
export type Source =
  | { readonly kind: 'set'; readonly set: string }
  | { readonly kind: 'size'; readonly table: string; readonly size: string };

export interface DraftRun {
  readonly id: string;
  readonly draft: string;
  readonly clientId: string | null;
  readonly setId: string | null;
  readonly size: string;
  readonly body: Body;
  readonly choices: Readonly<Record<string, unknown>>;
  readonly styleVersionId: string | null;
  readonly createdAt: number;
  /** The body was erased with the client's data. */
  readonly erased: boolean;
}

const bodySchema = z.object({
  schema: z.literal(1),
  body: z.partialRecord(z.enum(pointIds), z.number().finite().positive())
});
const choicesSchema = z.object({
  schema: z.literal(1),
  choices: z.record(z.string(), z.union([z.number(), z.string(), z.boolean()]))
});

interface Row {
  id: string;
  draft: string;
  client_id: string | null;
  set_id: string | null;
  size: string;
  body: string;
  choices: string;
  style_version_id: string | null;
  created_at: number;
}

function runOf(row: Row): DraftRun {
  const { body } = bodySchema.parse(JSON.parse(row.body));
  return {
    id: row.id,
    draft: row.draft,
    clientId: row.client_id,
    setId: row.set_id,
    size: row.size,
    body,
    choices: choicesSchema.parse(JSON.parse(row.choices)).choices,
    styleVersionId: row.style_version_id,
    createdAt: row.created_at,
    erased: Object.keys(body).length === 0
  };
}

/** The measurements of a source, within the studio, and whose they are. */
export async function bodyOf(
  scope: Scope,
  source: Source
): Promise<{ body: Body; clientId: string | null; setId: string | null; size: string }> {
  if (source.kind === 'set') {
    const set = await sets.read(scope, source.set);
    return { body: sets.bodyOf(set.measured), clientId: set.clientId, setId: set.id, size: '' };
  }
  const table = [...publishedTables, ...(await sizeCharts.list(scope))].find(({ id }) => id === source.table);
  const row = table?.sizes.find(({ size }) => size === source.size);
  if (!table || !row) throw notFound('size');
  return { body: row.body, clientId: null, setId: null, size: `${table.name}, ${row.size}` };
}

/** Draws and keeps a run. @throws Problem 400 with the fault at each measurement (`point.…`) or choice when it can't be drawn. */
export async function create(
  scope: Scope,
  draftId: string,
  source: Source,
  choices: Readonly<Record<string, unknown>>,
  now = Date.now()
): Promise<string> {
  const draft = draftById(draftId);
  if (!draft) throw notFound('draft');
  const { body, clientId, setId, size } = await bodyOf(scope, source);
  const drawn = drawDraft(draft, body, choices);
  if (!drawn.ok) throw refusal(drawn);
  const id = newId(now);
  await database()('draft_runs').insert({
    id,
    studio_id: scope.studio,
    draft: draft.id,
    draft_version: draft.version,
    client_id: clientId,
    set_id: setId,
    size,
    body: JSON.stringify({ schema: 1, body }),
    choices: JSON.stringify({ schema: 1, choices }),
    created_at: now,
    created_by: scope.user
  });
  await audit.recordBy(scope, 'draft: drawn', id, { draft: draft.id });
  return id;
}

export function refusal(drawn: Extract<Drawn, { ok: false }>): Problem {
  const fields: Record<string, string> = {};
  for (const { measurement, choice, message } of drawn.faults)
    fields[measurement ? `point.${measurement}` : (choice ?? '')] ??= message;
  return new Problem(400, 'cannot-draft', 'It can’t be drawn so', Object.values(fields).join(' '), {
    fields
  });
}

export async function read(scope: Scope, id: string): Promise<DraftRun> {
  const row = await database()('draft_runs').where({ studio_id: scope.studio, id }).first<Row | undefined>();
  if (!row) throw notFound('draft');
  return runOf(row);
}

/** A run drawn again. @throws Problem 410 when its body was erased. */
export function drawn(run: DraftRun): Drawn {
  const draft = draftById(run.draft);
  if (!draft) throw notFound('draft');
  if (run.erased)
    throw new Problem(
      410,
      'body-erased',
      'The measurements are erased',
      'At the client’s wish. Panels that became a style are kept there.'
    );
  return drawDraft(draft, run.body, run.choices);
}

export interface ListedRun {
  readonly id: string;
  readonly name: string;
  readonly clientName: string | null;
  readonly measuredOn: string | null;
  readonly size: string;
  readonly kept: boolean;
  readonly createdAt: number;
}

const listed = (scope: Scope) =>
  database()('draft_runs')
    .leftJoin('clients', 'clients.id', 'draft_runs.client_id')
    .leftJoin('measurement_sets', 'measurement_sets.id', 'draft_runs.set_id')
    .where('draft_runs.studio_id', scope.studio)
    .orderBy('draft_runs.created_at', 'desc')
    .select<
      {
        id: string;
        draft: string;
        clientName: string | null;
        measuredOn: string | null;
        size: string;
        style: string | null;
        createdAt: number;
      }[]
    >({
      id: 'draft_runs.id',
      draft: 'draft_runs.draft',
      clientName: 'clients.name',
      measuredOn: 'measurement_sets.taken_on',
      size: 'draft_runs.size',
      style: 'draft_runs.style_version_id',
      createdAt: 'draft_runs.created_at'
    });

const named = (rows: Awaited<ReturnType<typeof listed>>): ListedRun[] =>
  rows.map(({ draft, style, ...row }) => ({
    ...row,
    name: draftById(draft)?.name ?? draft,
    kept: style !== null
  }));

/** The latest runs of the studio. */
export const latest = async (scope: Scope, limit = 20): Promise<ListedRun[]> =>
  named(await listed(scope).limit(limit));

export const ofClient = async (scope: Scope, clientId: string): Promise<ListedRun[]> =>
  named(await listed(scope).where('draft_runs.client_id', clientId).limit(100));

/**
 * Keeps a run's panels: as a new style, or as the next version of one. @throws Problem 409 when the run was kept already, or the
 * style was changed meanwhile.
 */
export async function keep(
  scope: Scope,
  id: string,
  where: { readonly style: string; readonly basedOn: number } | { readonly name: string },
  now = Date.now()
): Promise<{ styleId: string; versionId: string }> {
  const run = await read(scope, id);
  if (run.styleVersionId)
    throw new Problem(
      409,
      'draft-kept',
      'This draft is kept already',
      'Its panels stand in their style; draft anew to change them.'
    );
  const result = drawn(run);
  if (!result.ok) throw refusal(result);
  const draft = draftById(run.draft)!;
  const set = run.setId ? await sets.read(scope, run.setId) : null;
  const note = set ? `Drafted for measurements of ${set.takenOn}` : `Drafted for ${run.size}`;
  return database().transaction(async (trx) => {
    const version = { panels: result.result.panels, note };
    const kept =
      'style' in where
        ? {
            styleId: where.style,
            versionId: (await styles.addVersion(scope, where.style, version, where.basedOn, { now, db: trx }))
              .versionId
          }
        : await styles.create(scope, { name: where.name, kind: draft.name, note: '' }, version, {
            now,
            db: trx
          });
    const taken = await trx('draft_runs')
      .where({ studio_id: scope.studio, id })
      .whereNull('style_version_id')
      .update({ style_version_id: kept.versionId });
    if (taken !== 1) throw new Problem(409, 'draft-kept', 'This draft is kept already');
    await audit.recordBy(scope, 'draft: kept', id, { version: kept.versionId }, trx);
    return kept;
  });
}

/** What a version of a style was drafted from. */
export interface DraftedFrom {
  readonly id: string;
  readonly draft: string;
  readonly clientId: string | null;
  readonly measuredOn: string | null;
  readonly size: string;
  /** The client's latest set, where she was measured again since. */
  readonly newer: { readonly id: string; readonly takenOn: string } | null;
}

/** The run behind a version of a style, if it was drafted: what an order says of its measurements. */
export async function behindVersion(scope: Scope, versionId: string): Promise<DraftedFrom | null> {
  const row = await database()('draft_runs')
    .leftJoin('measurement_sets', 'measurement_sets.id', 'draft_runs.set_id')
    .where({ 'draft_runs.studio_id': scope.studio, style_version_id: versionId })
    .first<Omit<DraftedFrom, 'newer'> | undefined>({
      id: 'draft_runs.id',
      draft: 'draft_runs.draft',
      clientId: 'draft_runs.client_id',
      measuredOn: 'measurement_sets.taken_on',
      size: 'draft_runs.size'
    });
  if (!row) return null;
  const [latestSet] = row.clientId ? await sets.list(scope, row.clientId) : [];
  const newer = latestSet && row.measuredOn && latestSet.takenOn > row.measuredOn ? latestSet : null;
  return { ...row, newer: newer && { id: newer.id, takenOn: newer.takenOn } };
}
