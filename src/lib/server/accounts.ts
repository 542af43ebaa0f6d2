import type { Knex } from 'knex';
import { database } from './database';
import { newId } from './ids';
import * as passwords from './passwords';
import { notFound, Problem } from './problem';

/*
 * People as the whole installation knows them: one account for one e-mail address, whatever studios it belongs to.
 */

export interface Account {
  readonly id: string;
  readonly email: string;
  readonly name: string;
}

/** The form in which an address is stored and compared. */
export function normalEmail(text: string): string {
  return text.trim().normalize('NFC').toLowerCase();
}

/** The account of an address, or null. Never let the difference show to somebody who is signed out. */
export async function findByEmail(email: string, db: Knex = database()): Promise<Account | null> {
  const row = await db('users')
    .where({ email: normalEmail(email) })
    .first<Account | undefined>('id', 'email', 'name');
  return row ?? null;
}

export async function read(id: string): Promise<Account> {
  const row = await database()('users').where({ id }).first<Account | undefined>('id', 'email', 'name');
  if (!row) throw notFound('account');
  return row;
}

/** The account whose address and password these are; null otherwise, after the same amount of work. */
export async function withPassword(email: string, password: string): Promise<Account | null> {
  const row = await database()('users')
    .where({ email: normalEmail(email) })
    .first<(Account & { password_hash: string }) | undefined>('id', 'email', 'name', 'password_hash');
  const fits = await passwords.fitsHash(row?.password_hash ?? null, password);
  return row && fits ? { id: row.id, email: row.email, name: row.name } : null;
}

/** Whether this is the person's present password. */
export async function hasPassword(id: string, password: string): Promise<boolean> {
  const row = await database()('users')
    .where({ id })
    .first<{ password_hash: string } | undefined>('password_hash');
  return passwords.fitsHash(row?.password_hash ?? null, password);
}

/** Adds an account; `passwordHash` comes from `hashPassword`, made before the transaction. */
export async function create(
  account: { email: string; name: string; passwordHash: string },
  db: Knex = database(),
  now = Date.now()
): Promise<string> {
  const id = newId(now);
  const email = normalEmail(account.email);
  if (await db('users').where({ email }).first('id'))
    throw new Problem(
      409,
      'address-taken',
      'This address has an account already',
      'Sign in with it, or ask for a new password.'
    );
  await db('users').insert({
    id,
    email,
    name: account.name,
    password_hash: account.passwordHash,
    created_at: now
  });
  return id;
}

export async function rename(id: string, name: string): Promise<void> {
  await database()('users').where({ id }).update({ name });
}

export async function setPasswordHash(
  id: string,
  passwordHash: string,
  db: Knex = database()
): Promise<void> {
  await db('users').where({ id }).update({ password_hash: passwordHash });
}
