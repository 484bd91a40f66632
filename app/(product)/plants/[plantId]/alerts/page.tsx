import type { Metadata } from 'next';
import { AlertsPage } from '@/components/alerts/alerts-page';
import { withAccess } from '@/lib/auth/current';
import { Hydrated } from '@/lib/client/hydrate';
import { alertsQuery, plantQuery } from '@/lib/client/queries';
import { pagePlant } from '@/lib/queries/page-plant';
import { readAlerts } from '@/lib/queries/read-alerts';

export const metadata: Metadata = { title: 'Alerts' };

export default async function AlertsRoute({ params }: { params: Promise<{ plantId: string }> }) {
  const { access, plant, may } = await pagePlant(params);
  const alerts = await withAccess(access, (em) =>
    readAlerts(em, { organizationId: plant.organizationId, plantId: plant.id }),
  );
  return (
    <Hydrated
      data={[
        [plantQuery(plant.id).queryKey, plant],
        [alertsQuery(plant.id).queryKey, alerts],
      ]}
    >
      <AlertsPage plantId={plant.id} may={{ manage: may['alert.manage'], run: may['alert.run'] }} />
    </Hydrated>
  );
}
