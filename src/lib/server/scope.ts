import type { Role } from './permissions';

/** Who acts, in which studio: the first argument of every repository function. */
export interface Scope {
  readonly studio: string;
  readonly user: string;
  readonly role: Role;
}

/** What the application itself does for a studio, without a person: jobs and the demo. */
export function studioScope(studio: string): Scope {
  return { studio, user: 'system', role: 'owner' };
}
