import { database, pendingMigrations } from '$lib/server/database';
import { log } from '$lib/server/log';
import type { RequestHandler } from './$types';

/** For whoever watches the installation: whether the database answers and has its newest form. Says nothing else. */
export const GET: RequestHandler = async ({ locals }) => {
  try {
    const pending = await pendingMigrations(database());
    const ok = pending === 0;
    return Response.json({ ok, database: 'answers', migrations: ok ? 'current' : 'pending' }, status(ok));
  } catch (error) {
    log.error({ request: locals.requestId, err: error }, 'health');
    return Response.json({ ok: false, database: 'does not answer', migrations: 'unknown' }, status(false));
  }
};

const status = (ok: boolean) => ({ status: ok ? 200 : 503, headers: { 'cache-control': 'no-store' } });
