'use client';
import { useQuery } from '@tanstack/react-query';
import { Page } from '@/components/shell/app-shell';
import { PageHead } from '@/components/ui/page-head';
import { Section } from '@/components/ui/section';
import { EmptyState, ErrorState, LoadingWords } from '@/components/ui/states';
import { formatDayTime } from '@/lib/client/format-time';
import { plantQuery, uploadsQuery } from '@/lib/client/queries';
import { CoverageSection } from './coverage-section';
import { DropZone } from './drop-zone';
import { FeedSection } from './feed-section';
import { UploadTable } from './upload-table';
import { uploadsLead } from './uploads-words';
import { useFreshRecord } from './use-fresh-record';
import { useSending, type UploadLimit } from './use-sending';

export interface UploadsPageProps {
  plantId: string;
  limit: UploadLimit;
  may: { upload: boolean; map: boolean; remove: boolean; manageTokens: boolean };
}

/** Files of a plant: drop, progress, what was read and what was not, and the way back. */
export function UploadsPage({ plantId, limit, may }: UploadsPageProps) {
  const { data: plant } = useQuery(plantQuery(plantId));
  const { data, error, refetch } = useQuery(uploadsQuery(plantId));
  const sending = useSending(plantId, limit);
  useFreshRecord(plantId, data?.items);
  const zone = plant?.timeZone ?? 'UTC';
  return (
    <Page foot={{ settingsRevision: plant?.settingsRevision, timeZone: plant?.timeZone }}>
      <PageHead
        over={plant?.name}
        title="Uploads"
        lead={uploadsLead(data?.items ?? [], sending.files.length, plant?.dataThrough ?? null, zone)}
        block={[
          { term: 'step', value: `${plant?.stepMinutes ?? '-'} min` },
          { term: 'local time', value: zone },
          {
            term: 'data through',
            value: plant?.dataThrough ? formatDayTime(Date.parse(plant.dataThrough), zone) : 'no data yet',
          },
        ]}
      />
      {may.upload ? (
        <DropZone plantName={plant?.name ?? 'this plant'} limit={limit} onFiles={sending.send} />
      ) : (
        <p className="py-2.5 text-ink-2">An engineer or the owner of this organization can add files.</p>
      )}
      <Section title="Files" sub="newest first" className="mt-7.5">
        {error && !data ? (
          <ErrorState onRetry={() => void refetch()}>{error.message}</ErrorState>
        ) : !data ? (
          <LoadingWords>Reading the list of files.</LoadingWords>
        ) : data.items.length === 0 && sending.files.length === 0 ? (
          <EmptyState claim="No file yet.">
            Drop a trend export on this page: a week at five minutes is enough for a first answer.
          </EmptyState>
        ) : (
          <UploadTable plantId={plantId} timeZone={zone} uploads={data.items} sending={sending} may={may} />
        )}
      </Section>
      {plant?.dataThrough == null ? null : (
        <CoverageSection plant={{ ...plant, dataThrough: plant.dataThrough }} uploads={data?.items ?? []} />
      )}
      {may.upload ? <FeedSection plantId={plantId} timeZone={zone} mayManage={may.manageTokens} /> : null}
    </Page>
  );
}
