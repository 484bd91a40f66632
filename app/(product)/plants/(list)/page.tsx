import type { EntityManager } from '@mikro-orm/postgresql';
import type { Metadata } from 'next';
import { PlantsPage } from '@/components/plants/plants-page';
import type { Access } from '@/lib/auth/access';
import { can } from '@/lib/auth/can';
import { requireAccess, withAccess } from '@/lib/auth/current';
import { Hydrated } from '@/lib/client/hydrate';
import { overviewQuery } from '@/lib/client/queries';
import { plantsOverview } from '@/lib/queries/plants-overview';

export const metadata: Metadata = { title: 'Plants' };

/** Where the week is read from; most people see one page of plants. */
const SHOWN = 200;

/** Of this instant: what "yesterday" is, is each plant's own question. */
const readOverview = (em: EntityManager, access: Access) =>
  plantsOverview(em, access, { limit: SHOWN, units: 'ip' }, Date.now());

export default async function Plants() {
  const access = await requireAccess('/plants');
  const overview = await withAccess(access, (em) => readOverview(em, access));
  const canAdd = access.organizationIds.some((organizationId) => can(access, organizationId, 'plant.manage'));
  return (
    <Hydrated data={[[overviewQuery().queryKey, overview]]}>
      <PlantsPage canAdd={canAdd} organizations={access.organizationIds.length} />
    </Hydrated>
  );
}
