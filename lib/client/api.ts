import type { z } from 'zod';
import { Problem } from '../schemas/common';

/** A refusal of the API, as RFC 9457 problem details; `message` is the sentence for the person. */
export class ApiError extends Error {
  override readonly name = 'ApiError';
  constructor(
    readonly status: number,
    message: string,
    readonly errors: readonly { path: string; message: string }[] = [],
    readonly retryAfterSeconds: number | null = null,
  ) {
    super(message);
  }
}

const API = '/api/v1';
const UNREACHABLE = 'The server did not answer. Check the connection and try again; nothing has been lost.';

/** A GET, checked against the contract. Throws ApiError. */
export async function getJson<Schema extends z.ZodType>(
  path: string,
  schema: Schema,
  signal?: AbortSignal,
): Promise<z.output<Schema>> {
  const response = await call(path, { signal });
  return schema.parse(await response.json());
}

/** A request that changes something; the parsed answer, or undefined for 204. Throws ApiError. */
export async function sendJson(
  method: 'POST' | 'PUT' | 'PATCH' | 'DELETE',
  path: string,
  body?: unknown,
): Promise<unknown> {
  const response = await call(path, {
    method,
    ...(body === undefined ? {} : { body: JSON.stringify(body), headers: { 'content-type': 'application/json' } }),
  });
  return response.status === 204 || response.headers.get('content-length') === '0' ? undefined : response.json();
}

async function call(path: string, init: RequestInit): Promise<Response> {
  let response: Response;
  try {
    response = await fetch(`${API}${path}`, { credentials: 'same-origin', ...init });
  } catch (error) {
    if (error instanceof DOMException && error.name === 'AbortError') throw error;
    throw new ApiError(0, UNREACHABLE);
  }
  if (response.ok) return response;
  throw await refusal(response.status, response.headers.get('retry-after'), () => response.json());
}

/** The ApiError of an answer that is not a success; for callers that do not use fetch (upload with progress). */
export async function refusal(
  status: number,
  retryAfter: string | null,
  body: () => Promise<unknown>,
): Promise<ApiError> {
  const parsed = Problem.safeParse(await body().catch(() => null));
  const seconds = retryAfter === null ? null : Number(retryAfter);
  if (parsed.success) return new ApiError(status, parsed.data.detail, parsed.data.errors, seconds);
  return new ApiError(
    status,
    `The server answered ${status}. Try again; if it stays, tell the person who runs this service.`,
    [],
    seconds,
  );
}

/** The part of a query string that has values. */
export function queryString(values: Readonly<Record<string, string | number | boolean | undefined>>): string {
  const given = Object.entries(values).filter(
    (entry): entry is [string, string | number | boolean] => entry[1] !== undefined && entry[1] !== '',
  );
  return given.length === 0
    ? ''
    : `?${new URLSearchParams(given.map(([key, value]) => [key, String(value)])).toString()}`;
}
