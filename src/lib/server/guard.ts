import { error, isHttpError, isRedirect, redirect, type RequestEvent } from '@sveltejs/kit';
import { z } from 'zod';
import { may, type Permission } from './permissions';
import { Problem, problemResponse } from './problem';
import type { Scope } from './scope';

/*
 * The door of every page, form action and API route. `allow` for pages, `api` for JSON routes: both ask the
 * permission table, nothing else decides.
 */

/**
 * The scope of the person, if they hold `permission` in the studio they work in. Signed out: to the sign-in page and
 * back. Without a studio: to the list of studios. Without the permission: 403.
 */
export function allow(event: Pick<RequestEvent, 'locals' | 'url'>, permission: Permission): Scope {
  signedIn(event);
  const { scope } = event.locals;
  if (!scope) redirect(303, '/studios');
  if (event.locals.secondFactorDue) redirect(303, '/profile/second-factor?due');
  if (!may(scope.role, permission))
    error(403, {
      message: 'Your role in this studio does not include this.',
      requestId: event.locals.requestId
    });
  return scope;
}

/** The person, studio or not: for pages that belong to the person alone. Signed out: to the sign-in page and back. */
export function signedIn(
  event: Pick<RequestEvent, 'locals' | 'url'>
): Extract<App.Locals['person'], { user: { id: string } }> {
  const { person } = event.locals;
  if (!person.user)
    redirect(303, `/sign-in?next=${encodeURIComponent(event.url.pathname + event.url.search)}`);
  return person;
}

/** Runs a repository call of a page: a refusal becomes an error page with the same words. */
export async function orErrorPage<T>(work: Promise<T>): Promise<T> {
  try {
    return await work;
  } catch (refusal) {
    if (refusal instanceof Problem) error(refusal.status, refusal.message);
    throw refusal;
  }
}

/**
 * A JSON route: guards, runs `handler`, answers refusals as problem details. `handler` may return any JSON value or
 * a Response of its own.
 */
export function api<E extends RequestEvent>(
  permission: Permission,
  handler: (scope: Scope, event: E) => unknown
): (event: E) => Promise<Response> {
  return async (event) => {
    const { locals } = event;
    try {
      if (!locals.person.user)
        throw new Problem(401, 'signed-out', 'You are signed out', 'Sign in again; nothing you did is lost.');
      if (!locals.scope)
        throw new Problem(403, 'no-studio', 'No studio', 'Choose a studio that you belong to first.');
      if (locals.secondFactorDue)
        throw new Problem(
          403,
          'second-factor-due',
          'A second factor is due',
          'The studio asks it of its owners: turn it on under your profile.'
        );
      if (!may(locals.scope.role, permission))
        throw new Problem(
          403,
          'not-allowed',
          'Not allowed',
          'Your role in this studio does not include this.'
        );
      const answer = await handler(locals.scope, event);
      return answer instanceof Response ? answer : Response.json(answer ?? null);
    } catch (refusal) {
      if (refusal instanceof Problem) return problemResponse(refusal, locals.requestId);
      if (isRedirect(refusal)) throw refusal;
      if (isHttpError(refusal))
        return problemResponse(
          new Problem(refusal.status, 'refused', refusal.body.message),
          locals.requestId
        );
      throw refusal;
    }
  };
}

/** The JSON body of a request through `schema`; a body that does not fit is refused with every place that is wrong. */
export async function readBody<S extends z.ZodType>(request: Request, schema: S): Promise<z.output<S>> {
  let body: unknown;
  try {
    body = await request.json();
  } catch {
    throw new Problem(400, 'not-json', 'The request is not JSON', 'Send a JSON body.');
  }
  const parsed = schema.safeParse(body);
  if (!parsed.success)
    throw new Problem(400, 'invalid-input', 'The request does not fit', z.prettifyError(parsed.error), {
      issues: parsed.error.issues.slice(0, 50).map(({ path, message }) => ({ path, message }))
    });
  return parsed.data;
}
