import { EventEmitter } from 'node:events';
import type { Knex } from 'knex';
import type { z } from 'zod';
import { database } from './database';
import { newId } from './ids';
import { may, type Permission } from './permissions';
import { notFound } from './problem';
import type { Scope } from './scope';

/*
 * Work that outlives a request: kept in one table, so that it survives a restart. Here: the kinds, and what pages and
 * routes may do with jobs. job-runner.ts runs them.
 */

export type JobState = 'waiting' | 'running' | 'done' | 'failed' | 'stopped';

export interface Job {
  readonly id: string;
  readonly kind: string;
  readonly state: JobState;
  /** The last that the job told of itself; of its kind's own shape. */
  readonly progress: unknown;
  readonly result: unknown;
  /** Words for the person, when it failed. */
  readonly error: string | null;
  readonly stopWanted: boolean;
  readonly createdBy: string;
  readonly createdAt: number;
  readonly updatedAt: number;
}

/** What a running job is handed beside its input. */
export interface JobRun {
  readonly id: string;
  /** The person who asked for it, with the role they have now; null for jobs of the installation. */
  readonly scope: Scope | null;
  /** What an earlier attempt told last (a restart in between), else null. */
  readonly previous: unknown;
  /** Tells how far it is; written and sent on at most once a second, the newest wins. */
  progress(value: unknown): void;
  /** Whether a person asked it to stop: then end soon, with the best so far. */
  stopped(): boolean;
  /**
   * Aborts when it is to stop, and when the server shuts down. In the second case `stopped()` is false: then throw
   * (`signal.throwIfAborted()`); the job is claimed again after the restart, with its last progress as `previous`.
   */
  readonly signal: AbortSignal;
  /** Whether another studio waits for the place that this job has. Long jobs ask, and then give it up (`HandedBack`). */
  othersWait(): Promise<boolean>;
}

/**
 * Thrown by a long job that gives its place to another studio: it waits for its next turn, with its last progress as
 * `previous`.
 */
export class HandedBack extends Error {
  constructor() {
    super('Handed back');
    this.name = 'HandedBack';
  }
}

export interface JobKind<I = unknown> {
  readonly input: z.ZodType<I>;
  /** Who may see and stop such a job in its studio; null: nobody, it belongs to the installation. */
  readonly permission: Permission | null;
  /** 'quick' (the default): seconds. 'long': minutes, in its own lane, so that it never holds up the quick ones. */
  readonly lane?: 'quick' | 'long';
  /** How often it is tried when it fails for a reason that is not a Problem. Default 3. */
  readonly attempts?: number;
  run(input: I, run: JobRun): Promise<unknown>;
}

const held = globalThis as { warpwiseJobKinds?: Map<string, JobKind>; warpwiseJobEvents?: EventEmitter };
const kinds = (held.warpwiseJobKinds ??= new Map());
const events = (held.warpwiseJobEvents ??= new EventEmitter().setMaxListeners(0));

/** Makes a kind of job known: at start (job-kinds.ts), or in a test. */
export function registerJob<I>(kind: string, definition: JobKind<I>): void {
  kinds.set(kind, definition as JobKind);
}

/** @throws Error for a kind that nobody registered. */
export function kindOf(kind: string): JobKind {
  const definition = kinds.get(kind);
  if (!definition) throw new Error(`No such kind of job: ${kind}`);
  return definition;
}

export const kindNames = (): string[] => [...kinds.keys()];

interface JobRow {
  id: string;
  studio_id: string | null;
  kind: string;
  state: JobState;
  progress: string | null;
  result: string | null;
  error: string | null;
  stop_wanted: number;
  created_by: string;
  created_at: number;
  updated_at: number;
}

const columns = [
  'id',
  'studio_id',
  'kind',
  'state',
  'progress',
  'result',
  'error',
  'stop_wanted',
  'created_by',
  'created_at',
  'updated_at'
];

function jobOf(row: JobRow): Job {
  return {
    id: row.id,
    kind: row.kind,
    state: row.state,
    progress: row.progress === null ? null : JSON.parse(row.progress),
    result: row.result === null ? null : JSON.parse(row.result),
    error: row.error,
    stopWanted: row.stop_wanted === 1,
    createdBy: row.created_by,
    createdAt: row.created_at,
    updatedAt: row.updated_at
  };
}

/**
 * Puts a job in the queue and gives its id. `scope` null: a job of the installation. Inside a transaction pass its
 * `db`; the job then starts after the commit, at the latest a second later.
 */
export async function enqueue<I>(
  scope: Scope | null,
  kind: string,
  input: I,
  { db = database(), now = Date.now(), notBefore = now }: { db?: Knex; now?: number; notBefore?: number } = {}
): Promise<string> {
  const id = newId(now);
  await db('jobs').insert({
    id,
    studio_id: scope?.studio ?? null,
    kind,
    state: 'waiting',
    input: JSON.stringify(kindOf(kind).input.parse(input)),
    not_before: notBefore,
    created_by: scope?.user ?? 'system',
    created_at: now,
    updated_at: now
  });
  events.emit('queued');
  return id;
}

/** A job of the studio that the person may see; otherwise there is none. */
export async function read(scope: Scope, id: string): Promise<Job> {
  const row = await database()('jobs')
    .where({ studio_id: scope.studio, id })
    .first<JobRow | undefined>(columns);
  if (!row || !mayHandle(scope, row.kind)) throw notFound('job');
  return jobOf(row);
}

/** The studio's jobs of a kind, the newest first. */
export async function list(scope: Scope, kind: string, limit = 50): Promise<Job[]> {
  if (!mayHandle(scope, kind)) return [];
  const rows = await database()('jobs')
    .where({ studio_id: scope.studio, kind })
    .orderBy('created_at', 'desc')
    .limit(limit)
    .select<JobRow[]>(columns);
  return rows.map(jobOf);
}

/** Asks a job to stop: one that waits is stopped at once, one that runs ends with its best so far. */
export async function stop(scope: Scope, id: string, now = Date.now()): Promise<Job> {
  await read(scope, id);
  await database().transaction(async (trx) => {
    const row = () => trx('jobs').where({ studio_id: scope.studio, id });
    await row().where({ state: 'waiting' }).update({ state: 'stopped', stop_wanted: 1, updated_at: now });
    await row().where({ state: 'running' }).update({ stop_wanted: 1 });
  });
  changed(id);
  return read(scope, id);
}

function mayHandle(scope: Scope, kind: string): boolean {
  const permission = kinds.get(kind)?.permission;
  return permission != null && may(scope.role, permission);
}

/** Says that a job's row has changed. */
export function changed(id: string): void {
  events.emit(`job ${id}`);
}

/** Calls back at each change of a job; gives the way to end it. */
export function watch(id: string, listener: () => void): () => void {
  events.on(`job ${id}`, listener);
  return () => events.off(`job ${id}`, listener);
}

/** Calls back whenever something is queued. */
export function onQueued(listener: () => void): () => void {
  events.on('queued', listener);
  return () => events.off('queued', listener);
}

/** Whether nothing more will happen to it. */
export const isOver = (job: Job): boolean =>
  job.state === 'done' || job.state === 'failed' || job.state === 'stopped';
