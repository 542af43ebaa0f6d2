/*
 * `npm run backup [folder]`: a consistent copy of the database, while the server may be running.
 */
import { existsSync } from 'node:fs';
import { backUp } from '../backup';
import { config } from '../config';
import { openDatabase } from '../database';

if (!existsSync(config.databaseFile)) {
  console.error(`There is no database at ${config.databaseFile}.`);
  process.exit(1);
}
const db = openDatabase(config.databaseFile);
try {
  const copy = await backUp(db, process.argv[2] ?? config.backupFolder);
  console.log(`Copied and found sound: ${copy}`);
} catch (error) {
  console.error(error instanceof Error ? error.message : error);
  process.exitCode = 1;
} finally {
  await db.destroy();
}
