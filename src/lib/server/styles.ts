import type { Knex } from 'knex';
import { PANEL_SET_SCHEMA, type Panel, type PanelSet } from '$lib/pattern/panel';
import { openPanelSet, UnreadablePanelSet } from '$lib/pattern/panel-set';
import * as audit from './audit';
import { database } from './database';
import { newId } from './ids';
import { containing, pageOf, type Listing, type Page } from './listing';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';

/*
 * Styles and their versions. A version is never changed: whatever is altered in its panels makes the next one, and
 * orders keep the version that they were made with.
 */

export interface ListedStyle {
  readonly id: string;
  readonly name: string;
  readonly kind: string;
  readonly archived: boolean;
  readonly updatedAt: number;
  /** Of the latest version. */
  readonly panelCount: number;
  readonly versions: number;
}

export interface ListedVersion {
  readonly id: string;
  readonly number: number;
  readonly panelCount: number;
  readonly note: string;
  readonly createdAt: number;
  readonly createdBy: string;
  /** The upload that it came from. */
  readonly source: { readonly fileId: string; readonly name: string } | null;
}

export interface StyleVersion extends ListedVersion {
  readonly styleId: string;
  readonly panels: readonly Panel[];
}

export interface Style {
  readonly id: string;
  readonly name: string;
  readonly kind: string;
  readonly note: string;
  readonly archived: boolean;
  readonly updatedAt: number;
  /** Newest first. */
  readonly versions: readonly ListedVersion[];
}

export interface StyleWords {
  readonly name: string;
  /** What sort of garment: bodice, skirt. */
  readonly kind: string;
  readonly note: string;
}

export const styleSorts = ['name', 'kind', 'panels', 'updated'] as const;
export type StyleSort = (typeof styleSorts)[number];
const sortColumns = { name: 'name', kind: 'kind', panels: 'panel_count', updated: 'updated_at' } as const;

interface StyleRow {
  id: string;
  name: string;
  kind: string;
  archived_at: number | null;
  updated_at: number;
  panel_count: number;
  versions: number;
}

/** One page of the studio's styles; archived ones only when asked for. */
export async function list(
  scope: Scope,
  listing: Listing<StyleSort>,
  which: { readonly archived: boolean } = { archived: false }
): Promise<Page<ListedStyle>> {
  const db = database();
  const counted = db('styles')
    .join('style_versions', 'style_versions.style_id', 'styles.id')
    .where('styles.studio_id', scope.studio)
    .groupBy('styles.id')
    .select({
      id: 'styles.id',
      name: 'styles.name',
      kind: 'styles.kind',
      archived_at: 'styles.archived_at',
      updated_at: 'styles.updated_at'
    })
    .select(
      db.raw('count(style_versions.id) as versions'),
      // Versions count up from one, so the latest is the one whose number is the count.
      db.raw(
        'max(case when style_versions.number = (select max(number) from style_versions as later where later.style_id = styles.id) then style_versions.panel_count end) as panel_count'
      )
    );
  const query = db.from(counted.as('listed')).select('*');
  if (which.archived) query.whereNotNull('archived_at');
  else query.whereNull('archived_at');
  containing(query, ['name', 'kind'], listing.search);
  const page = await pageOf<StyleRow, StyleSort>(query, listing, sortColumns, 'id');
  return {
    ...page,
    rows: page.rows.map((row) => ({
      id: row.id,
      name: row.name,
      kind: row.kind,
      archived: row.archived_at !== null,
      updatedAt: row.updated_at,
      panelCount: Number(row.panel_count),
      versions: Number(row.versions)
    }))
  };
}

function versionQuery(scope: Scope, db: Knex) {
  return db('style_versions')
    .leftJoin('users', 'users.id', 'style_versions.created_by')
    .leftJoin('files', 'files.id', 'style_versions.source_file_id')
    .where('style_versions.studio_id', scope.studio)
    .select({
      id: 'style_versions.id',
      styleId: 'style_versions.style_id',
      number: 'style_versions.number',
      panelCount: 'style_versions.panel_count',
      note: 'style_versions.note',
      createdAt: 'style_versions.created_at',
      createdBy: 'users.name',
      fileId: 'style_versions.source_file_id',
      fileName: 'files.name'
    });
}

interface VersionRow {
  id: string;
  styleId: string;
  number: number;
  panelCount: number;
  note: string;
  createdAt: number;
  createdBy: string | null;
  fileId: string | null;
  fileName: string | null;
  panels?: string;
}

function listedVersion(row: VersionRow): ListedVersion {
  return {
    id: row.id,
    number: row.number,
    panelCount: row.panelCount,
    note: row.note,
    createdAt: row.createdAt,
    createdBy: row.createdBy ?? '',
    source: row.fileId === null ? null : { fileId: row.fileId, name: row.fileName ?? '' }
  };
}

/** A style with the list of its versions; 404 for what is not this studio's. */
export async function read(scope: Scope, id: string): Promise<Style> {
  const row = await database()('styles')
    .where({ studio_id: scope.studio, id })
    .first<(Omit<StyleRow, 'panel_count' | 'versions'> & { note: string }) | undefined>();
  if (!row) throw notFound('style');
  const versions = (await versionQuery(scope, database())
    .where('style_versions.style_id', id)
    .orderBy('style_versions.number', 'desc')) as VersionRow[];
  return {
    id: row.id,
    name: row.name,
    kind: row.kind,
    note: row.note,
    archived: row.archived_at !== null,
    updatedAt: row.updated_at,
    versions: versions.map(listedVersion)
  };
}

/** A version with its panels, by its id; 404 for what is not this studio's. */
export async function readVersion(scope: Scope, versionId: string): Promise<StyleVersion> {
  const row = (await versionQuery(scope, database())
    .where('style_versions.id', versionId)
    .select({ panels: 'style_versions.panels' })
    .first()) as VersionRow | undefined;
  if (!row) throw notFound('style version');
  return {
    ...listedVersion(row),
    styleId: row.styleId,
    panels: openPanelSet(JSON.parse(row.panels!)).panels
  };
}

/** The latest version of a style, or the numbered one. */
export async function versionOf(scope: Scope, styleId: string, number?: number): Promise<StyleVersion> {
  const query = database()('style_versions').where({ studio_id: scope.studio, style_id: styleId });
  if (number !== undefined) query.where({ number });
  const row = await query.orderBy('number', 'desc').first<{ id: string } | undefined>('id');
  if (!row) throw notFound('style version');
  return readVersion(scope, row.id);
}

export interface VersionInput {
  readonly panels: readonly Panel[];
  readonly note?: string;
  readonly sourceFile?: string | null;
}

interface Options {
  readonly now?: number;
  readonly db?: Knex;
}

/** Panels that come in go through the same door as stored ones. */
function checkedSet(panels: readonly Panel[]): PanelSet {
  try {
    return openPanelSet({ schema: PANEL_SET_SCHEMA, panels });
  } catch (refusal) {
    if (refusal instanceof UnreadablePanelSet)
      throw new Problem(400, 'invalid-panels', 'The panels do not fit', refusal.message);
    throw refusal;
  }
}

async function insertVersion(
  scope: Scope,
  styleId: string,
  number: number,
  input: VersionInput,
  now: number,
  db: Knex
): Promise<string> {
  const set = checkedSet(input.panels);
  const id = newId(now);
  await db('style_versions').insert({
    id,
    studio_id: scope.studio,
    style_id: styleId,
    number,
    panels: JSON.stringify(set),
    panel_count: set.panels.length,
    source_file_id: input.sourceFile ?? null,
    note: input.note ?? '',
    created_by: scope.user,
    created_at: now
  });
  return id;
}

/** A new style with its first version. */
export async function create(
  scope: Scope,
  words: StyleWords,
  version: VersionInput,
  { now = Date.now(), db = database() }: Options = {}
): Promise<{ styleId: string; versionId: string }> {
  return db.transaction(async (trx) => {
    const styleId = newId(now);
    await trx('styles').insert({
      id: styleId,
      studio_id: scope.studio,
      name: words.name,
      kind: words.kind,
      note: words.note,
      created_at: now,
      updated_at: now
    });
    const versionId = await insertVersion(scope, styleId, 1, version, now, trx);
    return { styleId, versionId };
  });
}

/**
 * The next version of a style. `basedOn` is the number of the version that the person looked at: if another one was
 * saved meanwhile, nothing is saved (409).
 */
export async function addVersion(
  scope: Scope,
  styleId: string,
  version: VersionInput,
  basedOn: number | null,
  { now = Date.now(), db = database() }: Options = {}
): Promise<{ versionId: string; number: number }> {
  return db.transaction(async (trx) => {
    const latest = await trx('style_versions')
      .where({ studio_id: scope.studio, style_id: styleId })
      .max<{ number: number | null }>({ number: 'number' })
      .first();
    if (latest?.number == null) throw notFound('style');
    if (basedOn !== null && latest.number !== basedOn)
      throw new Problem(
        409,
        'style-out-of-date',
        'The style was changed meanwhile',
        `Version ${latest.number} was saved while you looked at version ${basedOn}. Look at it first, then make your change again.`,
        { current: latest.number }
      );
    const number = latest.number + 1;
    const versionId = await insertVersion(scope, styleId, number, version, now, trx);
    await trx('styles').where({ studio_id: scope.studio, id: styleId }).update({ updated_at: now });
    return { versionId, number };
  });
}

/** Changes name, kind and note of a style. */
export async function update(
  scope: Scope,
  id: string,
  words: StyleWords,
  now: number = Date.now()
): Promise<void> {
  const changed = await database()('styles')
    .where({ studio_id: scope.studio, id })
    .update({ name: words.name, kind: words.kind, note: words.note, updated_at: now });
  if (changed === 0) throw notFound('style');
}

/** Takes a style out of the choices (orders keep it), or puts it back. */
export async function archive(
  scope: Scope,
  id: string,
  archived: boolean,
  now: number = Date.now()
): Promise<void> {
  const changed = await database()('styles')
    .where({ studio_id: scope.studio, id })
    .update({ archived_at: archived ? now : null, updated_at: now });
  if (changed === 0) throw notFound('style');
  await audit.recordBy(scope, archived ? 'style: archived' : 'style: put back', id);
}

export interface StyleUse {
  readonly id: string;
  readonly number: number;
  readonly clientName: string;
  readonly stage: string;
  readonly version: number;
}

/** The latest orders whose lines take a version of this style. */
export async function uses(scope: Scope, id: string): Promise<StyleUse[]> {
  return database()('order_items')
    .join('orders', 'orders.id', 'order_items.order_id')
    .join('style_versions', 'style_versions.id', 'order_items.style_version_id')
    .where({ 'order_items.studio_id': scope.studio, 'style_versions.style_id': id })
    .groupBy('orders.id')
    .orderBy('orders.number', 'desc')
    .limit(50)
    .select<StyleUse[]>({
      id: 'orders.id',
      number: 'orders.number',
      clientName: 'orders.client_name',
      stage: 'orders.stage'
    })
    .max({ version: 'style_versions.number' });
}
