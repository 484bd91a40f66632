import type { Metadata } from 'next';
import { UploadsPage } from '@/components/uploads/uploads-page';
import { withAccess } from '@/lib/auth/current';
import { Hydrated } from '@/lib/client/hydrate';
import { plantQuery, uploadsQuery } from '@/lib/client/queries';
import { sizeInWords, uploadLimitBytes } from '@/lib/commands/upload-limit';
import { listUploads } from '@/lib/queries/list-uploads';
import { pagePlant } from '@/lib/queries/page-plant';

export const metadata: Metadata = { title: 'Uploads' };

export default async function Uploads({ params }: { params: Promise<{ plantId: string }> }) {
  const { access, plant, may } = await pagePlant(params);
  const uploads = await withAccess(access, (em) =>
    listUploads(em, { organizationId: plant.organizationId, plantId: plant.id, limit: 50 }),
  );
  return (
    <Hydrated
      data={[
        [plantQuery(plant.id).queryKey, plant],
        [uploadsQuery(plant.id).queryKey, uploads],
      ]}
    >
      <UploadsPage
        plantId={plant.id}
        limit={{ bytes: uploadLimitBytes(), words: sizeInWords(uploadLimitBytes()) }}
        may={{
          upload: may['upload.create'],
          map: may['mapping.confirm'],
          remove: may['upload.remove'],
          manageTokens: may['token.manage'],
        }}
      />
    </Hydrated>
  );
}
