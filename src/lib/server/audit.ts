import type { Knex } from 'knex';
import { database } from './database';
import { newId } from './ids';
import type { Scope } from './scope';

/*
 * Who did what that others may have to account for: sign-ins and refused ones, roles, releases. Never a password, a
 * token, a measurement or a price.
 */

export interface AuditEntry {
  readonly studioId: string | null;
  readonly userId: string | null;
  /** 'noun: verb': 'person: role changed', 'lay: released'. */
  readonly action: string;
  /** What it was done to: an id, an address, a number. */
  readonly subject?: string;
  readonly detail?: Readonly<Record<string, unknown>>;
}

/** Writes an entry; inside a transaction pass its `trx`, so that the entry exists exactly if the deed does. */
export async function record(entry: AuditEntry, db: Knex = database()): Promise<void> {
  const now = Date.now();
  await db('audit_entries').insert({
    id: newId(now),
    studio_id: entry.studioId,
    user_id: entry.userId,
    action: entry.action,
    subject: entry.subject ?? '',
    detail: JSON.stringify(entry.detail ?? {}),
    at: now
  });
}

/** The same, by the person of a scope. */
export async function recordBy(
  scope: Scope,
  action: string,
  subject: string,
  detail: Readonly<Record<string, unknown>> = {},
  db: Knex = database()
): Promise<void> {
  await record({ studioId: scope.studio, userId: scope.user, action, subject, detail }, db);
}

export interface ListedEntry {
  readonly id: string;
  readonly at: number;
  readonly action: string;
  readonly personName: string | null;
  /** Whom or what it was about, where it has a name: a member, an invited address. */
  readonly about: string | null;
}

/** The latest entries of a studio, the newest first. */
export async function list(scope: Scope, limit = 100): Promise<ListedEntry[]> {
  const rows = await database()('audit_entries')
    .leftJoin('users', 'users.id', 'audit_entries.user_id')
    .leftJoin({ about: 'users' }, 'about.id', 'audit_entries.subject')
    .where('audit_entries.studio_id', scope.studio)
    .orderBy([
      { column: 'audit_entries.at', order: 'desc' },
      { column: 'audit_entries.id', order: 'desc' }
    ])
    .limit(limit)
    .select<(Omit<ListedEntry, 'about'> & { aboutName: string | null; subject: string })[]>({
      id: 'audit_entries.id',
      at: 'audit_entries.at',
      action: 'audit_entries.action',
      subject: 'audit_entries.subject',
      personName: 'users.name',
      aboutName: 'about.name'
    });
  return rows.map(({ aboutName, subject, ...entry }) => ({
    ...entry,
    about: aboutName ?? (subject.includes('@') ? subject : null)
  }));
}
