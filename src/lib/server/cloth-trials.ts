import { z } from 'zod';
import type { Strip } from '$lib/cloth/strip';
import type { LayDocument } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import { newLay } from '$lib/lay/stored-lay';
import type { Tried } from '$lib/lay/trial';
import * as clothLengths from './cloth-lengths';
import * as clothWidths from './cloth-widths';
import { database } from './database';
import { newId } from './ids';
import * as jobs from './jobs';
import * as layFacts from './lay-facts';
import * as lays from './lays';
import { invalid, Problem } from './problem';
import type { Scope } from './scope';

/*
 * "What would it fit on?" and the width table: the pieces of an order on one cloth, settled for a short while on every roll
 * and remnant at hand, or on every width that is sold. cloth-trial-job.ts runs them in the background.
 */

export const questions = ['lengths', 'widths'] as const;
export type TrialQuestion = (typeof questions)[number];

export const trialInput = z.object({
  order: z.string(),
  cloth: z.string(),
  question: z.enum(questions),
  /** How long each is settled, seconds. */
  seconds: z.number().min(0.5).max(120)
});
export type TrialInput = z.infer<typeof trialInput>;

/** So many cloths are tried in one go; the longest first. */
export const MOST_TRIED = 24;
/** What a person may ask for. */
export const TRY_SECONDS = [5, 20, 60] as const;

/** One cloth to try. */
export interface Candidate {
  readonly id: string;
  readonly document: LayDocument;
  readonly book: PanelBook;
}

/** What the job tells and leaves. */
export interface TrialProgress {
  readonly tried: readonly Tried[];
  readonly of: number;
}

export interface Trial {
  readonly job: string;
  readonly state: jobs.JobState;
  readonly question: TrialQuestion;
  readonly seconds: number;
  readonly askedAt: number;
  readonly error: string | null;
  readonly tried: readonly Tried[];
  readonly of: number;
}

/** Begins a trial and gives its job. 409 while one of the same question goes on; refused when there is nothing to try. */
export async function create(scope: Scope, input: TrialInput, now = Date.now()): Promise<{ job: string }> {
  const candidates = await candidatesOf(scope, input);
  if (candidates.length === 0)
    throw invalid({
      question:
        input.question === 'lengths'
          ? 'No roll or remnant of this cloth is free. Measure one in first.'
          : 'No width of this cloth is noted.'
    });
  const last = await read(scope, input.order, input.cloth, input.question);
  if (last && (last.state === 'waiting' || last.state === 'running'))
    throw new Problem(
      409,
      'trial-running',
      'It is being tried already',
      'These pieces are being tried already. Stop that first, or wait for it.'
    );
  return { job: await jobs.enqueue(scope, 'cloth-trial', input, { now }) };
}

/** The latest trial of an order's cloth, or null. */
export async function read(
  scope: Scope,
  order: string,
  cloth: string,
  question: TrialQuestion
): Promise<Trial | null> {
  const rows = await database()('jobs')
    .where({ studio_id: scope.studio, kind: 'cloth-trial' })
    .orderBy('created_at', 'desc')
    .limit(300)
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
  for (const row of rows) {
    const input = trialInput.parse(JSON.parse(row.input));
    if (input.order !== order || input.cloth !== cloth || input.question !== question) continue;
    const told = row.result ?? row.progress;
    const { tried, of } = told === null ? { tried: [], of: 0 } : (JSON.parse(told) as TrialProgress);
    return {
      job: row.id,
      state: row.state,
      question,
      seconds: input.seconds,
      askedAt: row.created_at,
      error: row.error,
      tried,
      of
    };
  }
  return null;
}

/** The cloths that a question asks about, each with an empty lay on it. */
export async function candidatesOf(scope: Scope, input: TrialInput): Promise<Candidate[]> {
  return input.question === 'lengths' ? lengthsFor(scope, input) : widthsFor(scope, input);
}

async function lengthsFor(scope: Scope, { order, cloth }: TrialInput): Promise<Candidate[]> {
  const lengths = (await clothLengths.list(scope, cloth)).filter(
    (length) => length.order === null || length.order.id === order
  );
  const found: Candidate[] = [];
  for (const length of lengths.slice(0, MOST_TRIED)) {
    const facts = await layFacts.read(scope, [order], cloth, length);
    found.push({
      id: length.id,
      ...onStrip(facts, layFacts.stripWith(layFacts.stripOf(facts.cloth), facts))
    });
  }
  return found;
}

async function widthsFor(scope: Scope, { order, cloth }: TrialInput): Promise<Candidate[]> {
  const facts = await layFacts.read(scope, [order], cloth);
  const own = { id: 'own', ...onStrip(facts, layFacts.stripOf(facts.cloth)) };
  const others = (await clothWidths.list(scope, cloth)).map(({ id, fullWidth, usableWidth, buyStep }) => ({
    id,
    ...onStrip(facts, layFacts.stripOf({ ...facts.cloth, fullWidth, usableWidth, buyStep }))
  }));
  return [own, ...others].slice(0, MOST_TRIED);
}

function onStrip(facts: layFacts.LayFacts, strip: Strip): Omit<Candidate, 'id'> {
  if (facts.garments.length === 0)
    throw invalid({ cloth: `Nothing of order ${facts.order.number} is cut from ${facts.cloth.name}.` });
  return {
    document: newLay({ strip, garments: facts.garments, book: facts.book, takes: facts.takes }),
    book: facts.book
  };
}

/** Makes a lay of what was found on a roll or remnant, and gives its id. */
export async function takeLength(
  scope: Scope,
  input: Pick<TrialInput, 'order' | 'cloth'>,
  length: string,
  now = Date.now()
): Promise<{ id: string }> {
  const trial = await read(scope, input.order, input.cloth, 'lengths');
  const found = trial?.tried.find(({ id }) => id === length);
  if (!found) throw invalid({ length: 'Nothing was tried on this length.' });
  const made = await lays.create(scope, { orderId: input.order, clothId: input.cloth, length }, now);
  const { version, document } = await lays.read(scope, made.id);
  await lays.save(scope, made.id, {
    version,
    saveId: newId(now),
    document: { ...document, placements: [...found.placements] }
  });
  return made;
}
