import type { ImportChoices } from '$lib/interchange/choices';
import { withoutOutline } from '$lib/interchange/leave-out';
import { panelsFrom, type ChoiceProblem } from '$lib/interchange/panels';
import { readingSchema, type Reading } from '$lib/interchange/reading';
import type { Panel } from '$lib/pattern/panel';
import { database } from './database';
import * as files from './files';
import { newId } from './ids';
import { readDrawing } from './import-reader';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';
import * as styles from './styles';

/*
 * Uploads on their way to become styles: the file is kept, read in a thread of its own, shown to the person, and
 * saved as a style version once they have said what each outline is.
 */

/** waiting: not yet read. read: waits for the person. failed: can't be read. saved: became a style version. */
export type ImportState = 'waiting' | 'read' | 'failed' | 'saved';

export interface ListedImport {
  readonly id: string;
  readonly state: ImportState;
  readonly fileName: string;
  readonly createdAt: number;
  readonly error: string | null;
}

export interface Import extends ListedImport {
  readonly fileId: string;
  readonly reading: Reading | null;
  /** The style that gets the new version; null for a new style. */
  readonly style: { readonly id: string; readonly name: string } | null;
}

/** More uploads than this wait in no workroom; it keeps a runaway script from filling the disk. */
const MOST_WAITING = 200;

interface ImportRow {
  id: string;
  state: ImportState;
  fileId: string;
  fileName: string;
  createdAt: number;
  error: string | null;
  reading: string | null;
  styleId: string | null;
  styleName: string | null;
}

const columns = {
  id: 'imports.id',
  state: 'imports.state',
  fileId: 'imports.file_id',
  fileName: 'files.name',
  createdAt: 'imports.created_at',
  error: 'imports.error',
  styleId: 'imports.style_id',
  styleName: 'styles.name'
};

function rows(scope: Scope) {
  return database()('imports')
    .join('files', 'files.id', 'imports.file_id')
    .leftJoin('styles', 'styles.id', 'imports.style_id')
    .where('imports.studio_id', scope.studio)
    .select(columns);
}

/** The uploads that still wait for somebody, newest first. */
export async function list(scope: Scope): Promise<ListedImport[]> {
  const found = (await rows(scope)
    .whereNot('imports.state', 'saved')
    .orderBy('imports.id', 'desc')
    .limit(50)) as ImportRow[];
  return found.map(({ id, state, fileName, createdAt, error }) => ({
    id,
    state,
    fileName,
    createdAt,
    error
  }));
}

/** An upload with what it was read as; 404 for what is not this studio's. */
export async function read(scope: Scope, id: string): Promise<Import> {
  const row = (await rows(scope).where('imports.id', id).select({ reading: 'imports.reading' }).first()) as
    ImportRow | undefined;
  if (!row) throw notFound('import');
  return {
    id: row.id,
    state: row.state,
    fileId: row.fileId,
    fileName: row.fileName,
    createdAt: row.createdAt,
    error: row.error,
    reading: row.reading === null ? null : readingSchema.parse(JSON.parse(row.reading)),
    style: row.styleId === null ? null : { id: row.styleId, name: row.styleName ?? '' }
  };
}

/**
 * Keeps an uploaded drawing and reads it. `styleId` names the style that gets a new version. Gives the import's id;
 * whether it could be read is in its state. Refuses what is no drawing or too large (Problem).
 */
export async function create(
  scope: Scope,
  upload: { readonly name: string; readonly bytes: Uint8Array },
  styleId: string | null = null,
  now: number = Date.now()
): Promise<string> {
  if (styleId !== null) await styles.read(scope, styleId);
  const [waiting] = await database()('imports')
    .where({ studio_id: scope.studio })
    .whereNot('state', 'saved')
    .count<{ n: number }[]>({ n: 'id' });
  if (Number(waiting?.n ?? 0) >= MOST_WAITING)
    throw new Problem(
      429,
      'too-many-imports',
      'Too many uploads wait',
      `${MOST_WAITING} uploads wait to be saved as styles. Save or remove some of them first.`
    );
  const file = await files.createDrawing(scope, upload, { now });
  const id = newId(now);
  await database()('imports').insert({
    id,
    studio_id: scope.studio,
    file_id: file.id,
    style_id: styleId,
    state: 'waiting',
    created_by: scope.user,
    created_at: now
  });
  await readFile(scope, id);
  return id;
}

/** Reads the file of an import that waits (again after a restart in the middle). Other states are left alone. */
export async function readFile(scope: Scope, id: string): Promise<void> {
  const row = await database()('imports')
    .where({ studio_id: scope.studio, id })
    .first<{ state: ImportState; file_id: string } | undefined>('state', 'file_id');
  if (!row) throw notFound('import');
  if (row.state !== 'waiting') return;
  const { bytes } = await files.read(scope, row.file_id);
  const answer = await readDrawing(bytes);
  await database()('imports')
    .where({ studio_id: scope.studio, id, state: 'waiting' })
    .update(
      'reading' in answer
        ? { state: 'read', reading: JSON.stringify(answer.reading), error: null }
        : { state: 'failed', error: answer.refused.message }
    );
}

/** The reading of an import that waits for its person. */
async function waitingReading(scope: Scope, id: string): Promise<Import & { reading: Reading }> {
  const found = await read(scope, id);
  if (found.state === 'saved')
    throw new Problem(409, 'already-saved', 'Already saved', 'This upload was saved as a style already.');
  const { reading } = found;
  if (!reading)
    throw new Problem(409, 'not-read', 'Not read', found.error ?? 'The file has not been read yet.');
  return { ...found, reading };
}

/**
 * Takes an outline out of a reading, for good: a page frame or a stray line. What stood inside it stands free then and
 * is offered as panels.
 */
export async function leaveOut(scope: Scope, id: string, outline: string): Promise<void> {
  const { reading } = await waitingReading(scope, id);
  if (!reading.outlines.some((other) => other.id === outline)) throw notFound('outline');
  await database()('imports')
    .where({ studio_id: scope.studio, id, state: 'read' })
    .update({ reading: JSON.stringify(withoutOutline(reading, outline)) });
}

export interface Confirmation {
  readonly choices: ImportChoices;
  readonly words: styles.StyleWords;
  readonly versionNote: string;
  /** For a new version of a style: whether its panels are replaced, or these join them. */
  readonly mode: 'replace' | 'add';
}

export type Confirmed =
  | { readonly ok: true; readonly styleId: string; readonly versionId: string }
  | { readonly ok: false; readonly problems: readonly ChoiceProblem[] };

/**
 * Saves what the person confirmed as a style version, once: the first version of a new style, or the next one of the
 * style that the upload was made for, where a panel that keeps its name keeps its id.
 */
export async function confirm(
  scope: Scope,
  id: string,
  confirmation: Confirmation,
  now: number = Date.now()
): Promise<Confirmed> {
  const found = await waitingReading(scope, id);
  const made = panelsFrom(found.reading, confirmation.choices);
  if (made.problems.length > 0) return { ok: false, problems: made.problems };
  const former = found.style ? await styles.versionOf(scope, found.style.id) : null;
  const panels = former ? joinPanels(former.panels, made.panels, confirmation.mode) : made.panels;
  if (panels.length > 300)
    return {
      ok: false,
      problems: [
        {
          outline: '',
          field: 'take',
          message: `A style can have 300 panels; these would be ${panels.length}.`
        }
      ]
    };
  const version = { panels, note: confirmation.versionNote, sourceFile: found.fileId };
  return database().transaction(async (trx) => {
    const marked = await trx('imports')
      .where({ studio_id: scope.studio, id, state: 'read' })
      .update({ state: 'saved', reading: null });
    if (marked === 0)
      throw new Problem(409, 'already-saved', 'Already saved', 'This upload was saved as a style already.');
    if (!found.style || !former)
      return { ok: true, ...(await styles.create(scope, confirmation.words, version, { now, db: trx })) };
    const { versionId } = await styles.addVersion(scope, found.style.id, version, former.number, {
      now,
      db: trx
    });
    return { ok: true, styleId: found.style.id, versionId };
  });
}

/** The panels of the next version: a panel of a known name keeps its id, all ids stay different. */
export function joinPanels(
  former: readonly Panel[],
  made: readonly Panel[],
  mode: 'replace' | 'add'
): Panel[] {
  const known = new Map(former.map((panel) => [panel.name.toLowerCase(), panel.id]));
  const used = new Set(former.map(({ id }) => id));
  let next = 1;
  const fresh = (): string => {
    while (used.has(`p${next}`)) next += 1;
    used.add(`p${next}`);
    return `p${next}`;
  };
  const renamed = made.map((panel) => ({ ...panel, id: known.get(panel.name.toLowerCase()) ?? fresh() }));
  if (mode === 'replace') return renamed;
  const replaced = new Set(renamed.map(({ id }) => id));
  return [...former.filter(({ id }) => !replaced.has(id)), ...renamed];
}

/** Forgets an upload that was not saved. Its file stays only while a style version came from it. */
export async function remove(scope: Scope, id: string): Promise<void> {
  const found = await read(scope, id);
  if (found.state === 'saved')
    throw new Problem(409, 'already-saved', 'Already saved', 'This upload was saved as a style already.');
  await database().transaction(async (trx) => {
    await trx('imports').where({ studio_id: scope.studio, id }).delete();
    const used = await trx('imports').where({ studio_id: scope.studio, file_id: found.fileId }).first('id');
    const source = await trx('style_versions')
      .where({ studio_id: scope.studio, source_file_id: found.fileId })
      .first('id');
    if (!used && !source) await trx('files').where({ studio_id: scope.studio, id: found.fileId }).delete();
  });
}
