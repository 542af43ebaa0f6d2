import { error, type RequestEvent } from '@sveltejs/kit';
import { z } from 'zod';
import { orErrorPage } from './guard';
import { passwordFault } from './passwords';
import * as rateLimits from './rate-limits';

/** What a one-time link leads to, or the error page; guesses of links are counted by place. */
export async function opened<T>(
  event: Pick<RequestEvent, 'getClientAddress'>,
  work: () => Promise<T>
): Promise<T> {
  const seconds = await rateLimits.attempt('link: place', event.getClientAddress());
  if (seconds > 0) error(429, rateLimits.waitWords(seconds));
  return orErrorPage(work());
}

/** The field of a new password, refused when it is common or made of what is known `about` the person. */
export const newPassword = (about: readonly string[]) =>
  z.string({ error: 'Choose a password.' }).superRefine((password, context) => {
    const fault = passwordFault(password, about);
    if (fault !== null) context.addIssue({ code: 'custom', message: fault });
  });
