import type { Handle } from '@sveltejs/kit';
import { newId } from '$lib/server/ids';
import { log } from '$lib/server/log';

/** Gives each request its id, and one line of the log at its end. Paths may hold one-time tokens: the route is logged. */
export const requestLog: Handle = async ({ event, resolve }) => {
  const started = performance.now();
  const nobody: App.Locals = {
    requestId: newId(),
    person: { user: null, session: null },
    scope: null,
    studio: null
  };
  Object.assign(event.locals, nobody);
  const response = await resolve(event);
  response.headers.set('x-request-id', event.locals.requestId);
  log.info({
    request: event.locals.requestId,
    method: event.request.method,
    route: event.route.id,
    status: response.status,
    ms: Math.round(performance.now() - started),
    user: event.locals.person.user?.id,
    studio: event.locals.scope?.studio
  });
  return response;
};
