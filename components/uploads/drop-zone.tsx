'use client';
import { Upload as UploadIcon } from 'lucide-react';
import Link from 'next/link';
import { useEffect, useRef, useState } from 'react';
import { FORMATS_PATH } from '@/components/shell/foot';
import { TextButton } from '@/components/ui/button';
import { CHOOSABLE, droppedFiles } from '@/lib/client/dropped-files';
import type { UploadLimit } from './use-sending';

export interface DropZoneProps {
  plantName: string;
  limit: UploadLimit;
  onFiles: (files: readonly File[]) => void;
}

const holdsFiles = (event: DragEvent): boolean => event.dataTransfer?.types.includes('Files') === true;

/** Takes files dropped anywhere on the page, or chosen. While a file is over the window the whole page says where it goes. */
export function DropZone({ plantName, limit, onFiles }: DropZoneProps) {
  const input = useRef<HTMLInputElement>(null);
  const [over, setOver] = useState(false);

  useEffect(() => {
    // Entering a child fires before leaving its parent: the count is 0 only when the pointer has left the window.
    let depth = 0;
    const enter = (event: DragEvent) => {
      if (!holdsFiles(event)) return;
      depth++;
      setOver(true);
    };
    const leave = (event: DragEvent) => {
      if (!holdsFiles(event)) return;
      depth = Math.max(0, depth - 1);
      if (depth === 0) setOver(false);
    };
    const allow = (event: DragEvent) => {
      if (holdsFiles(event)) event.preventDefault();
    };
    const drop = (event: DragEvent) => {
      if (!holdsFiles(event)) return;
      event.preventDefault();
      depth = 0;
      setOver(false);
      if (event.dataTransfer === null) return;
      void droppedFiles(event.dataTransfer).then(onFiles);
    };
    window.addEventListener('dragenter', enter);
    window.addEventListener('dragleave', leave);
    window.addEventListener('dragover', allow);
    window.addEventListener('drop', drop);
    return () => {
      window.removeEventListener('dragenter', enter);
      window.removeEventListener('dragleave', leave);
      window.removeEventListener('dragover', allow);
      window.removeEventListener('drop', drop);
    };
  }, [onFiles]);

  return (
    <>
      <div className="flex min-h-20 items-center gap-6 border border-dashed border-ink px-7 py-4 phone:gap-4 phone:px-4">
        <UploadIcon size={20} strokeWidth={1.5} aria-hidden="true" className="shrink-0" />
        <div>
          <p className="text-[15px] font-semibold">Drop files or a folder anywhere on this page</p>
          <p className="text-ink-2">
            CSV, TSV, TXT or XLSX, plain or in ZIP or GZ; several files or a whole folder at once; a column a point, a
            row a reading, or a file a point. Up to {limit.words}.{' '}
            <TextButton className="text-ink" onClick={() => input.current?.click()}>
              Choose files
            </TextButton>{' '}
            <Link href={FORMATS_PATH} className="link">
              What is read
            </Link>
          </p>
        </div>
        <input
          ref={input}
          type="file"
          multiple
          aria-label="Trend files"
          className="sr-only"
          tabIndex={-1}
          accept={CHOOSABLE}
          onChange={(event) => {
            onFiles([...(event.target.files ?? [])]);
            event.target.value = ''; // the same file may be chosen again
          }}
        />
      </div>
      {over ? (
        <div className="pointer-events-none fixed inset-2 z-50 flex items-center justify-center border-2 border-dashed border-ink">
          <p className="bg-ink px-4 py-2 text-[15px] font-semibold text-paper">let go to upload to {plantName}</p>
        </div>
      ) : null}
    </>
  );
}
