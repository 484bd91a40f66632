'use client';
import { useQuery } from '@tanstack/react-query';
import { useRouter } from 'next/navigation';
import Link from 'next/link';
import { useEffect } from 'react';
import { Page } from '@/components/shell/app-shell';
import { plantPath } from '@/components/shell/tabs';
import { PageHead } from '@/components/ui/page-head';
import { ErrorState, LoadingWords } from '@/components/ui/states';
import { plantQuery, previewQuery, uploadQuery } from '@/lib/client/queries';
import type { Preview, Upload } from '@/lib/schemas/upload';
import { MappingForm } from './mapping-columns';
import { STATUS_WORDS } from './uploads-words';

export interface MappingPageProps {
  plantId: string;
  uploadId: string;
  mayConfirm: boolean;
}

const NOT_READ_YET: readonly Upload['status'][] = ['receiving', 'received'];

/** What each column of a file is: suggested, with the reason, for a person to confirm. */
export function MappingPage({ plantId, uploadId, mayConfirm }: MappingPageProps) {
  const router = useRouter();
  const { data: plant } = useQuery(plantQuery(plantId));
  const { data: upload } = useQuery(uploadQuery(uploadId));
  const waiting = upload === undefined || NOT_READ_YET.includes(upload.status);
  const { data: preview, error, refetch } = useQuery({ ...previewQuery(uploadId), enabled: !waiting });
  const uploads = plantPath(plantId, 'uploads');
  const movedOn = upload !== undefined && ['importing', 'analysing'].includes(upload.status);
  useEffect(() => {
    // Confirmed here or in another tab: the file is on its way, and its progress is on the uploads page.
    if (movedOn) router.replace(uploads);
  }, [movedOn, router, uploads]);

  return (
    <Page foot={{ settingsRevision: plant?.settingsRevision, timeZone: plant?.timeZone }}>
      <PageHead
        over={
          <>
            <Link href={uploads} className="link">
              Uploads
            </Link>{' '}
            · {upload?.filename}
          </>
        }
        title="Mapping"
        lead={preview ? lead(preview) : 'The first rows are being read.'}
        block={preview ? dialectBlock(preview, plant?.stepMinutes) : undefined}
      />
      {error ? (
        <ErrorState onRetry={() => void refetch()}>{error.message}</ErrorState>
      ) : preview && upload && plant ? (
        <MappingForm
          plantId={plantId}
          upload={upload}
          preview={preview}
          unitCount={plant.design.productionUnits.length}
          mayConfirm={mayConfirm && upload.status === 'needs-mapping'}
          closedBecause={
            upload.status === 'needs-mapping'
              ? mayConfirm
                ? null
                : 'An engineer or the owner of this organization can confirm this.'
              : `This file is ${STATUS_WORDS[upload.status]}: its columns cannot be changed any more. Take it out and send it again to map it anew.`
          }
        />
      ) : (
        <LoadingWords>Reading the first rows of {upload?.filename ?? 'the file'}.</LoadingWords>
      )}
    </Page>
  );
}

function lead(preview: Preview): string {
  const { columns } = preview;
  const open = columns.filter((column) => column.confidence < 0.5).length;
  const out = columns.filter((column) => column.confidence >= 0.5 && column.role === 'ignore').length;
  const sure = columns.length - open - out;
  const parts = [
    `${sure} recognised`,
    ...(out > 0 ? [`${out} left out`] : []),
    ...(open > 0 ? [`${open} to decide`] : []),
  ];
  return `${columns.length} columns; ${parts.join(', ')}. A heading seen once on this plant maps itself the next time.`;
}

const DELIMITERS: Readonly<Record<string, string>> = { ',': 'comma', ';': 'semicolon', '\t': 'tab', '|': 'bar' };

function dialectBlock({ dialect, timestamp, timeZone, stepMinutes }: Preview, plantStepMinutes: number | undefined) {
  const before = dialect.headerRow - 1;
  const preamble = before > 0 ? `, ${before} ${before === 1 ? 'line' : 'lines'} before the heading` : '';
  const step = stepMinutes === null ? 'unknown' : `${stepMinutes} min`;
  return [
    {
      term: 'dialect',
      value: `${DELIMITERS[dialect.delimiter] ?? dialect.delimiter}, ${dialect.encoding}, decimal ${dialect.decimal === ',' ? 'comma' : 'point'}${preamble}`,
    },
    { term: 'time', value: `“${timestamp.columns.join('” and “')}”, ${timestamp.form}` },
    { term: 'zone', value: timeZone },
    {
      term: 'step',
      value:
        plantStepMinutes === undefined || stepMinutes === plantStepMinutes
          ? step
          : `${step}, brought to the plant’s ${plantStepMinutes} min`,
    },
  ];
}
