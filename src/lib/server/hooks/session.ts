import type { Handle } from '@sveltejs/kit';
import * as secondFactor from '$lib/server/second-factor';
import * as sessions from '$lib/server/sessions';
import * as studios from '$lib/server/studios';

/** Who is asking, and in which studio with which role: read anew at every request, so that a change counts at once. */
export const session: Handle = async ({ event, resolve }) => {
  const token = event.cookies.get(sessions.cookieName);
  if (!token) return resolve(event);
  const found = await sessions.read(token);
  if (!found) {
    sessions.clearCookie(event.cookies);
    return resolve(event);
  }
  if (found.fresh) sessions.setCookie(event.cookies, token);
  event.locals.person = { user: found.user, session: { publicId: found.session.publicId } };
  const place = found.session.studioId ? await studios.enter(found.session.studioId, found.user.id) : null;
  event.locals.scope = place?.scope ?? null;
  event.locals.studio = place?.studio ?? null;
  event.locals.secondFactorDue =
    place !== null &&
    place.studio.secondFactorRequired &&
    place.scope.role === 'owner' &&
    !(await secondFactor.has(found.user.id));
  return resolve(event);
};
