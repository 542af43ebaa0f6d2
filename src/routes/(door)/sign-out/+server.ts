import { redirect } from '@sveltejs/kit';
import * as sessions from '$lib/server/sessions';
import type { RequestHandler } from './$types';

/** Ends this session, on the server too. */
export const POST: RequestHandler = async ({ cookies }) => {
  await sessions.end(cookies);
  redirect(303, '/sign-in?done=out');
};
