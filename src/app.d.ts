import type { Scope } from '$lib/server/scope';

declare global {
  namespace App {
    interface Error {
      message: string;
      /** What the person quotes; the log has the rest. */
      requestId?: string;
    }
    interface Locals {
      requestId: string;
      /** Who is signed in, or nobody: never half of it. */
      person:
        | { user: { id: string; name: string; email: string }; session: { publicId: string } }
        | { user: null; session: null };
      /** The studio that the person works in with their role there; null when signed out or without a studio. */
      scope: Scope | null;
      studio: {
        id: string;
        name: string;
        currency: string;
        lengthUnit: 'cm' | 'in';
        timeZone: string;
        isDemo: boolean;
        secondFactorRequired: boolean;
      } | null;
      /** The studio asks its owners for a second factor, and this one has none yet: nothing else opens before. */
      secondFactorDue?: boolean;
    }
  }
}

export {};
