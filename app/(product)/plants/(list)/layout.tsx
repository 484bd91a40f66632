import type { ReactNode } from 'react';
import { ProductShell } from '@/components/shell/product-shell';
import { currentUser, requireAccess, withAccess } from '@/lib/auth/current';
import { shellPlants } from '@/lib/queries/shell-plants';

/** Pages of no one plant. */
export default async function PlantListLayout({ children }: { children: ReactNode }) {
  const access = await requireAccess();
  const user = await currentUser();
  const plants = await withAccess(access, (em) => shellPlants(em, access));
  return (
    <ProductShell person={{ name: user?.name ?? '', email: user?.email ?? '' }} plants={plants}>
      {children}
    </ProductShell>
  );
}
