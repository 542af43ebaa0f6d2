import type { Knex } from 'knex';
import * as audit from './audit';
import { database } from './database';
import type { Role } from './permissions';
import { notFound, Problem } from './problem';
import type { Scope } from './scope';

/*
 * The members of a studio: who they are there, and what they may do. A studio always keeps an owner who can sign in.
 */

export interface Person {
  readonly userId: string;
  readonly name: string;
  readonly email: string;
  readonly role: Role;
  readonly disabledAt: number | null;
  readonly joinedAt: number;
}

/** All members, those who are disabled last. */
export async function list(scope: Scope): Promise<Person[]> {
  return database()('memberships')
    .join('users', 'users.id', 'memberships.user_id')
    .where('memberships.studio_id', scope.studio)
    .orderByRaw('memberships.disabled_at is not null, users.name')
    .select<Person[]>({
      userId: 'users.id',
      name: 'users.name',
      email: 'users.email',
      role: 'memberships.role',
      disabledAt: 'memberships.disabled_at',
      joinedAt: 'memberships.created_at'
    });
}

/** Gives a member another role. It counts from their next request on. */
export async function changeRole(scope: Scope, userId: string, role: Role): Promise<void> {
  await database().transaction(async (trx) => {
    const before = await member(scope, userId, trx);
    if (before.role === role) return;
    if (role !== 'owner') await keepAnOwner(scope, userId, before, trx);
    await memberships(scope, trx).where({ user_id: userId }).update({ role });
    await audit.recordBy(scope, 'person: role changed', userId, { from: before.role, to: role }, trx);
  });
}

/** Shuts a member out of this studio at once: their sessions in it end. Their account and their work stay. */
export async function disable(scope: Scope, userId: string, now = Date.now()): Promise<void> {
  await database().transaction(async (trx) => {
    const before = await member(scope, userId, trx);
    if (before.disabled_at !== null) return;
    await keepAnOwner(scope, userId, before, trx);
    await memberships(scope, trx).where({ user_id: userId }).update({ disabled_at: now });
    await trx('sessions').where({ user_id: userId, studio_id: scope.studio }).delete();
    await audit.recordBy(scope, 'person: disabled', userId, {}, trx);
  });
}

/** Lets a member in again. */
export async function enable(scope: Scope, userId: string): Promise<void> {
  await database().transaction(async (trx) => {
    const before = await member(scope, userId, trx);
    if (before.disabled_at === null) return;
    await memberships(scope, trx).where({ user_id: userId }).update({ disabled_at: null });
    await audit.recordBy(scope, 'person: enabled', userId, {}, trx);
  });
}

const memberships = (scope: Scope, db: Knex) => db('memberships').where({ studio_id: scope.studio });

async function member(scope: Scope, userId: string, db: Knex) {
  const row = await memberships(scope, db)
    .where({ user_id: userId })
    .first<{ role: Role; disabled_at: number | null } | undefined>('role', 'disabled_at');
  if (!row) throw notFound('person');
  return row;
}

async function keepAnOwner(
  scope: Scope,
  userId: string,
  before: { role: Role; disabled_at: number | null },
  db: Knex
): Promise<void> {
  if (before.role !== 'owner' || before.disabled_at !== null) return;
  const another = await memberships(scope, db)
    .where({ role: 'owner' })
    .whereNull('disabled_at')
    .whereNot({ user_id: userId })
    .first('id');
  if (!another)
    throw new Problem(
      409,
      'last-owner',
      'The last owner stays',
      'A studio needs an owner. Make somebody else an owner first.'
    );
}
