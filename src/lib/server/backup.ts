import { closeSync, existsSync, fsyncSync, mkdirSync, openSync, renameSync, rmSync, statSync } from 'node:fs';
import path from 'node:path';
import type { Knex } from 'knex';
import { copyTo, integrityFaults, openDatabase } from './database';

/*
 * Copies of the database, made while it is in use, and the way back. A copy has its name only once it is whole, on the
 * disk, and found sound: there is no half of one. Needs as much free disk as the database has, for a moment.
 */

/**
 * Makes a copy of `db` in `folder`, named by the moment, and gives its path.
 * @throws Error when the copy is not sound; then nothing is left of it.
 */
export async function backUp(db: Knex, folder: string, now = new Date()): Promise<string> {
  mkdirSync(folder, { recursive: true });
  const name = `warpwise-${now.toISOString().replace(/[:.]/g, '-')}.sqlite`;
  const target = path.join(folder, name);
  const unfinished = `${target}.unfinished`;
  rmSync(unfinished, { force: true });
  try {
    await copyTo(db, unfinished);
    syncFile(unfinished);
    await proveSound(unfinished);
    renameSync(unfinished, target);
    syncFile(folder);
  } catch (error) {
    removeDatabase(unfinished);
    throw error;
  }
  return target;
}

/**
 * Puts a copy in the place of the database; the server must not be running. The former database stays beside it under
 * the name that is given back (null when there was none).
 * @throws Error when the copy is not sound; then nothing is changed.
 */
export async function restore(copy: string, databaseFile: string, now = new Date()): Promise<string | null> {
  if (!existsSync(copy) || statSync(copy).size === 0) throw new Error(`There is no copy at ${copy}`);
  mkdirSync(path.dirname(path.resolve(databaseFile)), { recursive: true });
  const incoming = `${databaseFile}.incoming`;
  removeDatabase(incoming);
  try {
    // Through SQLite, not file by file: a copy that is itself open or has a journal beside it comes over whole.
    const source = openDatabase(copy);
    try {
      await copyTo(source, incoming);
    } finally {
      await source.destroy();
    }
    syncFile(incoming);
    await proveSound(incoming);
  } catch (error) {
    removeDatabase(incoming);
    throw error;
  }
  let kept: string | null = null;
  if (existsSync(databaseFile)) {
    kept = `${databaseFile}.before-${now.toISOString().replace(/[:.]/g, '-')}`;
    // What is still in the journal belongs to the file: bring it in before the name changes.
    const former = openDatabase(databaseFile);
    try {
      await former.raw('PRAGMA wal_checkpoint(TRUNCATE)');
    } finally {
      await former.destroy();
    }
    renameSync(databaseFile, kept);
  }
  for (const side of ['-wal', '-shm']) rmSync(databaseFile + side, { force: true });
  renameSync(incoming, databaseFile);
  syncFile(path.dirname(path.resolve(databaseFile)));
  return kept;
}

/** Opens a copy anew and asks it whether it is whole and ours. @throws Error with what is wrong */
async function proveSound(file: string): Promise<void> {
  const db = openDatabase(file);
  try {
    const faults = await integrityFaults(db);
    if (faults.length > 0) throw new Error(`The copy is damaged: ${faults.slice(0, 5).join('; ')}`);
    if (!(await db.schema.hasTable('studios'))) throw new Error('This is not a database of Warpwise');
    // Back to one file: the copy must not depend on what lies beside it.
    await db.raw('PRAGMA journal_mode = DELETE');
  } finally {
    await db.destroy();
  }
}

function syncFile(name: string): void {
  const handle = openSync(name, 'r');
  try {
    fsyncSync(handle);
  } finally {
    closeSync(handle);
  }
}

function removeDatabase(file: string): void {
  for (const side of ['', '-wal', '-shm', '-journal']) rmSync(file + side, { force: true });
}
