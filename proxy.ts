import { randomBytes } from 'node:crypto';
import { NextResponse, type NextRequest } from 'next/server';
import { servedOverHttps } from '@/lib/auth/public-url';
import { pageHeaders } from '@/lib/http/page-headers';

/** Gives every page its security headers and a nonce; who is signed in is the pages' own question. */
export function proxy(request: NextRequest): NextResponse {
  const nonce = randomBytes(16).toString('base64');
  const headers = pageHeaders({
    nonce,
    https: servedOverHttps(),
    development: process.env.NODE_ENV === 'development',
  });
  const forwarded = new Headers(request.headers);
  forwarded.set('x-nonce', nonce);
  // Next.js takes the nonce for its own scripts from the policy of the request.
  forwarded.set('content-security-policy', headers['content-security-policy'] ?? '');
  // For a page that sends someone to sign in and wants them back.
  forwarded.set('x-page-path', request.nextUrl.pathname + request.nextUrl.search);
  const response = NextResponse.next({ request: { headers: forwarded } });
  for (const [name, value] of Object.entries(headers)) response.headers.set(name, value);
  return response;
}

export const config = {
  // Never /api: the body of a request that passes here is copied, and cut at 10 MB without a word.
  matcher: ['/((?!api/|_next/static|_next/image|favicon.ico|icon.svg).*)'],
};
