import 'server-only';
import type { EntityManager } from '@mikro-orm/postgresql';
import { cookies, headers } from 'next/headers';
import { redirect } from 'next/navigation';
import { cache } from 'react';
import { withTenant } from '../db/tenant';
import type { Access, SignedInUser } from './access';
import { lucia } from './lucia';
import { resolveSession } from './resolve';

/** The signed-in person of the page being rendered, looked up once a render; null when nobody is signed in. */
const currentSession = cache(async (): Promise<{ access: Access; user: SignedInUser } | null> => {
  const sessionId = (await cookies()).get(lucia().sessionCookieName)?.value;
  if (sessionId === undefined || sessionId === '') return null;
  // A page cannot set cookies; a prolonged session's new cookie comes with its next API call.
  const { access, user } = await resolveSession(sessionId);
  return access && user && { access, user };
});

export const currentAccess = async (): Promise<Access | null> => (await currentSession())?.access ?? null;
export const currentUser = async (): Promise<SignedInUser | null> => (await currentSession())?.user ?? null;

/** For pages behind sign-in: the access, or off to the sign-in page, which comes back to the page that was asked for. */
export async function requireAccess(returnTo?: string): Promise<Access> {
  const access = await currentAccess();
  if (access) return access;
  const page = returnTo ?? (await headers()).get('x-page-path') ?? '/';
  redirect(page === '/' ? '/sign-in' : `/sign-in?next=${encodeURIComponent(page)}`);
}

/** The data door of pages: one transaction under the person's tenancy, for prefetching. */
export const withAccess = <Result>(access: Access, work: (em: EntityManager) => Promise<Result>): Promise<Result> =>
  withTenant(access, work);
