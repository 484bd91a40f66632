import { publicUrl } from '../auth/public-url';
import type { Credentials } from '../auth/resolve';
import { forbidden } from './problem';

const SAFE_METHODS = new Set(['GET', 'HEAD', 'OPTIONS']);

/**
 * Refuses a state-changing request that another site's page could have made in a signed-in browser. A Bearer token is not sent
 * by browsers on their own, so it needs no Origin. Without either credential a foreign Origin is still refused: nobody is to be
 * signed in to somebody else's account.
 */
export function requireSameOrigin(request: Request, shown: Credentials['shown']): void {
  if (SAFE_METHODS.has(request.method) || shown === 'bearer') return;
  const origin = request.headers.get('origin');
  if (origin === null) {
    if (shown === 'cookie')
      throw forbidden('A change made with the session cookie needs an Origin header of this site.');
    return;
  }
  if (!isOwnOrigin(origin, request.headers.get('host'))) {
    throw forbidden('The request comes from another site (its Origin is not this one).');
  }
}

/** Never compared with the request's own URL, which says `localhost` whatever the browser was told. */
function isOwnOrigin(origin: string, host: string | null): boolean {
  const own = publicUrl();
  if (own !== null && origin === own.origin) return true;
  // Behind https only the public address counts; on plain http (a loopback address) any name of this host does.
  if (own?.protocol === 'https:' || host === null || !URL.canParse(origin)) return false;
  return new URL(origin).host === host;
}
