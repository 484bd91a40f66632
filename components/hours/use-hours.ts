'use client';
import { useInfiniteQuery } from '@tanstack/react-query';
import { allHoursQuery, rankedHoursQuery, type HoursFilter, type PeriodRange } from '@/lib/client/queries';
import type { HourRow } from '@/lib/schemas/results';
import { useEffect } from 'react';

interface HoursRead {
  hours: readonly HourRow[] | null;
  error: Error | null;
  retry: () => void;
}

/** Ranked hours, a page at a time. */
export function useRankedHours(
  plantId: string,
  filter: HoursFilter,
): HoursRead & { more: (() => void) | null; stale: boolean } {
  const { data, error, refetch, hasNextPage, fetchNextPage, isFetchingNextPage, isPlaceholderData } = useInfiniteQuery(
    rankedHoursQuery(plantId, filter),
  );
  return {
    hours: data ? data.pages.flatMap((page) => page.items) : null,
    error,
    retry: () => void refetch(),
    more: hasNextPage && !isFetchingNextPage ? () => void fetchNextPage() : null,
    stale: isPlaceholderData,
  };
}

/** Every hour of a period, good ones too: pages are asked for until all are here. null until then. */
export function useAllHours(plantId: string, range: PeriodRange): HoursRead {
  const { data, error, refetch, hasNextPage, fetchNextPage, isFetching } = useInfiniteQuery(
    allHoursQuery(plantId, range),
  );
  useEffect(() => {
    if (hasNextPage && !isFetching && error === null) void fetchNextPage();
  }, [hasNextPage, isFetching, fetchNextPage, error]);
  return {
    hours: data && !hasNextPage ? data.pages.flatMap((page) => page.items) : null,
    error,
    retry: () => void refetch(),
  };
}
