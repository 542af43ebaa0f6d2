import type { Knex } from 'knex';
import * as audit from './audit';
import { database } from './database';
import { newId } from './ids';
import type { Role } from './permissions';
import { notFound } from './problem';
import type { Scope } from './scope';

/** A studio as its own people see it. */
export interface Studio {
  readonly id: string;
  readonly name: string;
  readonly currency: string;
  readonly lengthUnit: 'cm' | 'in';
  readonly timeZone: string;
  readonly isDemo: boolean;
  /** Whether its owners must have a second factor. */
  readonly secondFactorRequired: boolean;
}

interface StudioRow {
  id: string;
  name: string;
  currency: string;
  length_unit: 'cm' | 'in';
  time_zone: string;
  is_demo: number;
  second_factor_required: number;
}

const columns = [
  'studios.id',
  'studios.name',
  'currency',
  'length_unit',
  'time_zone',
  'is_demo',
  'second_factor_required'
];

function studioOf(row: StudioRow): Studio {
  return {
    id: row.id,
    name: row.name,
    currency: row.currency,
    lengthUnit: row.length_unit,
    timeZone: row.time_zone,
    isDemo: row.is_demo === 1,
    secondFactorRequired: row.second_factor_required === 1
  };
}

export async function read(scope: Scope): Promise<Studio> {
  const row = await database()('studios').where({ id: scope.studio }).first<StudioRow | undefined>(columns);
  if (!row) throw notFound('studio');
  return studioOf(row);
}

export interface StudioSettings {
  readonly name: string;
  /** ISO 4217. */
  readonly currency: string;
  readonly lengthUnit: 'cm' | 'in';
  /** IANA name. */
  readonly timeZone: string;
}

export async function update(scope: Scope, settings: StudioSettings): Promise<void> {
  await database()('studios').where({ id: scope.studio }).update({
    name: settings.name,
    currency: settings.currency,
    length_unit: settings.lengthUnit,
    time_zone: settings.timeZone
  });
}

/** Whether the studio's owners must have a second factor from now on. */
export async function requireSecondFactor(scope: Scope, required: boolean): Promise<void> {
  await database().transaction(async (trx) => {
    await trx('studios')
      .where({ id: scope.studio })
      .update({ second_factor_required: required ? 1 : 0 });
    await audit.recordBy(
      scope,
      required ? 'second factor: required of owners' : 'second factor: left free',
      '',
      {},
      trx
    );
  });
}

/** A new studio with its first owner. */
export async function create(
  studio: { name: string; owner: string } & Partial<Omit<StudioSettings, 'name'>>,
  db: Knex = database(),
  now = Date.now()
): Promise<string> {
  const id = newId(now);
  await db('studios').insert({
    id,
    name: studio.name,
    currency: studio.currency ?? 'EUR',
    length_unit: studio.lengthUnit ?? 'cm',
    time_zone: studio.timeZone ?? 'UTC',
    created_at: now
  });
  await join(id, studio.owner, 'owner', db, now);
  return id;
}

/** Makes a person a member. Someone who was disabled there is let in again, with the new role. */
export async function join(
  studioId: string,
  userId: string,
  role: Role,
  db: Knex = database(),
  now = Date.now()
): Promise<void> {
  await db('memberships')
    .insert({ id: newId(now), studio_id: studioId, user_id: userId, role, created_at: now })
    .onConflict(['studio_id', 'user_id'])
    .merge({ role, disabled_at: null });
}

/** Where the owners of a studio are written to: about money, quotes and questions. */
export async function ownerAddresses(scope: Scope, db: Knex = database()): Promise<string[]> {
  return db('memberships')
    .join('users', 'users.id', 'memberships.user_id')
    .where({ studio_id: scope.studio, role: 'owner' })
    .whereNull('disabled_at')
    .orderBy('email')
    .pluck('email');
}

/** What a person may enter: the studios where they are a member and not disabled. */
export async function listOf(userId: string): Promise<{ id: string; name: string; role: Role }[]> {
  return database()('memberships')
    .join('studios', 'studios.id', 'memberships.studio_id')
    .where({ 'memberships.user_id': userId })
    .whereNull('memberships.disabled_at')
    .orderBy('studios.name')
    .select('studios.id', 'studios.name', 'memberships.role');
}

/** The studio and the role that a person has there now; null when they don't belong to it (any more). */
export async function enter(
  studioId: string,
  userId: string
): Promise<{ scope: Scope; studio: Studio } | null> {
  const row = await database()('memberships')
    .join('studios', 'studios.id', 'memberships.studio_id')
    .where({ 'memberships.studio_id': studioId, 'memberships.user_id': userId })
    .whereNull('memberships.disabled_at')
    .first<(StudioRow & { role: Role }) | undefined>(...columns, 'memberships.role');
  return row ? { scope: { studio: row.id, user: userId, role: row.role }, studio: studioOf(row) } : null;
}

/** Where a person lands at sign-in: the studio of their latest session if they still belong to it, else the first. */
export async function landing(userId: string): Promise<string | null> {
  const open = await listOf(userId);
  const latest = await database()('sessions')
    .where({ user_id: userId })
    .whereNotNull('studio_id')
    .orderBy('last_used_at', 'desc')
    .first<{ studio_id: string } | undefined>('studio_id');
  return (open.find((studio) => studio.id === latest?.studio_id) ?? open[0])?.id ?? null;
}
