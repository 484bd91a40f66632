import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { NewPlantPage } from '@/components/settings/new-plant-page';
import { can } from '@/lib/auth/can';
import { requireAccess } from '@/lib/auth/current';

export const metadata: Metadata = { title: 'Add a plant' };

export default async function NewPlant() {
  const access = await requireAccess('/plants/new');
  const organizations = access.memberships
    .filter(({ organizationId }) => can(access, organizationId, 'plant.manage'))
    .map(({ organizationId, organizationName }) => ({ id: organizationId, name: organizationName }));
  if (organizations.length === 0) notFound();
  return <NewPlantPage organizations={organizations} />;
}
