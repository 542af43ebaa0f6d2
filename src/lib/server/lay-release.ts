import type { Knex } from 'knex';
import { z } from 'zod';
import { check, mayRelease } from '$lib/lay/check';
import type { LayDocument } from '$lib/lay/document';
import { KEPT_LAY_SCHEMA, shortName, type KeptLay } from '$lib/lay/kept-lay';
import { panelKey, type PanelBook } from '$lib/lay/panel-book';
import type { Verdict } from '$lib/lay/verdict';
import * as audit from './audit';
import { database } from './database';
import { refuseWithoutDeposit } from './deposit-rule';
import { newId } from './ids';
import {
  current,
  ordersOf,
  outOfDate,
  refuseUnlessOpen,
  rowOf,
  type Current,
  type LayRow
} from './lay-current';
import * as layFacts from './lay-facts';
import * as layLengths from './lay-lengths';
import * as layRevisions from './lay-revisions';
import type { ListedRevision, ReleasedRevision } from './lay-revisions';
import * as lays from './lays';
import { Problem } from './problem';
import type { Scope } from './scope';

/*
 * Keeping a lay for good: under a name, or by releasing it. What a revision is made of is checked, written as bytes and
 * hashed here; nothing ever changes these bytes.
 */

/** Everything of a revision that is made before its row is written. */
interface Draft {
  readonly bytes: Buffer;
  readonly hash: string;
  readonly verdict: Verdict;
}

async function draft(scope: Scope, lay: Current, now: number): Promise<Draft> {
  const { row, facts, document, panels } = lay;
  const studio = await database()('studios').where({ id: scope.studio }).first<{ name: string }>('name');
  const kept: KeptLay = {
    schema: KEPT_LAY_SCHEMA,
    document,
    panels: panelsNamed(document, panels),
    labels: {
      studio: studio.name,
      lay: row.name,
      order: { number: facts.order.number, shortName: shortName(facts.order.clientName) },
      cloth: { name: facts.cloth.name, fibre: facts.cloth.fibre, colour: facts.cloth.colour }
    },
    keptAt: now
  };
  const bytes = Buffer.from(JSON.stringify(kept), 'utf8');
  return { bytes, hash: layRevisions.sha256(bytes), verdict: check(document, kept.panels) };
}

/** The panels that needs and placements of the document name. */
function panelsNamed(document: LayDocument, book: PanelBook): PanelBook {
  const garments = new Map(document.garments.map((garment) => [garment.id, garment]));
  const named: Record<string, PanelBook[string]> = {};
  for (const { garment, panel } of [...document.needs, ...document.placements]) {
    const version = garments.get(garment)?.styleVersion;
    const key = version === undefined ? undefined : panelKey(version, panel);
    const known = key === undefined ? undefined : book[key];
    if (key !== undefined && known) named[key] = known;
  }
  return named;
}

async function insert(
  trx: Knex,
  scope: Scope,
  row: LayRow,
  name: string,
  { bytes, hash, verdict }: Draft,
  now: number,
  releasedAt: number | null
): Promise<{ id: string; number: number }> {
  const [last] = await trx('lay_revisions')
    .where({ studio_id: scope.studio, lay_id: row.id })
    .max<{ number: number | null }[]>({ number: 'number' });
  const id = newId(now);
  const number = Number(last?.number ?? 0) + 1;
  await trx('lay_revisions').insert({
    id,
    studio_id: scope.studio,
    lay_id: row.id,
    number,
    name,
    lay_version: row.version,
    bytes,
    hash,
    verdict: JSON.stringify(verdict),
    released_at: releasedAt,
    created_by: scope.user,
    created_at: now
  });
  return { id, number };
}

/** The version that the person saw, and what they call the revision. */
export const namingSchema = z.object({
  version: z.int().min(1),
  name: z.string().trim().min(1, 'Give the revision a name.').max(120)
});
export type Naming = z.infer<typeof namingSchema>;

async function currentAt(scope: Scope, layId: string, { version }: Naming): Promise<Current> {
  const now = await current(scope, layId);
  if (now.row.version !== version) throw await outOfDate(scope, layId);
  return now;
}

/** Keeps the named version under a name, with whatever findings it has. */
export async function keep(
  scope: Scope,
  layId: string,
  naming: Naming,
  now = Date.now()
): Promise<ListedRevision> {
  const lay = await currentAt(scope, layId, naming);
  const made = await draft(scope, lay, now);
  const kept = await database().transaction(async (trx) => {
    const row = await rowOf(scope, layId, trx);
    if (row.version !== naming.version) return null;
    return insert(trx, scope, row, naming.name, made, now, null);
  });
  if (!kept) throw await outOfDate(scope, layId);
  return (await layRevisions.read(scope, layId, kept.number)).revision;
}

/**
 * Releases the named version: checked here, refused (409 `findings-stop`, with the verdict) while a finding stops. The lay
 * becomes read-only and the chosen one of its order and cloth.
 */
export async function release(
  scope: Scope,
  layId: string,
  naming: Naming,
  now = Date.now()
): Promise<ReleasedRevision> {
  const lay = await currentAt(scope, layId, naming);
  refuseUnlessOpen(lay.row);
  const made = await draft(scope, lay, now);
  if (!mayRelease(made.verdict)) {
    await lays.check(scope, layId, naming.version);
    const stops = made.verdict.findings.filter(({ severity }) => severity === 'stops');
    throw new Problem(
      409,
      'findings-stop',
      'This lay can’t be released yet',
      `${stops.length === 1 ? 'One finding stops it' : `${stops.length} findings stop it`}: ${stops[0]!.message}`,
      { verdict: made.verdict }
    );
  }
  await refuseWithoutDeposit(scope, await ordersOf(scope, lay.row));
  const name = naming.name;
  const done = await database().transaction(async (trx) => {
    const row = await rowOf(scope, layId, trx);
    if (row.version !== naming.version || row.state !== 'open') return null;
    await lays.refuseBesideReleased(trx, scope, row);
    await layLengths.claim(trx, scope, layId, await ordersOf(scope, row, trx), now);
    const revision = await insert(trx, scope, row, name, made, now, now);
    await trx('lays')
      .where({ studio_id: scope.studio, id: layId })
      .update({
        state: 'released',
        released_revision_id: revision.id,
        document: JSON.stringify(lay.document),
        verdict: JSON.stringify(made.verdict),
        verdict_version: row.version,
        updated_at: now
      });
    await lays.markChosen(trx, scope, row);
    await audit.recordBy(
      scope,
      'lay: released',
      layId,
      { revision: revision.number, hash: made.hash, version: row.version },
      trx
    );
    return revision;
  });
  if (!done) {
    refuseUnlessOpen(await rowOf(scope, layId));
    throw await outOfDate(scope, layId);
  }
  return { ...done, name, hash: made.hash, releasedAt: now };
}

/** Opens a released lay again: a new version; the revision on paper is withdrawn. A cut lay never opens. */
export async function reopen(scope: Scope, layId: string, now = Date.now()): Promise<{ version: number }> {
  return database().transaction(async (trx) => {
    const row = await rowOf(scope, layId, trx);
    if (row.state === 'cut') refuseUnlessOpen(row);
    if (row.state === 'open')
      throw new Problem(409, 'lay-open', 'This lay is open', 'Only a released lay can be reopened.');
    const version = row.version + 1;
    await trx('lays')
      .where({ studio_id: scope.studio, id: layId })
      .update({ state: 'open', released_revision_id: null, version, updated_at: now });
    await trx('lay_revisions')
      .where({ studio_id: scope.studio, id: row.released_revision_id })
      .update({ withdrawn_at: now });
    await audit.recordBy(scope, 'lay: reopened', layId, { version }, trx);
    return { version };
  });
}

/** Makes the document of a revision the newest version of its lay, with the facts of order and cloth as they stand. */
export async function restore(
  scope: Scope,
  layId: string,
  wanted: { readonly number: number; readonly version: number; readonly saveId: string },
  now = Date.now()
): Promise<{ version: number; document: LayDocument }> {
  const { row, facts } = await current(scope, layId);
  refuseUnlessOpen(row);
  const { document } = await layRevisions.read(scope, layId, wanted.number);
  const restored = layFacts.withFacts(document, facts);
  const { version } = await lays.store(
    scope,
    layId,
    { version: wanted.version, saveId: wanted.saveId, document: restored },
    now
  );
  return { version, document: restored };
}
