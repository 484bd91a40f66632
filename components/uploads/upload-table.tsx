'use client';
import { HeadCell } from '@/components/ui/table';
import type { Upload } from '@/lib/schemas/upload';
import { SendingRow } from './sending-row';
import { UploadRow } from './upload-row';
import type { Sending } from './use-sending';

export interface UploadTableProps {
  plantId: string;
  timeZone: string;
  uploads: readonly Upload[];
  sending: Sending;
  may: { map: boolean; remove: boolean };
}

export function UploadTable({ plantId, timeZone, uploads, sending, may }: UploadTableProps) {
  return (
    <table className="table phone:block" data-ruled>
      <caption className="sr-only">Files, newest first</caption>
      <thead className="phone:sr-only">
        <tr>
          <HeadCell>file</HeadCell>
          <HeadCell numeric>size</HeadCell>
          <HeadCell>state</HeadCell>
          <HeadCell>read</HeadCell>
          <HeadCell>covers</HeadCell>
          <HeadCell>noticed</HeadCell>
          <HeadCell numeric>received</HeadCell>
          <HeadCell>
            <span className="sr-only">what can be done</span>
          </HeadCell>
        </tr>
      </thead>
      <tbody className="phone:block">
        {sending.files.map((file) => (
          <SendingRow key={file.key} file={file} onStop={() => sending.stop(file.key)} />
        ))}
        {uploads.map((upload) => (
          <UploadRow key={upload.id} plantId={plantId} timeZone={timeZone} upload={upload} may={may} />
        ))}
      </tbody>
    </table>
  );
}
