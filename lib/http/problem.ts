export interface FieldError {
  path: string;
  message: string;
}
export interface ProblemExtra {
  headers?: Record<string, string>;
  /** Further members of the problem document, such as `triesLeft`. */
  members?: Record<string, unknown>;
}

/** An answer that is thrown: it rolls the request's transaction back and becomes application/problem+json (RFC 9457). */
export class ProblemError extends Error {
  constructor(
    readonly status: number,
    readonly title: string,
    readonly detail: string,
    readonly errors?: readonly FieldError[],
    readonly extra: ProblemExtra = {},
  ) {
    super(`${status} ${title}: ${detail}`);
    this.name = 'ProblemError';
  }

  toResponse(requestId: string): Response {
    const body = {
      type: 'about:blank',
      title: this.title,
      status: this.status,
      detail: this.detail,
      instance: `urn:uuid:${requestId}`,
      ...(this.errors ? { errors: this.errors } : {}),
      ...this.extra.members,
    };
    return new Response(JSON.stringify(body), {
      status: this.status,
      headers: { 'content-type': 'application/problem+json', 'cache-control': 'no-store', ...this.extra.headers },
    });
  }
}

/** Makes a problem to throw: `throw problem(409, 'Conflict', 'The plant has data at a step of 5 minutes.')`. */
export const problem = (
  status: number,
  title: string,
  detail: string,
  errors?: readonly FieldError[],
  extra?: ProblemExtra,
): ProblemError => new ProblemError(status, title, detail, errors, extra);

export const notFound = (what: string): ProblemError =>
  problem(404, 'Not found', `There is no such ${what}, or it is not yours to see.`);
export const forbidden = (detail: string): ProblemError => problem(403, 'Forbidden', detail);
