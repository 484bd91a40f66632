import type { Metadata } from 'next';
import { notFound, redirect } from 'next/navigation';
import { SignUpForm } from '@/components/account/sign-up-form';
import { PLANTS_PATH } from '@/components/shell/tabs';
import { currentAccess } from '@/lib/auth/current';
import { signUpIsOpen } from '@/lib/commands/create-account';

export const metadata: Metadata = { title: 'Start an organization' };

export default async function SignUpPage() {
  if (!signUpIsOpen()) notFound();
  if (await currentAccess()) redirect(PLANTS_PATH);
  return <SignUpForm />;
}
