import type { HandleServerError, ServerInit } from '@sveltejs/kit';
import { sequence } from '@sveltejs/kit/hooks';
import { building } from '$app/environment';
import { headers } from '$lib/server/hooks/headers';
import { limits } from '$lib/server/hooks/limits';
import { requestLog } from '$lib/server/hooks/request-log';
import { session } from '$lib/server/hooks/session';
import { log } from '$lib/server/log';
import { startServer } from '$lib/server/start';

export const init: ServerInit = async () => {
  if (!building) await startServer();
};

export const handle = sequence(requestLog, headers, limits, session);

/** The log gets everything, the person the request id. A page that does not exist is no fault of the program. */
export const handleError: HandleServerError = ({ error, event, status, message }) => {
  const { requestId } = event.locals;
  if (status === 404) return { message, requestId };
  log.error({ request: requestId, method: event.request.method, route: event.route.id, err: error });
  return { message: 'Something went wrong on our side. It has been written down.', requestId };
};
