import type { Metadata } from 'next';
import Link from 'next/link';
import { MethodPage } from '@/components/method/method-page';
import { ProductShell } from '@/components/shell/product-shell';
import { currentAccess, currentUser, withAccess } from '@/lib/auth/current';
import { shellPlants } from '@/lib/queries/shell-plants';

export const metadata: Metadata = {
  title: 'How it is worked out',
  description:
    'How direction, bypass flow and blended supply of a chilled-water decoupler are estimated from trends, how sure the answer is, how well it does, and from which sources.',
};

/** Open to everyone: whoever is sent a number may read how it was made. */
export default async function MethodRoute() {
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
        <MethodPage />
      </>
    );
  }
  const user = await currentUser();
  const plants = await withAccess(access, (em) => shellPlants(em, access));
  return (
    <ProductShell person={{ name: user?.name ?? '', email: user?.email ?? '' }} plants={plants}>
      <MethodPage />
    </ProductShell>
  );
}
