import type { Metadata } from 'next';
import { redirect } from 'next/navigation';
import { SignInForm } from '@/components/account/sign-in-form';
import { PLANTS_PATH } from '@/components/shell/tabs';
import { currentAccess } from '@/lib/auth/current';
import { signUpIsOpen } from '@/lib/commands/create-account';
import { returnPath } from '@/lib/http/return-path';

export const metadata: Metadata = { title: 'Sign in' };

export default async function SignInPage({ searchParams }: { searchParams: Promise<{ next?: string | string[] }> }) {
  const next = returnPath((await searchParams).next, PLANTS_PATH);
  if (await currentAccess()) redirect(next);
  return <SignInForm next={next} signUp={signUpIsOpen()} />;
}
