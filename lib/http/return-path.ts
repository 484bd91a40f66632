/** No such host exists: what resolves to it was a path of this site. */
const HERE = 'http://this-site.invalid';

/**
 * Where someone goes after signing in: `next` when it is a path of this site, else `otherwise`. Judged by the URL parser itself,
 * which drops tabs and line ends and turns backslashes: what looks like a path to a pattern can be another site to a browser.
 */
export function returnPath(next: string | string[] | undefined, otherwise = '/'): string {
  if (typeof next !== 'string' || !next.startsWith('/') || !URL.canParse(next, HERE)) return otherwise;
  const url = new URL(next, HERE);
  return url.origin === HERE ? `${url.pathname}${url.search}${url.hash}` : otherwise;
}
