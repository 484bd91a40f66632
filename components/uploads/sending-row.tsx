import { TextButton } from '@/components/ui/button';
import { ProgressBar } from '@/components/ui/progress-bar';
import { Cell, RowHead } from '@/components/ui/table';
import { Tag } from '@/components/ui/tag';
import { formatBytes } from '@/lib/client/format';
import { filesWords } from '@/lib/client/table-words';
import type { SendingFile } from './use-sending';

export const ROW_ON_PHONE =
  'phone:grid phone:grid-cols-[minmax(0,1fr)_auto] phone:gap-x-4 phone:border-b phone:border-rule phone:py-3 phone:[&>*]:border-0! phone:[&>*]:p-0!';

/** A drop on its way to the server. */
export function SendingRow({ file, onStop }: { file: SendingFile; onStop: () => void }) {
  return (
    <tr className={ROW_ON_PHONE}>
      <RowHead className="font-semibold! break-all">
        {file.name}
        {file.names.length > 1 ? (
          <span className="block font-normal break-words text-ink-2">{filesWords(file.names, 6)}</span>
        ) : null}
      </RowHead>
      <Cell numeric>{formatBytes(file.sizeBytes)}</Cell>
      {file.failure === null ? (
        <td colSpan={5}>
          <ProgressBar progress={file.share} label={`Sending ${file.name}`} />{' '}
          <span className="text-ink-2">sending</span>
        </td>
      ) : (
        <td colSpan={5} role="alert" className="phone:col-span-2">
          <Tag variant="reversed">not sent</Tag> {file.failure}
        </td>
      )}
      <Cell numeric>
        <TextButton onClick={onStop}>{file.failure === null ? 'stop' : 'put away'}</TextButton>
      </Cell>
    </tr>
  );
}
