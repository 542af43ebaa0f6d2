import { createHash } from 'node:crypto';
import { openKeptLay, type KeptLay } from '$lib/lay/kept-lay';
import type { PanelBook } from '$lib/lay/panel-book';
import type { LayDocument } from '$lib/lay/document';
import type { Verdict } from '$lib/lay/verdict';
import { database } from './database';
import { notFound } from './problem';
import type { Scope } from './scope';

/*
 * What is kept of a lay for good: on purpose and at release. A revision's bytes never change; their SHA-256 is printed on
 * paper. Check and guide of a revision use nothing but these bytes.
 */

/** A revision as it is named on screen and paper. */
export interface ReleasedRevision {
  readonly id: string;
  readonly number: number;
  readonly name: string;
  readonly hash: string;
  readonly releasedAt: number;
}

export interface ListedRevision {
  readonly id: string;
  readonly number: number;
  readonly name: string;
  readonly hash: string;
  readonly layVersion: number;
  readonly releasedAt: number | null;
  readonly withdrawnAt: number | null;
  readonly keptBy: string;
  readonly keptAt: number;
  readonly readings: Verdict['readings'];
  /** How many findings stop a release. */
  readonly stops: number;
}

export interface Revision {
  readonly revision: ListedRevision & { readonly layId: string };
  readonly document: LayDocument;
  readonly panels: PanelBook;
  readonly labels: KeptLay['labels'];
  readonly verdict: Verdict;
}

interface RevisionRow {
  id: string;
  lay_id: string;
  number: number;
  name: string;
  lay_version: number;
  hash: string;
  verdict: string;
  released_at: number | null;
  withdrawn_at: number | null;
  kept_by: string | null;
  created_at: number;
}

const columns = {
  id: 'lay_revisions.id',
  lay_id: 'lay_revisions.lay_id',
  number: 'lay_revisions.number',
  name: 'lay_revisions.name',
  lay_version: 'lay_revisions.lay_version',
  hash: 'lay_revisions.hash',
  verdict: 'lay_revisions.verdict',
  released_at: 'lay_revisions.released_at',
  withdrawn_at: 'lay_revisions.withdrawn_at',
  kept_by: 'users.name',
  created_at: 'lay_revisions.created_at'
};

function query(scope: Scope) {
  return database()('lay_revisions')
    .leftJoin('users', 'users.id', 'lay_revisions.created_by')
    .where({ 'lay_revisions.studio_id': scope.studio });
}

function listedOf(row: RevisionRow): ListedRevision {
  const verdict = JSON.parse(row.verdict) as Verdict;
  return {
    id: row.id,
    number: row.number,
    name: row.name,
    hash: row.hash,
    layVersion: row.lay_version,
    releasedAt: row.released_at,
    withdrawnAt: row.withdrawn_at,
    keptBy: row.kept_by ?? 'the workroom',
    keptAt: row.created_at,
    readings: verdict.readings,
    stops: verdict.findings.filter(({ severity }) => severity === 'stops').length
  };
}

/** Every revision of a lay, the newest first. */
export async function list(scope: Scope, layId: string): Promise<ListedRevision[]> {
  const lay = await database()('lays').where({ studio_id: scope.studio, id: layId }).first('id');
  if (!lay) throw notFound('lay');
  const rows = await query(scope)
    .where({ lay_id: layId })
    .orderBy('lay_revisions.number', 'desc')
    .select<RevisionRow[]>(columns);
  return rows.map(listedOf);
}

/** A revision of a lay by its number. */
export async function read(scope: Scope, layId: string, number: number): Promise<Revision> {
  const row = await query(scope)
    .where({ lay_id: layId, 'lay_revisions.number': number })
    .first<RevisionRow | undefined>(columns);
  if (!row) throw notFound('revision');
  return whole(scope, row);
}

/** A revision by its id: what the cutting guide is drawn from. */
export async function readById(scope: Scope, id: string): Promise<Revision> {
  const row = await query(scope).where({ 'lay_revisions.id': id }).first<RevisionRow | undefined>(columns);
  if (!row) throw notFound('revision');
  return whole(scope, row);
}

async function whole(scope: Scope, row: RevisionRow): Promise<Revision> {
  const { document, panels, labels } = await keptOf(scope, row.id);
  return {
    revision: { ...listedOf(row), layId: row.lay_id },
    document,
    panels,
    labels,
    verdict: JSON.parse(row.verdict) as Verdict
  };
}

/** The kept lay of a revision. Its bytes must still have their hash: anything else is damage, and throws. */
export async function keptOf(scope: Scope, id: string): Promise<KeptLay> {
  const row = await database()('lay_revisions')
    .where({ studio_id: scope.studio, id })
    .first<{ bytes: Buffer; hash: string } | undefined>('bytes', 'hash');
  if (!row) throw notFound('revision');
  const got = sha256(row.bytes);
  if (got !== row.hash)
    throw new Error(`Revision ${id} is damaged: its bytes have the hash ${got}, expected ${row.hash}`);
  return openKeptLay(JSON.parse(row.bytes.toString('utf8')));
}

/** How a released revision is named; null when it is not released. */
export async function released(scope: Scope, id: string): Promise<ReleasedRevision | null> {
  const row = await query(scope).where({ 'lay_revisions.id': id }).first<RevisionRow | undefined>(columns);
  return row && row.released_at !== null
    ? { id: row.id, number: row.number, name: row.name, hash: row.hash, releasedAt: row.released_at }
    : null;
}

/** What somebody who holds paper of a revision has to know. */
export interface PaperState {
  readonly state: 'current' | 'superseded' | 'withdrawn' | 'not-released';
  readonly layId: string;
  readonly layName: string;
  readonly number: number;
  readonly name: string;
  readonly hash: string;
  readonly keptAt: number;
  /** The released revision that replaces it, where there is one. */
  readonly currentNumber: number | null;
}

/** The revisions whose hash begins with `prefix` (at least 8 hex digits): usually one. */
export async function byHash(scope: Scope, prefix: string): Promise<PaperState[]> {
  if (!/^[0-9a-f]{8,64}$/.test(prefix)) return [];
  const rows = await query(scope)
    .join('lays', 'lays.id', 'lay_revisions.lay_id')
    .leftJoin({ now: 'lay_revisions' }, 'now.id', 'lays.released_revision_id')
    .where('lay_revisions.hash', 'like', `${prefix}%`)
    .select<(RevisionRow & { lay_name: string; now_id: string | null; now_number: number | null })[]>({
      ...columns,
      lay_name: 'lays.name',
      now_id: 'now.id',
      now_number: 'now.number'
    });
  return rows.map((row) => ({
    state:
      row.released_at === null
        ? 'not-released'
        : row.now_id === row.id
          ? 'current'
          : row.now_id !== null
            ? 'superseded'
            : 'withdrawn',
    layId: row.lay_id,
    layName: row.lay_name,
    number: row.number,
    name: row.name,
    hash: row.hash,
    keptAt: row.created_at,
    currentNumber: row.now_id !== null && row.now_id !== row.id ? row.now_number : null
  }));
}

/** SHA-256, hex. */
export function sha256(bytes: Uint8Array): string {
  return createHash('sha256').update(bytes).digest('hex');
}
