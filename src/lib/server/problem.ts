/**
 * An expected refusal: what is wrong, where, and what is allowed. Pages show it as an error page or a form message,
 * the API answers it as RFC 9457 problem details.
 */
export class Problem extends Error {
  constructor(
    readonly status: number,
    /** Stable and machine readable: `lay-out-of-date`. */
    readonly type: string,
    readonly title: string,
    readonly detail: string = title,
    /** Further members of the answer. */
    readonly extra: Readonly<Record<string, unknown>> = {}
  ) {
    super(detail);
    this.name = 'Problem';
  }
}

/** Not there, or not this studio's: the two are not told apart. */
export function notFound(what: string): Problem {
  return new Problem(404, 'not-found', `No such ${what}`, `There is no such ${what} in this studio.`);
}

/** Refused input, per field. */
export function invalid(
  fields: Readonly<Record<string, string>>,
  title = 'Some fields need attention'
): Problem {
  return new Problem(400, 'invalid-input', title, Object.values(fields).join(' '), { fields });
}

/** A problem as an answer of the API. */
export function problemResponse(problem: Problem, requestId: string): Response {
  return new Response(
    JSON.stringify({
      type: `/problems/${problem.type}`,
      title: problem.title,
      status: problem.status,
      detail: problem.detail,
      requestId,
      ...problem.extra
    }),
    { status: problem.status, headers: { 'content-type': 'application/problem+json' } }
  );
}
