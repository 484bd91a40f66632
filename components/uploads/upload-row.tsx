'use client';
import { useQuery } from '@tanstack/react-query';
import { Check } from 'lucide-react';
import Link from 'next/link';
import { useId, useState } from 'react';
import { plantPath } from '@/components/shell/tabs';
import { TextButton } from '@/components/ui/button';
import { ProgressBar } from '@/components/ui/progress-bar';
import { Cell, RowHead } from '@/components/ui/table';
import { Tag } from '@/components/ui/tag';
import { formatBytes, formatNumber, MISSING } from '@/lib/client/format';
import { formatDayTime, formatPeriod } from '@/lib/client/format-time';
import { previewQuery } from '@/lib/client/queries';
import type { Upload } from '@/lib/schemas/upload';
import { ProblemTable } from './problem-table';
import { RemoveUpload } from './remove-upload';
import { ROW_ON_PHONE } from './sending-row';
import { STATUS_WORDS } from './uploads-words';

export interface UploadRowProps {
  plantId: string;
  timeZone: string;
  upload: Upload;
  may: { map: boolean; remove: boolean };
}

/** One file: state, what was read, what was noticed (opens under it), and what can be done. */
export function UploadRow({ plantId, timeZone, upload, may }: UploadRowProps) {
  const [open, setOpen] = useState(upload.status === 'failed');
  const details = useId();
  const mapping = `${plantPath(plantId, 'uploads')}/${upload.id}/mapping`;
  return (
    <>
      <tr className={ROW_ON_PHONE} data-upload={upload.id} data-status={upload.status}>
        <RowHead className="font-semibold! break-words [overflow-wrap:anywhere]">{upload.filename}</RowHead>
        <Cell numeric className={upload.sizeBytes === 0 ? 'phone:hidden' : ''}>
          {upload.sizeBytes === 0 ? MISSING : formatBytes(upload.sizeBytes)}
        </Cell>
        <td>
          <State upload={upload} />
        </td>
        <td className={upload.rowsRead > 0 ? 'phone:text-end' : 'phone:hidden'}>
          {upload.rowsRead > 0 ? `${formatNumber(upload.rowsRead)} rows` : MISSING}
          {upload.samplesStored > 0 ? (
            <span className="text-ink-2">, {formatNumber(upload.samplesStored)} values</span>
          ) : null}
        </td>
        <td className={upload.from === null ? 'phone:hidden' : ''}>
          {upload.from !== null && upload.to !== null
            ? formatPeriod(Date.parse(upload.from), Date.parse(upload.to) + 1, timeZone)
            : MISSING}
        </td>
        <td className={upload.problems.length === 0 ? 'phone:hidden' : 'phone:text-end'}>
          {upload.problems.length === 0 ? (
            MISSING
          ) : (
            <TextButton aria-expanded={open} aria-controls={details} onClick={() => setOpen(!open)}>
              {noticed(upload)}
            </TextButton>
          )}
        </td>
        <Cell numeric className="text-ink-2 phone:col-start-1 phone:text-start!">
          {formatDayTime(Date.parse(upload.createdAt), timeZone)}
        </Cell>
        <Cell numeric className="phone:col-start-2">
          {may.map ? <MapLink upload={upload} href={mapping} /> : null}
          {may.remove ? <RemoveUpload plantId={plantId} upload={upload} timeZone={timeZone} /> : null}
        </Cell>
      </tr>
      {upload.problems.filter(isNews).map((problem, index) => (
        <tr key={index} className="phone:block" data-notice={problem.code}>
          <td colSpan={8} className="phone:block">
            <div className="border-l-[3px] border-ink pl-4">
              <Tag variant={problem.severity === 'error' ? 'reversed' : 'outlined'}>{NEWS[problem.code]}</Tag>{' '}
              {problem.message}
            </div>
          </td>
        </tr>
      ))}
      {open && upload.problems.length > 0 ? (
        <tr id={details} className="phone:block">
          <td colSpan={8} className="phone:block">
            <ProblemTable problems={upload.problems} rowsRead={upload.rowsRead} />
          </td>
        </tr>
      ) : null}
    </>
  );
}

/** What a person has to hear without opening anything. */
const NEWS: Readonly<Record<string, string>> = {
  'same-file': 'same file again',
  'file-left-out': 'left out',
  'column-gone': 'column gone',
  'clock-offset': 'clock off?',
};
const isNews = ({ code }: Upload['problems'][number]): boolean => NEWS[code] !== undefined;

/** To the mapping: to be made, or, once the file was read, to be changed. */
function MapLink({ upload, href }: { upload: Upload; href: string }) {
  const failed = upload.status === 'failed';
  // Of a file that failed only the server knows whether its columns were recognised before.
  const preview = useQuery({ ...previewQuery(upload.id), enabled: failed, retry: false });
  if (upload.status === 'needs-mapping')
    return (
      <Link href={href} className="link mr-3.5 font-semibold">
        map
      </Link>
    );
  if (upload.status !== 'done' && !(failed && preview.data)) return null;
  return (
    <Link href={href} className="link mr-3.5" aria-label={`change the mapping of ${upload.filename}`}>
      change mapping
    </Link>
  );
}

function State({ upload }: { upload: Upload }) {
  const words = STATUS_WORDS[upload.status];
  switch (upload.status) {
    case 'done':
      return (
        <span className="whitespace-nowrap">
          <Check size={16} strokeWidth={1.5} aria-hidden="true" className="mr-1.5 -mt-0.5 inline align-middle" />
          {words}
        </span>
      );
    case 'failed':
    case 'needs-mapping':
      return <Tag variant="reversed">{words}</Tag>;
    case 'importing':
    case 'analysing':
      return (
        <span className="inline-flex flex-wrap items-center gap-x-2">
          <ProgressBar progress={upload.progress} label={`${words} ${upload.filename}`} />
          <span className="text-ink-2">{words}</span>
        </span>
      );
    default:
      return <span className="text-ink-2">{words}</span>;
  }
}

function noticed(upload: Upload): string {
  const count = (severity: 'error' | 'warning') =>
    upload.problems.filter((problem) => problem.severity === severity).length;
  if (upload.status === 'failed') return 'what to do';
  const parts = [
    [count('error'), 'problem'],
    [count('warning'), 'warning'],
  ] as const;
  return parts
    .flatMap(([number, word]) => (number === 0 ? [] : [`${number} ${word}${number === 1 ? '' : 's'}`]))
    .join(', ');
}
