import { notFound } from 'next/navigation';
import type { ReactNode } from 'react';
import { ProductShell } from '@/components/shell/product-shell';
import { currentUser, requireAccess, withAccess } from '@/lib/auth/current';
import { shellPlants } from '@/lib/queries/shell-plants';

/** Pages of one plant; another organization's plant does not exist here. */
export default async function PlantLayout({
  params,
  children,
}: {
  params: Promise<{ plantId: string }>;
  children: ReactNode;
}) {
  const { plantId } = await params;
  const access = await requireAccess();
  const user = await currentUser();
  const plants = await withAccess(access, (em) => shellPlants(em, access));
  if (!plants.some((plant) => plant.id === plantId)) notFound();
  return (
    <ProductShell person={{ name: user?.name ?? '', email: user?.email ?? '' }} plants={plants} plantId={plantId}>
      {children}
    </ProductShell>
  );
}
