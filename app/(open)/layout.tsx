import Link from 'next/link';
import type { ReactNode } from 'react';
import { ProductShell } from '@/components/shell/product-shell';
import { currentAccess, currentUser, withAccess } from '@/lib/auth/current';
import { shellPlants } from '@/lib/queries/shell-plants';

/** Around the pages that are open to everyone: the product's own frame for who is signed in, a head with the way in for others. */
export default async function OpenLayout({ children }: { children: ReactNode }) {
  const access = await currentAccess();
  if (!access) {
    return (
      <>
        <header className="no-print border-b border-ink">
          <div className="page flex h-[50px] items-center justify-between">
            <Link href="/" className="font-serif text-[1.25rem] font-semibold">
              Slackwater
            </Link>
            <Link href="/sign-in" className="link">
              Sign in
            </Link>
          </div>
        </header>
        {children}
      </>
    );
  }
  const user = await currentUser();
  const plants = await withAccess(access, (em) => shellPlants(em, access));
  return (
    <ProductShell person={{ name: user?.name ?? '', email: user?.email ?? '' }} plants={plants}>
      {children}
    </ProductShell>
  );
}
