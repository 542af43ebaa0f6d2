import type { Knex } from 'knex';
import { backUp } from './backup';
import { startAsking } from './card-payments';
import { config } from './config';
import { migrate, openDatabase, pendingMigrations, useDatabase } from './database';
import * as demo from './demo';
import { startTidying } from './housekeeping';
import { registerAllJobs } from './job-kinds';
import { JobRunner } from './job-runner';
import { log } from './log';
import { senderOf } from './mail';
import { startSending } from './outbox';
import { atEnd, atSignal, watchSignals } from './shutdown';

/** Opens the database in its newest form, and starts what runs beside the requests. Awaited before the first request. */
export async function startServer(): Promise<void> {
  const held = globalThis as { warpwiseStarted?: boolean };
  // In dev a change of a server file asks again; what runs goes on.
  if (held.warpwiseStarted) return registerAllJobs();
  held.warpwiseStarted = true;
  const db = openDatabase(config.databaseFile);
  await bringUpToDate(db);
  useDatabase(db);
  if (config.demo) await demo.seed();

  registerAllJobs();
  const runner = new JobRunner();
  runner.start();
  const mail = senderOf(config);
  const stopSending = startSending(mail.send);
  const stopTidying = startTidying();
  const stopAsking = startAsking();
  if (!process.env.ORIGIN && !import.meta.env.DEV)
    log.warn({ origin: config.origin }, 'ORIGIN is not set: links in mails may lead nowhere');
  if (config.smtpUrl === null) log.warn('No mail server is configured (WARPWISE_SMTP_URL): mails wait');

  // In dev the tool that runs us ends the process.
  if (!import.meta.env.DEV) watchSignals();
  let drained: Promise<void> | undefined;
  atSignal(() => (drained = runner.shutDown()));
  atEnd(() => drained ?? runner.shutDown());
  atEnd(async () => {
    stopTidying();
    await stopAsking();
    await stopSending();
    mail.close();
  });
  atEnd(async () => {
    useDatabase(null);
    await db.destroy();
  });
  log.info({ database: config.databaseFile, origin: config.origin }, 'ready');
}

/** Migrations only go forward: a database that has rows is copied before it is changed. */
async function bringUpToDate(db: Knex): Promise<void> {
  if ((await db.schema.hasTable('studios')) && (await pendingMigrations(db)) > 0)
    log.info({ copy: await backUp(db, config.backupFolder) }, 'copied before the migration');
  await migrate(db);
}
