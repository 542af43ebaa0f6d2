/*
 * `npm run restore <copy>`: puts a copy in the place of the database. Stop the server first.
 */
import { restore } from '../backup';
import { config } from '../config';

const copy = process.argv[2];
if (!copy) {
  console.error('Which copy? npm run restore <file>');
  process.exit(1);
}
try {
  const kept = await restore(copy, config.databaseFile);
  console.log(`${config.databaseFile} is now the copy ${copy}.${kept ? ` The former one is ${kept}.` : ''}`);
} catch (error) {
  console.error(error instanceof Error ? error.message : error);
  process.exitCode = 1;
}
