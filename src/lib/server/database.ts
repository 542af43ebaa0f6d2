import { mkdirSync } from 'node:fs';
import path from 'node:path';
import knexFactory, { type Knex } from 'knex';

/*
 * The one connection. What only SQLite has (pragmas, VACUUM INTO) stays in this file.
 */

interface MigrationModule {
  up(knex: Knex): Promise<void>;
  down(knex: Knex): Promise<void>;
  config?: { transaction: boolean };
}

const modules = import.meta.glob<MigrationModule>('/migrations/*.ts', { eager: true });

/** Migrations bundled with the build; names keep `.ts`, so that the knex command line agrees about what has run. */
const migrationSource: Knex.MigrationSource<string> = {
  getMigrations: async () => Object.keys(modules).sort(),
  getMigrationName: (file) => path.basename(file),
  getMigration: async (file) => modules[file]!
};

/**
 * Opens the database file (made when absent, its folder too) with the pragmas of the product: busy timeout first,
 * WAL, full synchronisation, foreign keys on. `:memory:` is allowed.
 */
export function openDatabase(filename: string): Knex {
  if (filename !== ':memory:') mkdirSync(path.dirname(path.resolve(filename)), { recursive: true });
  return knexFactory({
    client: 'better-sqlite3',
    connection: { filename },
    useNullAsDefault: true,
    pool: {
      min: 1,
      max: 1,
      afterCreate(
        connection: { pragma(text: string): unknown },
        done: (error: Error | null, connection: unknown) => void
      ) {
        connection.pragma('busy_timeout = 5000');
        connection.pragma('journal_mode = WAL');
        connection.pragma('synchronous = FULL');
        connection.pragma('foreign_keys = ON');
        done(null, connection);
      }
    },
    migrations: { migrationSource }
  });
}

/** Brings the file to the newest form. */
export async function migrate(db: Knex): Promise<void> {
  await db.migrate.latest();
}

/** How many migrations the file still lacks. */
export async function pendingMigrations(db: Knex): Promise<number> {
  const [, pending] = (await db.migrate.list()) as [unknown[], unknown[]];
  return pending.length;
}

/** Writes a consistent copy of the database while it is in use. `target` must not exist. */
export async function copyTo(db: Knex, target: string): Promise<void> {
  await db.raw('VACUUM INTO ?', [target]);
}

/** What SQLite finds wrong with the file; empty when it is sound. */
export async function integrityFaults(db: Knex): Promise<string[]> {
  const rows: { integrity_check: string }[] = await db.raw('PRAGMA integrity_check');
  const broken: unknown[] = await db.raw('PRAGMA foreign_key_check');
  return [
    ...rows.map((row) => row.integrity_check).filter((text) => text !== 'ok'),
    ...broken.map((row) => `foreign key: ${JSON.stringify(row)}`)
  ];
}

const held = globalThis as { warpwiseDatabase?: Knex };

/** The application's database; opened by `useDatabase` at start. */
export function database(): Knex {
  if (!held.warpwiseDatabase) throw new Error('The database is not open yet');
  return held.warpwiseDatabase;
}

/** Makes `db` the application's database (start, tests), or forgets it with null. */
export function useDatabase(db: Knex | null): void {
  if (db) held.warpwiseDatabase = db;
  else delete held.warpwiseDatabase;
}
