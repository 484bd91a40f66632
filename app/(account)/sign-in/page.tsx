import type { Metadata } from 'next';
import { redirect } from 'next/navigation';
import { SignInForm } from '@/components/account/sign-in-form';
import { PLANTS_PATH } from '@/components/shell/tabs';
import { currentAccess } from '@/lib/auth/current';
import { signUpIsOpen } from '@/lib/commands/create-account';

export const metadata: Metadata = { title: 'Sign in' };

/** Where someone goes after signing in: a path of this site and nothing else, or an open redirect would lead anywhere. */
function safeNext(next: string | string[] | undefined): string {
  return typeof next === 'string' && /^\/(?![/\\])/.test(next) ? next : PLANTS_PATH;
}

export default async function SignInPage({ searchParams }: { searchParams: Promise<{ next?: string | string[] }> }) {
  const next = safeNext((await searchParams).next);
  if (await currentAccess()) redirect(next);
  return <SignInForm next={next} signUp={signUpIsOpen()} />;
}
