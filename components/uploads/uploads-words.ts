import { addLocalDays, formatDayTime, startOfLocalDay } from '@/lib/client/format-time';
import { filesWords } from '@/lib/client/table-words';
import { inWords } from '@/components/plants/plants-words';
import type { Upload } from '@/lib/schemas/upload';

const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);
const files = (count: number): string => `${inWords(count)} ${count === 1 ? 'file' : 'files'}`;

/** The page's finding: what is not done, and how far the record runs. */
export function uploadsLead(
  uploads: readonly Upload[],
  sending: number,
  dataThrough: string | null,
  timeZone: string,
): string {
  const count = (...statuses: Upload['status'][]) =>
    uploads.filter((upload) => statuses.includes(upload.status)).length;
  const parts = [
    [sending + count('receiving', 'received', 'importing', 'analysing'), 'is being read', 'are being read'],
    [count('needs-mapping'), 'waits for its columns', 'wait for their columns'],
    [count('failed'), 'could not be read', 'could not be read'],
  ] as const;
  const open = parts.flatMap(([number, one, many]) =>
    number === 0 ? [] : [`${files(number)} ${number === 1 ? one : many}`],
  );
  const record =
    dataThrough === null ? 'No record yet' : `The record runs to ${formatDayTime(Date.parse(dataThrough), timeZone)}`;
  return open.length === 0 ? `${record}.` : `${capital(open.join(', '))}. ${record}.`;
}

/** States as people read them. */
export const STATUS_WORDS: Readonly<Record<Upload['status'], string>> = {
  receiving: 'receiving',
  received: 'received',
  'needs-mapping': 'needs mapping',
  importing: 'importing',
  analysing: 'analysing',
  done: 'done',
  failed: 'failed',
};

/** The files that hold times of a local day, the latest first: where two have a value, that one counts. */
export function filesOfDay(uploads: readonly Upload[], day: string, timeZone: string): string {
  const start = startOfLocalDay(day, timeZone);
  const end = startOfLocalDay(addLocalDays(day, 1), timeZone);
  const names = uploads
    .filter(
      ({ from, to, samplesStored }) =>
        from !== null && to !== null && samplesStored > 0 && Date.parse(from) < end && Date.parse(to) >= start,
    )
    .sort((a, b) => b.createdAt.localeCompare(a.createdAt))
    .map(({ filename }) => filename);
  if (names.length === 0) return '';
  return names.length === 1
    ? `From ${names[0] ?? ''}.`
    : `Files that reach into it, the latest first: ${filesWords(names)}.`;
}
