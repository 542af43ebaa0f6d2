import { RateLimiterMemory, RateLimiterRes } from 'rate-limiter-flexible';
import { hashToken } from './tokens';

/*
 * How often the costly and the guessable doors open. Kept in memory: one process serves an installation, and a restart
 * forgiving everybody is a price worth not writing to the database for every attempt.
 * Addresses are counted whether they have an account or not, so a refusal says nothing about that.
 */

const minute = 60;
const hour = 60 * minute;

const limits = {
  /** Wrong passwords for one address from one place. */
  'sign-in: address and place': new RateLimiterMemory({ points: 5, duration: 15 * minute }),
  /** Wrong passwords from one place, whatever the address. */
  'sign-in: place': new RateLimiterMemory({ points: 50, duration: 15 * minute }),
  /** Wrong passwords for one address from anywhere: high, so that nobody can lock a person out cheaply. */
  'sign-in: address': new RateLimiterMemory({ points: 200, duration: hour }),
  /** Wrong present passwords on the profile page. */
  'password: person': new RateLimiterMemory({ points: 10, duration: 15 * minute }),
  /** Wrong one-time codes of one person. */
  'code: person': new RateLimiterMemory({ points: 8, duration: 15 * minute }),
  /** New studios by one person. */
  'studios: person': new RateLimiterMemory({ points: 10, duration: hour }),
  /** Requests for a mail from one place. */
  'mail: place': new RateLimiterMemory({ points: 20, duration: hour }),
  /** Mails of the door to one address. */
  'mail: address': new RateLimiterMemory({ points: 4, duration: hour }),
  /** Invitations by one studio. */
  'mail: studio': new RateLimiterMemory({ points: 60, duration: hour }),
  /** Opening of one-time links from one place. */
  'link: place': new RateLimiterMemory({ points: 60, duration: 15 * minute }),
  /** What a client does on their page: agreeing, paying, asking. */
  'client: link': new RateLimiterMemory({ points: 40, duration: hour }),
  /** Questions over one link: each is a mail to the studio. */
  'question: link': new RateLimiterMemory({ points: 10, duration: hour }),
  /** Changes of any kind from one place: above what a workroom behind one address does by hand and by autosave. */
  'write: place': new RateLimiterMemory({ points: 1200, duration: minute })
} as const;

export type Limit = keyof typeof limits;

const keyOf = (parts: readonly string[]): string => hashToken(parts.join('\n'));

/** Counts one attempt. Gives the seconds to wait when there were too many, else 0. */
export async function attempt(limit: Limit, ...parts: string[]): Promise<number> {
  try {
    await limits[limit].consume(keyOf(parts));
    return 0;
  } catch (refused) {
    if (refused instanceof RateLimiterRes) return Math.ceil(refused.msBeforeNext / 1000);
    throw refused;
  }
}

/** Takes back one counted attempt that turned out well. */
export async function giveBack(limit: Limit, ...parts: string[]): Promise<void> {
  await limits[limit].reward(keyOf(parts));
}

/** Forgets the attempts: after a right password. */
export async function forgive(limit: Limit, ...parts: string[]): Promise<void> {
  await limits[limit].delete(keyOf(parts));
}

/** 'Too many attempts. Wait 3 minutes and try again.' */
export function waitWords(seconds: number): string {
  const minutes = Math.ceil(seconds / 60);
  return `Too many attempts. Wait ${minutes === 1 ? 'a minute' : `${minutes} minutes`} and try again.`;
}
