import type { Metadata } from 'next';
import { SensorsPage } from '@/components/sensors/sensors-page';
import { Hydrated } from '@/lib/client/hydrate';
import { plantQuery } from '@/lib/client/queries';
import { pagePlant } from '@/lib/queries/page-plant';

export const metadata: Metadata = { title: 'Sensors' };

export default async function SensorsRoute({ params }: { params: Promise<{ plantId: string }> }) {
  const { plant, may } = await pagePlant(params);
  return (
    <Hydrated data={[[plantQuery(plant.id).queryKey, plant]]}>
      <SensorsPage plantId={plant.id} mayCheck={may['spot-check.manage']} />
    </Hydrated>
  );
}
