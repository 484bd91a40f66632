import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { z } from 'zod';
import { MappingPage } from '@/components/uploads/mapping-page';
import { withAccess } from '@/lib/auth/current';
import { Hydrated } from '@/lib/client/hydrate';
import { plantQuery, uploadQuery } from '@/lib/client/queries';
import { readUpload } from '@/lib/queries/list-uploads';
import { pagePlant } from '@/lib/queries/page-plant';

export const metadata: Metadata = { title: 'Mapping' };

export default async function Mapping({ params }: { params: Promise<{ plantId: string; uploadId: string }> }) {
  const { access, plant, may } = await pagePlant(params);
  const { uploadId } = await params;
  if (!z.uuid().safeParse(uploadId).success) notFound();
  const upload = await withAccess(access, (em) => readUpload(em, { organizationId: plant.organizationId, uploadId }));
  if (!upload || upload.plantId !== plant.id) notFound();
  return (
    <Hydrated
      data={[
        [plantQuery(plant.id).queryKey, plant],
        [uploadQuery(uploadId).queryKey, upload],
      ]}
    >
      <MappingPage plantId={plant.id} uploadId={uploadId} mayConfirm={may['mapping.confirm']} />
    </Hydrated>
  );
}
