'use client';
import { useQueryClient } from '@tanstack/react-query';
import { useCallback, useRef, useState } from 'react';
import { uploadsQuery } from '@/lib/client/queries';
import { isResumable, sendResumable } from '@/lib/client/send-resumable';
import { sendUpload } from '@/lib/client/send-upload';
import { formatBytes } from '@/lib/client/format';
import { sortOut } from '@/lib/client/dropped-files';

/** A drop on its way out of this browser, or one that did not get through. */
export interface SendingFile {
  key: number;
  name: string;
  /** Every file of the drop by name. */
  names: readonly string[];
  sizeBytes: number;
  /** Share that has left, 0 to 1. */
  share: number;
  failure: string | null;
}

export interface Sending {
  files: readonly SendingFile[];
  send: (files: readonly File[]) => void;
  stop: (key: number) => void;
}

/** How large an upload may be, and how that is said. */
export interface UploadLimit {
  bytes: number;
  words: string;
}

/** Sends drops, one upload a drop, and keeps the ones that failed in view until they are put away. */
export function useSending(plantId: string, limit: UploadLimit): Sending {
  const queries = useQueryClient();
  const [files, setFiles] = useState<readonly SendingFile[]>([]);
  const stops = useRef(new Map<number, AbortController>());
  const next = useRef(0);

  const change = useCallback((key: number, part: Partial<SendingFile> | null) => {
    setFiles((now) =>
      part === null
        ? now.filter((file) => file.key !== key)
        : now.map((file) => (file.key === key ? { ...file, ...part } : file)),
    );
  }, []);

  const send = useCallback(
    (chosen: readonly File[]) => {
      const { good, refused } = sortOut(chosen);
      const told = refused.map(({ file, why }): SendingFile => {
        const { name, size: sizeBytes } = file;
        return { key: next.current++, name, names: [name], sizeBytes, share: 0, failure: why };
      });
      if (told.length > 0) setFiles((now) => [...told, ...now]);
      if (good.length === 0) return;
      const key = next.current++;
      const sizeBytes = good.reduce((sum, file) => sum + file.size, 0);
      const names = good.map(({ name }) => name);
      const name = names.length === 1 ? (names[0] ?? 'file') : `${names.length} files`;
      const failure = overLimit(sizeBytes, limit);
      setFiles((now) => [{ key, name, names, sizeBytes, share: 0, failure }, ...now]);
      if (failure !== null) return;
      const stop = new AbortController();
      stops.current.set(key, stop);
      sendDrop(plantId, good, (share) => change(key, { share }), stop.signal)
        .then(async () => {
          await queries.invalidateQueries({ queryKey: uploadsQuery(plantId).queryKey });
          change(key, null);
        })
        .catch((error: unknown) => {
          const stopped = error instanceof DOMException && error.name === 'AbortError';
          change(
            key,
            stopped
              ? null
              : { failure: error instanceof Error ? error.message : 'The file did not get through. Send it again.' },
          );
        })
        .finally(() => stops.current.delete(key));
    },
    [plantId, limit, queries, change],
  );

  const stop = useCallback(
    (key: number) => {
      stops.current.get(key)?.abort();
      change(key, null);
    },
    [change],
  );

  return { files, send, stop };
}

/** One large file goes by the protocol that can go on after a break, everything else in one form. */
async function sendDrop(
  plantId: string,
  files: readonly File[],
  onProgress: (share: number) => void,
  signal: AbortSignal,
): Promise<void> {
  const [only] = files;
  if (only && isResumable(files)) await sendResumable(plantId, only, onProgress, signal);
  else await sendUpload(plantId, files, onProgress, signal);
}

/** What this browser can tell of all files together before anything is sent. */
function overLimit(sizeBytes: number, limit: UploadLimit): string | null {
  if (sizeBytes <= limit.bytes) return null;
  return `${formatBytes(sizeBytes)} is over the limit of ${limit.words}. Export a shorter period, or compress the file with gzip.`;
}
