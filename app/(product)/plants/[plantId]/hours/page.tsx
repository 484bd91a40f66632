import type { Metadata } from 'next';
import { HoursPage } from '@/components/hours/hours-page';
import { Hydrated } from '@/lib/client/hydrate';
import { plantQuery } from '@/lib/client/queries';
import { pagePlant } from '@/lib/queries/page-plant';

export const metadata: Metadata = { title: 'Hours' };

export default async function HoursRoute({ params }: { params: Promise<{ plantId: string }> }) {
  const { plant } = await pagePlant(params);
  return (
    <Hydrated data={[[plantQuery(plant.id).queryKey, plant]]}>
      <HoursPage plantId={plant.id} />
    </Hydrated>
  );
}
