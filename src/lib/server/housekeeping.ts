import { database } from './database';
import { log } from './log';
import * as sessions from './sessions';

const day = 86_400_000;

/** Deletes what nobody needs any more: ended sessions, dead links, the installation's finished jobs, old settle runs and sent mails. */
export async function tidy(now = Date.now()): Promise<void> {
  await sessions.sweep();
  for (const table of ['sign_ups', 'password_resets', 'address_changes', 'invitations'])
    await database()(table)
      .where('expires_at', '<', now - 30 * day)
      .delete();
  await database()('jobs')
    .whereNull('studio_id')
    .whereIn('state', ['done', 'failed', 'stopped'])
    .where('updated_at', '<', now - day)
    .delete();
  await database()('jobs')
    .where({ kind: 'settle' })
    .whereIn('state', ['done', 'failed', 'stopped'])
    .where('updated_at', '<', now - 30 * day)
    .delete();
  await database()('messages')
    .where({ state: 'sent' })
    .where('created_at', '<', now - 90 * day)
    .delete();
}

/** Tidies now and every hour; gives the way to end it. */
export function startTidying(): () => void {
  const go = () => void tidy().catch((error) => log.error({ err: error }, 'tidying'));
  const timer = setInterval(go, 3_600_000);
  timer.unref();
  go();
  return () => clearInterval(timer);
}
