'use client';
import { useQueryClient } from '@tanstack/react-query';
import { useCallback, useRef, useState } from 'react';
import { uploadsQuery } from '@/lib/client/queries';
import { sendUpload } from '@/lib/client/send-upload';
import { formatBytes } from '@/lib/client/format';

/** A drop on its way out of this browser, or one that did not get through. */
export interface SendingFile {
  key: number;
  name: string;
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
      if (chosen.length === 0) return;
      const key = next.current++;
      const sizeBytes = chosen.reduce((sum, file) => sum + file.size, 0);
      const name = chosen.length === 1 ? (chosen[0]?.name ?? 'file') : `${chosen.length} files`;
      const refused = refusalOf(chosen, limit);
      setFiles((now) => [{ key, name, sizeBytes, share: 0, failure: refused }, ...now]);
      if (refused !== null) return;
      const stop = new AbortController();
      stops.current.set(key, stop);
      sendUpload(plantId, chosen, (share) => change(key, { share }), stop.signal)
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

/** What this browser can tell before anything is sent: a folder or empty file, or one over the limit. */
function refusalOf(files: readonly File[], limit: UploadLimit): string | null {
  const empty = files.find((file) => file.size === 0);
  if (empty) return `"${empty.name}" is empty. Export it again, with at least one row of data.`;
  const total = files.reduce((sum, file) => sum + file.size, 0);
  if (total > limit.bytes)
    return `${formatBytes(total)} is over the limit of ${limit.words}. Export a shorter period, or compress the file with gzip.`;
  return null;
}
