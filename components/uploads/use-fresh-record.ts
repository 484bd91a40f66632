'use client';
import { hashKey, useQueryClient } from '@tanstack/react-query';
import { useEffect, useRef } from 'react';
import { uploadsQuery } from '@/lib/client/queries';
import { FINAL_UPLOAD_STATUSES, type Upload } from '@/lib/schemas/upload';

/** When a file that was under way is done, whatever else this tab has read of the plant is old: it is asked for again. */
export function useFreshRecord(plantId: string, uploads: readonly Upload[] | undefined): void {
  const queries = useQueryClient();
  const running = useRef(new Set<string>());
  useEffect(() => {
    if (uploads === undefined) return;
    const now = new Set(uploads.filter(({ status }) => !FINAL_UPLOAD_STATUSES.includes(status)).map(({ id }) => id));
    const ended = uploads.some(({ id, status }) => status === 'done' && running.current.has(id));
    running.current = now;
    if (!ended) return;
    const list = hashKey(uploadsQuery(plantId).queryKey);
    void queries.invalidateQueries({ queryKey: ['plant', plantId], predicate: (query) => query.queryHash !== list });
  }, [plantId, uploads, queries]);
}
