import type { Metadata } from 'next';
import { SettingsPage } from '@/components/settings/settings-page';
import { Hydrated } from '@/lib/client/hydrate';
import { plantQuery } from '@/lib/client/queries';
import { pagePlant } from '@/lib/queries/page-plant';

export const metadata: Metadata = { title: 'Settings' };

export default async function SettingsRoute({ params }: { params: Promise<{ plantId: string }> }) {
  const { plant, may } = await pagePlant(params);
  return (
    <Hydrated data={[[plantQuery(plant.id).queryKey, plant]]}>
      <SettingsPage plantId={plant.id} mayManage={may['plant.manage']} />
    </Hydrated>
  );
}
