import { createHash } from 'node:crypto';
import { z } from 'zod';
import { guideChoiceSchema, type GuideChoice } from '$lib/guide/guide-choice';
import type { GuideInput } from '$lib/guide/guide-input';
import type { GuideProgress } from '$lib/guide/guide';
import type { GuideAnswer } from '$lib/guide/guide.worker';
import { config } from './config';
import { database } from './database';
import { guideFonts } from './guide-fonts';
import { newId } from './ids';
import * as jobs from './jobs';
import * as layRevisions from './lay-revisions';
import { notFound, Problem } from './problem';
import { replacedAmong } from './replaced-panels';
import type { Scope } from './scope';
import * as studios from './studios';
import { runInWorker } from './worker-thread';

/*
 * Cutting guides: each is a job that makes a PDF from a kept revision and puts it among the studio's files.
 */

/** The largest guide that is kept. Sheets are small: this is some thousand of them. */
const LARGEST = 50 * 1024 * 1024;
const TIMEOUT_MS = 120_000;
const MEMORY_MB = 512;

const inputSchema = z.object({ revision: z.string(), choice: guideChoiceSchema });

/** What a guide job leaves. */
export interface GuideResult {
  readonly file: string;
  readonly name: string;
  readonly size: number;
  readonly pages: number;
  readonly sheets: number;
  /** Code points of letters that were printed as boxes: 'U+4E2D'. */
  readonly missing: readonly string[];
}

/** A guide as the page lists it. */
export interface ListedGuide {
  /** The job's id; the file is fetched by it. */
  readonly job: string;
  readonly state: jobs.JobState;
  readonly progress: GuideProgress | null;
  readonly error: string | null;
  readonly choice: GuideChoice;
  readonly revision: { readonly number: number; readonly name: string };
  readonly askedAt: number;
  readonly result: GuideResult | null;
}

/** Asks for a guide of a revision; gives the job. 404 for a revision that is not this studio's. */
export async function create(
  scope: Scope,
  revision: string,
  choice: GuideChoice,
  now = Date.now()
): Promise<{ job: string }> {
  await layRevisions.readById(scope, revision);
  return { job: await jobs.enqueue(scope, 'guide', { revision, choice }, { now }) };
}

/** The guides of a lay's revisions, the newest first. */
export async function list(scope: Scope, layId: string, limit = 50): Promise<ListedGuide[]> {
  const revisions = new Map((await layRevisions.list(scope, layId)).map((one) => [one.id, one]));
  const rows = await database()('jobs')
    .where({ studio_id: scope.studio, kind: 'guide' })
    .orderBy('created_at', 'desc')
    .limit(1000)
    .select<
      {
        id: string;
        state: jobs.JobState;
        input: string;
        progress: string | null;
        result: string | null;
        error: string | null;
        created_at: number;
      }[]
    >('id', 'state', 'input', 'progress', 'result', 'error', 'created_at');
  return rows
    .flatMap((row) => {
      const { revision: id, choice } = inputSchema.parse(JSON.parse(row.input));
      const revision = revisions.get(id);
      if (!revision) return [];
      return {
        job: row.id,
        state: row.state,
        progress: row.progress === null ? null : (JSON.parse(row.progress) as GuideProgress),
        error: row.error,
        choice,
        revision: { number: revision.number, name: revision.name },
        askedAt: row.created_at,
        result: row.result === null ? null : (JSON.parse(row.result) as GuideResult)
      };
    })
    .slice(0, limit);
}

/** The PDF of a guide job that is done. */
export async function file(scope: Scope, job: string): Promise<{ name: string; bytes: Buffer }> {
  const found = await jobs.read(scope, job);
  if (found.kind !== 'guide' || found.state !== 'done') throw notFound('guide');
  const row = await database()('files')
    .where({ studio_id: scope.studio, id: (found.result as GuideResult).file })
    .first<{ name: string; bytes: Buffer } | undefined>('name', 'bytes');
  if (!row) throw notFound('guide');
  return row;
}

/** How many digits of the hash the paper's code carries: enough that nobody guesses one. */
const CODE_DIGITS = 20;

/** Everything that a guide of `revision` is drawn from, in the studio's words. */
export async function inputOf(scope: Scope, revision: string, now = Date.now()): Promise<GuideInput> {
  const [kept, studio] = await Promise.all([layRevisions.readById(scope, revision), studios.read(scope)]);
  const { document, panels, labels, verdict } = kept;
  const { number, name, hash, releasedAt, withdrawnAt } = kept.revision;
  const day = (instant: number): string =>
    new Intl.DateTimeFormat('en-GB', { dateStyle: 'medium', timeZone: studio.timeZone }).format(instant);
  return {
    studio: labels.studio,
    orderNumber: String(labels.order.number),
    shortName: labels.order.shortName,
    lay: labels.lay,
    cloth: [labels.cloth.name, labels.cloth.fibre].filter(Boolean).join(', '),
    revision: {
      number,
      name,
      hash,
      released: releasedAt !== null && withdrawnAt === null ? day(releasedAt) : null
    },
    document,
    panels,
    readings: verdict.readings,
    scanAddress: `${config.origin}/r/${hash.slice(0, CODE_DIGITS)}`,
    lengthUnit: studio.lengthUnit,
    made: { words: day(now), at: now }
  };
}

/** The kind of job that makes a guide, in a thread of its own. */
export const job: jobs.JobKind<z.infer<typeof inputSchema>> = {
  input: inputSchema,
  permission: 'guides: print',
  async run({ revision, choice }, run): Promise<GuideResult> {
    const scope = run.scope;
    if (!scope) throw new Error('A guide belongs to a studio');
    const [input, fonts] = await Promise.all([inputOf(scope, revision), guideFonts()]);
    const answer = await runInWorker<GuideAnswer, GuideProgress>(
      'guide',
      { input, choice, fonts },
      {
        timeoutMs: TIMEOUT_MS,
        memoryMb: MEMORY_MB,
        signal: run.signal,
        onProgress: (told) => run.progress(told)
      }
    );
    if ('refused' in answer)
      throw new Problem(422, 'guide-refused', 'This guide can’t be made', answer.refused);
    const { bytes, pages, sheets, missing } = answer.guide;
    if (bytes.length > LARGEST)
      throw new Problem(
        422,
        'guide-too-large',
        'This guide is too large',
        `The file would have ${Math.ceil(bytes.length / 1048576)} MB; at most ${LARGEST / 1048576} MB are kept. Choose a larger paper.`
      );
    const name = `Order ${input.orderNumber}, revision ${input.revision.number}, ${kindWords[choice.kind]}.pdf`;
    const id = newId();
    await database()('files').insert({
      id,
      studio_id: scope.studio,
      hash: createHash('sha256').update(bytes).digest('hex'),
      name,
      type: 'application/pdf',
      size: bytes.length,
      bytes: Buffer.from(bytes),
      created_at: Date.now()
    });
    return { file: id, name, size: bytes.length, pages, sheets, missing };
  }
};

const kindWords = { whole: 'whole cloth', sheets: 'sheets', panels: 'panels' } as const;

/** What anybody may learn who holds the paper: nothing of the studio, the order or the client. */
export type PaperVerdict =
  'current' | 'replaced' | 'cut' | 'superseded' | 'withdrawn' | 'not-released' | 'unknown';

/** What a scanned code stands for, whoever asks. `code` is the beginning of a revision's hash. */
export async function verdictOnPaper(code: string): Promise<PaperVerdict> {
  if (!new RegExp(`^[0-9a-f]{${CODE_DIGITS},64}$`).test(code)) return 'unknown';
  const row = await database()('lay_revisions')
    .join('lays', 'lays.id', 'lay_revisions.lay_id')
    .where('lay_revisions.hash', 'like', `${code}%`)
    .first<
      | {
          id: string;
          lay: string;
          released_at: number | null;
          now_id: string | null;
          state: 'open' | 'released' | 'cut';
        }
      | undefined
    >({
      id: 'lay_revisions.id',
      lay: 'lays.id',
      released_at: 'lay_revisions.released_at',
      now_id: 'lays.released_revision_id',
      state: 'lays.state'
    });
  if (!row) return 'unknown';
  if (row.released_at === null) return 'not-released';
  if (row.now_id === row.id) {
    if (row.state === 'cut') return 'cut';
    return (await replacedAmong([row.lay])).has(row.lay) ? 'replaced' : 'current';
  }
  return row.now_id === null ? 'withdrawn' : 'superseded';
}
