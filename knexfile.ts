import type { Knex } from 'knex';

/** For the knex command line only; the application opens its own connection (src/lib/server/database.ts). */
const config: Knex.Config = {
  client: 'better-sqlite3',
  connection: { filename: process.env.WARPWISE_DATABASE ?? 'data/warpwise.sqlite' },
  useNullAsDefault: true,
  pool: {
    min: 1,
    max: 1,
    afterCreate(connection: { pragma(text: string): void }, done: (error: Error | null) => void) {
      connection.pragma('busy_timeout = 5000');
      connection.pragma('foreign_keys = ON');
      done(null, connection);
    }
  },
  migrations: { directory: './migrations', extension: 'ts', loadExtensions: ['.ts'] }
};

export default config;
