import type { Metadata } from 'next';
import { PlantPage } from '@/components/plant/plant-page';
import { Hydrated } from '@/lib/client/hydrate';
import { plantQuery } from '@/lib/client/queries';
import { pagePlant } from '@/lib/queries/page-plant';

interface Props {
  params: Promise<{ plantId: string }>;
}

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: (await pagePlant(params)).plant.name };
}

export default async function PlantRoute({ params }: Props) {
  const { plant, may } = await pagePlant(params);
  return (
    <Hydrated data={[[plantQuery(plant.id).queryKey, plant]]}>
      <PlantPage plantId={plant.id} mayAcknowledge={may['episode.acknowledge']} />
    </Hydrated>
  );
}
