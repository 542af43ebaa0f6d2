import type { Handle, ServerInit } from '@sveltejs/kit';
import { building } from '$app/environment';
import { newId } from '$lib/server/ids';
import { migrate, openDatabase, useDatabase } from '$lib/server/database';

export const init: ServerInit = async () => {
  if (building) return;
  const db = openDatabase(process.env.WARPWISE_DATABASE ?? 'data/warpwise.sqlite');
  await migrate(db);
  useDatabase(db);
};

export const handle: Handle = async ({ event, resolve }) => {
  event.locals.requestId = newId();
  event.locals.person = { user: null, session: null };
  event.locals.scope = null;
  event.locals.studio = null;
  return resolve(event);
};
