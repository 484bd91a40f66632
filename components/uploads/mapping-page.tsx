'use client';
import { useQuery } from '@tanstack/react-query';
import { useRouter } from 'next/navigation';
import Link from 'next/link';
import { useEffect } from 'react';
import { Page } from '@/components/shell/app-shell';
import { plantPath } from '@/components/shell/tabs';
import { PageHead } from '@/components/ui/page-head';
import { ErrorState, LoadingWords, Notice } from '@/components/ui/states';
import { formatNumber } from '@/lib/client/format';
import { formatPeriod } from '@/lib/client/format-time';
import { plantQuery, previewQuery, uploadQuery } from '@/lib/client/queries';
import { dialectWords, shapeWords } from '@/lib/client/table-words';
import type { Preview, Upload } from '@/lib/schemas/upload';
import { MappingForm } from './mapping-columns';
import { nounOf, SURE_ENOUGH } from './mapping-form';
import { STATUS_WORDS } from './uploads-words';

export interface MappingPageProps {
  plantId: string;
  uploadId: string;
  mayConfirm: boolean;
}

const NOT_READ_YET: readonly Upload['status'][] = ['receiving', 'received'];
/** Read once: a change has the stored file read again. */
const READ: readonly Upload['status'][] = ['done', 'failed'];
const MAPPABLE: readonly Upload['status'][] = ['needs-mapping', ...READ];

/** What each column of a file is: suggested, with the reason, for a person to confirm. */
export function MappingPage({ plantId, uploadId, mayConfirm }: MappingPageProps) {
  const router = useRouter();
  const { data: plant } = useQuery(plantQuery(plantId));
  const { data: upload } = useQuery(uploadQuery(uploadId));
  const waiting = upload === undefined || NOT_READ_YET.includes(upload.status);
  const { data, isFetching, error, refetch } = useQuery({ ...previewQuery(uploadId), enabled: !waiting });
  // A preview from before the last confirmation has the old answers: it is not shown while the new one is on its way.
  const preview = isFetching ? undefined : data;
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
        lead={
          preview
            ? lead(preview, upload !== undefined && READ.includes(upload.status))
            : 'The first rows are being read.'
        }
        block={preview ? titleBlock(preview, plant?.stepMinutes) : undefined}
      />
      {preview && upload && READ.includes(upload.status) && mayConfirm ? (
        <div className="mb-7.5">
          <Notice>{againWords(upload, plant?.timeZone ?? 'UTC')}</Notice>
        </div>
      ) : null}
      {error ? (
        <ErrorState onRetry={() => void refetch()}>{error.message}</ErrorState>
      ) : preview && upload && plant ? (
        <MappingForm
          plantId={plantId}
          upload={upload}
          preview={preview}
          unitCount={plant.design.productionUnits.length}
          mayConfirm={mayConfirm && MAPPABLE.includes(upload.status)}
          closedBecause={
            !mayConfirm
              ? 'An engineer or the owner of this organization can confirm this.'
              : MAPPABLE.includes(upload.status)
                ? null
                : `This file is ${STATUS_WORDS[upload.status]}: how it is read can be changed once that is over.`
          }
        />
      ) : (
        <LoadingWords>Reading the first rows of {upload?.filename ?? 'the file'}.</LoadingWords>
      )}
    </Page>
  );
}

/** What a change does to a file that was read already. */
function againWords({ from, to }: Upload, timeZone: string): string {
  const period = from === null || to === null ? null : formatPeriod(Date.parse(from), Date.parse(to) + 1, timeZone);
  const days = period === null ? 'the days it holds are' : `${period} is`;
  return `Change what is wrong and confirm: the stored file is read again with the new answers, ${days} filled anew, and the results are worked out again. Until that is done the record stands without this file’s values. Nothing has to be sent again.`;
}

function lead(preview: Preview, read: boolean): string {
  const { columns, confirmed } = preview;
  const noun = nounOf(preview);
  const counted = (count: number) => `${formatNumber(count)} ${count === 1 ? noun : `${noun}s`}`;
  if (read && confirmed) {
    const used = confirmed.columns.filter(({ role }) => role !== 'ignore').length;
    const out = columns.length - used;
    return `${counted(columns.length)}; ${formatNumber(used)} read as below${out > 0 ? `, ${formatNumber(out)} left out` : ''}.`;
  }
  const known = columns.filter((column) => column.known === true).length;
  const open = columns.filter((column) => column.confidence < SURE_ENOUGH).length;
  const out = columns.filter(
    ({ confidence, role, known: isKnown }) => confidence >= SURE_ENOUGH && role === 'ignore' && isKnown !== true,
  ).length;
  const sure = columns.length - open - out - known;
  const parts = [
    ...(known > 0 ? [`${formatNumber(known)} as in earlier files`] : []),
    ...(sure > 0 || known === 0 ? [`${formatNumber(sure)} recognised`] : []),
    ...(out > 0 ? [`${formatNumber(out)} left out`] : []),
    ...(open > 0 ? [`${formatNumber(open)} to decide`] : []),
  ];
  const next =
    known > 0
      ? 'Only what is new in this heading is asked.'
      : 'A heading seen once on this plant maps itself the next time.';
  return `${counted(columns.length)}; ${parts.join(', ')}. ${next}`;
}

/** What the file is, for the corner of the page. */
function titleBlock(preview: Preview, plantStepMinutes: number | undefined) {
  const { tables, timeZone, stepMinutes } = preview;
  const [first] = tables;
  const step =
    stepMinutes === null ? 'unknown' : `${formatNumber(stepMinutes, { decimals: stepMinutes % 1 === 0 ? 0 : 2 })} min`;
  const files = tables.reduce((sum, table) => sum + table.files.length, 0);
  return [
    ...(tables.length > 1 ? [{ term: 'headings', value: `${tables.length}, in ${files} files` }] : []),
    ...(tables.length === 1 && files > 1 ? [{ term: 'files', value: `${files} with one heading` }] : []),
    ...(tables.length === 1 && first ? [{ term: 'written', value: dialectWords(first) }] : []),
    ...(tables.length === 1 && first ? [{ term: 'shape', value: shapeWords(first) }] : []),
    ...(first && tables.length === 1 ? [{ term: 'time', value: `“${first.timestamp.columns.join('” and “')}”` }] : []),
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
