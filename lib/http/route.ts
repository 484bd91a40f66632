import { randomUUID } from 'node:crypto';
import type { EntityManager } from '@mikro-orm/postgresql';
import type { z } from 'zod';
import type { Access, SignedInUser } from '../auth/access';
import { resolveCredentials, type Credentials } from '../auth/resolve';
import { withTenant } from '../db/tenant';
import { log } from '../log';
import { failureProblem } from './failure';
import { json } from './json';
import { parseBody, parseParams, parseQuery } from './parse';
import { problem, ProblemError } from './problem';
import { requireSameOrigin } from './same-origin';

export { problem, ProblemError, notFound, forbidden } from './problem';
export { json } from './json';
export { requireAction, requireEpisode, requireOrganization, requirePlant, requireUpload } from './require';

type Schema = z.ZodType | undefined;
type Parsed<S extends Schema> = S extends z.ZodType ? z.output<S> : undefined;

export interface RouteOptions<
  P extends Schema,
  Q extends Schema,
  B extends Schema,
  Open extends boolean,
  Tx extends boolean,
> {
  params?: P;
  query?: Q;
  body?: B;
  /** One transaction under the asker's tenancy for the whole handler (default). False: the handler opens its own, short ones. */
  transaction?: Tx;
  /** Anyone may ask; `access` is then null for someone who is not signed in. */
  public?: Open;
  /** Asked every few seconds by machines: its log line is for debugging. */
  quiet?: boolean;
}

export interface RouteContext<
  P extends Schema,
  Q extends Schema,
  B extends Schema,
  Open extends boolean,
  Tx extends boolean,
> {
  em: Tx extends true ? EntityManager : undefined;
  access: Open extends true ? Access | null : Access;
  user: SignedInUser | null;
  params: Parsed<P>;
  query: Parsed<Q>;
  body: Parsed<B>;
  request: Request;
  requestId: string;
}

type Handler = (
  request: Request,
  context?: { params: Promise<Record<string, string | string[] | undefined>> },
) => Promise<Response>;

/**
 * Wraps a route handler: session or token, same origin, validation, one tenant transaction, one log line, errors as problems.
 * The handler returns a Response, an object (200, JSON) or nothing (204); it throws `problem(...)` to refuse.
 */
export function route<
  P extends Schema = undefined,
  Q extends Schema = undefined,
  B extends Schema = undefined,
  Open extends boolean = false,
  Tx extends boolean = true,
>(
  options: RouteOptions<P, Q, B, Open, Tx>,
  handler: (context: RouteContext<P, Q, B, Open, Tx>) => Promise<Response | object | undefined | void>,
): Handler {
  return async (request, nextContext) => {
    const requestId = randomUUID();
    const started = performance.now();
    let credentials: Credentials = { access: null, user: null, shown: 'nothing', setCookie: null };
    let response: Response;
    try {
      credentials = await resolveCredentials(request.headers);
      requireSameOrigin(request, credentials.shown);
      if (options.public !== true) requireSignIn(credentials);
      const given = {
        params: options.params && parseParams(options.params, await nextContext?.params),
        query: options.query && parseQuery(options.query, request),
        body: options.body && (await parseBody(options.body, request)),
      };
      const run = async (em?: EntityManager) =>
        // The conditional types of the context say what the options make true here.
        handler({
          ...given,
          em,
          access: credentials.access,
          user: credentials.user,
          request,
          requestId,
        } as RouteContext<P, Q, B, Open, Tx>);
      const tenancy = { organizationIds: credentials.access?.organizationIds ?? [] };
      response = toResponse(options.transaction === false ? await run() : await withTenant(tenancy, run));
    } catch (error) {
      const refusal = error instanceof ProblemError ? error : failureProblem(error, requestId);
      response = refusal.toResponse(requestId);
    }
    log[options.quiet === true ? 'debug' : 'info'](
      {
        requestId,
        method: request.method,
        path: new URL(request.url).pathname,
        status: response.status,
        organizationIds: credentials.access?.organizationIds ?? [],
        userId: credentials.access?.userId ?? null,
        tokenId: credentials.access?.tokenId ?? null,
        durationMs: Math.round(performance.now() - started),
      },
      'request.served',
    );
    return finished(response, requestId, credentials.setCookie);
  };
}

function requireSignIn({ access, shown }: Credentials): void {
  if (access) return;
  const detail = shown === 'bearer' ? 'This token is not known, has expired or was revoked.' : 'Sign in first.';
  throw problem(401, 'Not signed in', detail, undefined, { headers: { 'www-authenticate': 'Bearer' } });
}

function toResponse(answer: Response | object | undefined | void): Response {
  if (answer instanceof Response) return answer;
  if (answer === undefined) return new Response(null, { status: 204 });
  return json(answer);
}

function finished(response: Response, requestId: string, setCookie: string | null): Response {
  response.headers.set('x-request-id', requestId);
  response.headers.set('x-content-type-options', 'nosniff');
  // A handler that set the cookie itself (sign-in, sign-out) has the last word.
  if (setCookie !== null && !response.headers.has('set-cookie')) response.headers.append('set-cookie', setCookie);
  return response;
}
