import type { Handle } from '@sveltejs/kit';
import { Problem, problemResponse } from '$lib/server/problem';
import { attempt, waitWords } from '$lib/server/rate-limits';

/** Refuses a flood of changes from one place. The doors have tighter limits of their own. */
export const limits: Handle = async ({ event, resolve }) => {
  if (event.request.method === 'GET' || event.request.method === 'HEAD') return resolve(event);
  const seconds = await attempt('write: place', event.getClientAddress());
  if (seconds === 0) return resolve(event);
  const answer = problemResponse(
    new Problem(429, 'too-many', 'Too many requests', waitWords(seconds)),
    event.locals.requestId
  );
  answer.headers.set('retry-after', String(seconds));
  return answer;
};
