import { headers } from 'next/headers';
import type { ReactNode } from 'react';
import { requireAccess } from '@/lib/auth/current';

/** Every page behind sign-in. */
export default async function ProductLayout({ children }: { children: ReactNode }) {
  await requireAccess((await headers()).get('x-page-path') ?? undefined);
  return children;
}
