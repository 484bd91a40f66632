import type { Metadata } from 'next';
import Link from 'next/link';
import { FormatsPage } from '@/components/formats/formats-page';
import { ProductShell } from '@/components/shell/product-shell';
import { currentAccess, currentUser, withAccess } from '@/lib/auth/current';
import { shellPlants } from '@/lib/queries/shell-plants';

export const metadata: Metadata = {
  title: 'What files are read',
  description:
    'The trend exports that are read as they are: tables and files, text and packing, times, values and units, each with an example and what it is read as.',
};

/** Open to everyone: whoever has an export may see whether it is read before signing up. */
export default async function FormatsRoute() {
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
        <FormatsPage />
      </>
    );
  }
  const user = await currentUser();
  const plants = await withAccess(access, (em) => shellPlants(em, access));
  return (
    <ProductShell person={{ name: user?.name ?? '', email: user?.email ?? '' }} plants={plants}>
      <FormatsPage />
    </ProductShell>
  );
}
