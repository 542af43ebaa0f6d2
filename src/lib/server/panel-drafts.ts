import {
  handEditsSchema,
  mergedEdits,
  openPanelDraft,
  PANEL_DRAFT_SCHEMA,
  type HandEdit,
  type PanelDraft
} from '$lib/pattern/panel-draft';
import { UnreadablePanelSet } from '$lib/pattern/panel-set';
import { panelFindings } from '$lib/pattern/panel-check';
import { database } from './database';
import { newId } from './ids';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';
import * as styles from './styles';

/*
 * Working copies of the panel desk: one a style, shared by all who change it, each save naming the version that it was made from. A copy
 * becomes the next version of its style, with the list of what was changed by hand.
 */

interface DraftRow {
  base_version: number;
  version: number;
  document: string;
  save_id: string;
  edited_by: string;
  updated_at: number;
}

export interface WorkingCopy {
  /** 0 while nothing was saved: the document is then the style version itself. */
  readonly version: number;
  readonly document: PanelDraft;
  readonly savedAt: number | null;
  readonly savedBy: string | null;
}

const rows = (scope: Scope, styleId: string, db = database()) =>
  db('panel_drafts').where({ 'panel_drafts.studio_id': scope.studio, style_id: styleId });

async function stored(scope: Scope, styleId: string): Promise<WorkingCopy | null> {
  const row = await rows(scope, styleId)
    .leftJoin('users', 'users.id', 'panel_drafts.edited_by')
    .first<(DraftRow & { name: string | null }) | undefined>('panel_drafts.*', 'users.name as name');
  return row
    ? {
        version: row.version,
        document: openPanelDraft(JSON.parse(row.document)),
        savedAt: row.updated_at,
        savedBy: row.name ?? ''
      }
    : null;
}

/** The working copy of a style; where there is none, what one would begin with: the latest version. */
export async function read(scope: Scope, styleId: string): Promise<WorkingCopy> {
  const latest = await styles.versionOf(scope, styleId);
  return (
    (await stored(scope, styleId)) ?? {
      version: 0,
      document: { schema: PANEL_DRAFT_SCHEMA, base: latest.number, panels: latest.panels, edits: [] },
      savedAt: null,
      savedBy: null
    }
  );
}

export interface DraftSave {
  /** The version it was made from; 0 for the first save. */
  readonly version: number;
  /** Made by the browser: a repeat gets the first answer. */
  readonly saveId: string;
  readonly document: unknown;
}

function opened(document: unknown): PanelDraft {
  try {
    return openPanelDraft(document);
  } catch (refusal) {
    if (refusal instanceof UnreadablePanelSet)
      throw new Problem(400, 'invalid-panels', 'The panels do not fit', refusal.message, {
        issues: refusal.issues
      });
    throw refusal;
  }
}

async function outOfDate(scope: Scope, styleId: string): Promise<Problem> {
  const current = await read(scope, styleId);
  return new Problem(
    409,
    'desk-out-of-date',
    'The panels were changed meanwhile',
    current.version === 0
      ? 'The working copy was saved as a version, or left, by somebody else meanwhile.'
      : `${current.savedBy || 'Somebody'} saved meanwhile.`,
    { current }
  );
}

/** Saves a working copy. 409 with the current one when it was made from an older one. */
export async function save(
  scope: Scope,
  styleId: string,
  posted: DraftSave,
  now = Date.now()
): Promise<{ version: number; savedAt: number }> {
  const style = await styles.read(scope, styleId);
  const document = opened(posted.document);
  if (!style.versions.some(({ number }) => number === document.base))
    throw new Problem(
      400,
      'invalid-panels',
      'The panels do not fit',
      `The style has no version ${document.base}.`
    );
  const answer = await database().transaction(async (trx) => {
    const row = await rows(scope, styleId, trx).first<DraftRow | undefined>();
    if (row && row.save_id === posted.saveId) return { version: row.version, savedAt: row.updated_at };
    if ((row?.version ?? 0) !== posted.version) return null;
    const values = {
      base_version: document.base,
      version: posted.version + 1,
      document: JSON.stringify(document),
      save_id: posted.saveId,
      edited_by: scope.user,
      updated_at: now
    };
    if (row) await rows(scope, styleId, trx).update(values);
    else
      await trx('panel_drafts').insert({
        id: newId(now),
        studio_id: scope.studio,
        style_id: styleId,
        created_at: now,
        ...values
      });
    return { version: values.version, savedAt: now };
  });
  if (!answer) throw await outOfDate(scope, styleId);
  return answer;
}

/** Leaves the working copy: the style is as its latest version again. */
export async function leave(scope: Scope, styleId: string, version: number): Promise<void> {
  await styles.read(scope, styleId);
  const gone = await rows(scope, styleId).where({ version }).delete();
  if (gone === 0) throw await outOfDate(scope, styleId);
}

/**
 * Makes the next version of the style from the working copy and ends it. The version keeps what was changed by hand: what its base had
 * already, and what was done since. Refused with the place while a panel does not hold, and with 409 when the style has a newer version
 * than the copy was made from.
 */
export async function saveAsVersion(
  scope: Scope,
  styleId: string,
  { version, note }: { readonly version: number; readonly note: string },
  now = Date.now()
): Promise<{ versionId: string; number: number }> {
  const copy = await read(scope, styleId);
  if (copy.version === 0 || copy.version !== version) throw await outOfDate(scope, styleId);
  const { base, panels, edits } = copy.document;
  for (const panel of panels) {
    const stop = panelFindings(panel).find(({ severity }) => severity === 'stops');
    if (stop)
      throw new Problem(400, 'invalid-panels', 'A panel does not hold', `${panel.name}: ${stop.message}`);
  }
  const from = await styles.versionOf(scope, styleId, base);
  const kept = mergedEdits(await handEditsOf(scope, from.id), edits);
  return database().transaction(async (trx) => {
    const made = await styles.addVersion(
      scope,
      styleId,
      { panels, note: note || inWords(edits), sourceFile: from.source?.fileId ?? null },
      base,
      { now, db: trx }
    );
    await trx('style_versions')
      .where({ studio_id: scope.studio, id: made.versionId })
      .update({ hand_edits: JSON.stringify(kept) });
    const gone = await rows(scope, styleId, trx).where({ version }).delete();
    if (gone === 0) throw new Problem(409, 'desk-out-of-date', 'The panels were changed meanwhile');
    return made;
  });
}

/** What was changed by hand in a style version, since it was drafted or uploaded; a new draft would lose it. */
export async function handEditsOf(scope: Scope, versionId: string): Promise<HandEdit[]> {
  const row = await database()('style_versions')
    .where({ studio_id: scope.studio, id: versionId })
    .first<{ hand_edits: string | null } | undefined>('hand_edits');
  if (!row) throw notFound('style version');
  return row.hand_edits === null ? [] : handEditsSchema.parse(JSON.parse(row.hand_edits));
}

/** 'By hand: Front: moved a point of side (3 times).' */
export function inWords(edits: readonly HandEdit[]): string {
  if (edits.length === 0) return '';
  const said = edits.map(
    ({ panelName, what, times }) => `${panelName}: ${what}${times > 1 ? ` (${times} times)` : ''}`
  );
  const text = `By hand: ${said.join('; ')}.`;
  return text.length <= 500 ? text : `${text.slice(0, 498)}…`;
}
