import { createHash } from 'node:crypto';
import { KERNEL_VERSION } from '../hydronics/types';
import { json } from './json';

interface Revisions {
  resultsRevision: number;
  settingsRevision: number;
}

/** Weak tag of everything derived from a plant: results revision, settings revision, units and the rest of the query. */
export function entityTag(plant: Revisions, request: Request): string {
  const url = new URL(request.url);
  url.searchParams.sort();
  const asked = createHash('sha256').update(`${url.pathname}?${url.searchParams.toString()}`).digest('base64url');
  return `W/"${plant.resultsRevision}-${plant.settingsRevision}-${KERNEL_VERSION}-${asked.slice(0, 16)}"`;
}

/** Whether the asker has this state already (weak comparison of RFC 9110, section 13.1.2). */
export function isCurrent(request: Request, tag: string): boolean {
  const asked = request.headers.get('if-none-match');
  if (asked === null) return false;
  const opaque = (each: string) => each.trim().replace(/^W\//, '');
  return asked.trim() === '*' || asked.split(',').some((each) => opaque(each) === opaque(tag));
}

/**
 * Answers 304 when the asker's copy is current, else what `make` makes (an object becomes JSON), tagged either way. Only for what
 * results and settings alone decide; notes and acknowledgements are not counted by the revisions.
 */
export async function cached(
  request: Request,
  plant: Revisions,
  make: () => Promise<Response | object>,
): Promise<Response> {
  const headers = { etag: entityTag(plant, request), 'cache-control': 'private, no-cache' };
  if (isCurrent(request, headers.etag)) return new Response(null, { status: 304, headers });
  const made = await make();
  if (!(made instanceof Response)) return json(made, 200, headers);
  for (const [name, value] of Object.entries(headers)) made.headers.set(name, value);
  return made;
}
