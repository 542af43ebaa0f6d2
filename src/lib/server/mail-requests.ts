import * as rateLimits from './rate-limits';

/**
 * Whether somebody at the door may have a mail sent. Too many from one place is said (`wait`). Too many to one address is
 * not: the answer stays 'look in your mail', so that it tells nothing, and no further mail goes out (`send` false).
 */
export async function mayAskForMail(
  place: string,
  email: string
): Promise<{ wait: string | null; send: boolean }> {
  const seconds = await rateLimits.attempt('mail: place', place);
  if (seconds > 0) return { wait: rateLimits.waitWords(seconds), send: false };
  return { wait: null, send: (await rateLimits.attempt('mail: address', email)) === 0 };
}
