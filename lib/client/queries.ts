import { infiniteQueryOptions, keepPreviousData, queryOptions } from '@tanstack/react-query';
import { z } from 'zod';
import { Alerts, Analysis } from '../schemas/alert';
import { listOf } from '../schemas/common';
import { Coverage } from '../schemas/data-requests';
import { OverviewPlant } from '../schemas/overview';
import { Plant } from '../schemas/plant';
import { Episode, HourDetail, HourRow, PlantDay, Tide, type Rank } from '../schemas/results';
import { Sensors, SpotChecks } from '../schemas/sensors';
import { FINAL_UPLOAD_STATUSES, Preview, Upload } from '../schemas/upload';
import { getJson, queryString } from './api';

/** A stretch of a plant's record: local days or instants, half-open; absent = the server's default. */
export interface PeriodRange {
  from?: string;
  to?: string;
}
export interface HoursFilter extends PeriodRange {
  rank: Rank;
  cause?: string;
  all?: boolean;
  limit?: number;
}

const RUNNING_POLL_MS = 700;

export const plantQuery = (plantId: string) =>
  queryOptions({ queryKey: ['plant', plantId], queryFn: ({ signal }) => getJson(`/plants/${plantId}`, Plant, signal) });

export const tideQuery = (plantId: string, period: PeriodRange & { barMinutes?: number }) =>
  queryOptions({
    queryKey: ['plant', plantId, 'tide', period],
    queryFn: ({ signal }) => getJson(`/plants/${plantId}/tide${queryString({ ...period })}`, Tide, signal),
    // The strip that is on screen stays until the next one is there: nothing already drawn goes blank.
    placeholderData: keepPreviousData,
  });

export const daysQuery = (plantId: string, period: PeriodRange) =>
  queryOptions({
    queryKey: ['plant', plantId, 'days', period],
    queryFn: ({ signal }) =>
      getJson(`/plants/${plantId}/days${queryString({ ...period })}`, z.object({ items: z.array(PlantDay) }), signal),
    placeholderData: keepPreviousData,
  });

export const hoursQuery = (plantId: string, filter: HoursFilter) =>
  queryOptions({
    queryKey: ['plant', plantId, 'hours', filter],
    queryFn: ({ signal }) => getJson(`/plants/${plantId}/hours${queryString({ ...filter })}`, listOf(HourRow), signal),
    placeholderData: keepPreviousData,
  });

export const hourQuery = (plantId: string, hourStart: string) =>
  queryOptions({
    queryKey: ['plant', plantId, 'hour', hourStart],
    queryFn: ({ signal }) => getJson(`/plants/${plantId}/hours/${encodeURIComponent(hourStart)}`, HourDetail, signal),
  });

export const episodesQuery = (plantId: string, period: PeriodRange) =>
  queryOptions({
    queryKey: ['plant', plantId, 'episodes', period],
    queryFn: ({ signal }) =>
      getJson(`/plants/${plantId}/episodes${queryString({ ...period })}`, listOf(Episode), signal),
    placeholderData: keepPreviousData,
  });

const isRunning = (upload: Upload): boolean => !FINAL_UPLOAD_STATUSES.includes(upload.status);

export const uploadsQuery = (plantId: string) =>
  queryOptions({
    queryKey: ['plant', plantId, 'uploads'],
    queryFn: ({ signal }) => getJson(`/plants/${plantId}/uploads`, listOf(Upload), signal),
    refetchInterval: ({ state }) => (state.data?.items.some(isRunning) ? RUNNING_POLL_MS : false),
  });

export const uploadQuery = (uploadId: string) =>
  queryOptions({
    queryKey: ['upload', uploadId],
    queryFn: ({ signal }) => getJson(`/uploads/${uploadId}`, Upload, signal),
    refetchInterval: ({ state }) => (state.data && isRunning(state.data) ? RUNNING_POLL_MS : false),
  });

export const previewQuery = (uploadId: string) =>
  queryOptions({
    queryKey: ['upload', uploadId, 'preview'],
    queryFn: ({ signal }) => getJson(`/uploads/${uploadId}/preview`, Preview, signal),
    staleTime: Infinity, // a stored file's preview does not change
  });

export const alertsQuery = (plantId: string) =>
  queryOptions({
    queryKey: ['plant', plantId, 'alerts'],
    queryFn: ({ signal }) => getJson(`/plants/${plantId}/alerts`, Alerts, signal),
    refetchInterval: ({ state }) =>
      state.data?.runs.some((run) => run.outcome === 'pending') ? RUNNING_POLL_MS : false,
  });

export const analysisQuery = (plantId: string, analysisId: string) =>
  queryOptions({
    queryKey: ['plant', plantId, 'analysis', analysisId],
    queryFn: ({ signal }) => getJson(`/plants/${plantId}/analyses/${analysisId}`, Analysis, signal),
    refetchInterval: ({ state }) =>
      state.data && ['done', 'failed'].includes(state.data.status) ? false : RUNNING_POLL_MS,
  });

export const overviewQuery = () =>
  queryOptions({
    queryKey: ['overview'],
    queryFn: ({ signal }) => getJson('/overview?limit=200', listOf(OverviewPlant), signal),
  });

type HoursPage = { items: HourRow[]; nextCursor: string | null };
const hoursPages = (plantId: string, filter: HoursFilter, pageSize: number) =>
  infiniteQueryOptions({
    queryKey: ['plant', plantId, 'hours', 'pages', filter],
    queryFn: ({ pageParam, signal }): Promise<HoursPage> =>
      getJson(
        `/plants/${plantId}/hours${queryString({ ...filter, limit: pageSize, cursor: pageParam })}`,
        listOf(HourRow),
        signal,
      ),
    initialPageParam: undefined as string | undefined,
    getNextPageParam: (page) => page.nextCursor ?? undefined,
    placeholderData: keepPreviousData,
  });

/** The ranked list, a screenful at a time. */
export const rankedHoursQuery = (plantId: string, filter: HoursFilter) => hoursPages(plantId, filter, 24);
/** Every hour of a period, in pages as large as the API gives. */
export const allHoursQuery = (plantId: string, range: PeriodRange) =>
  hoursPages(plantId, { ...range, rank: 'excess', all: true }, 500);

export const coverageQuery = (plantId: string, period: PeriodRange) =>
  queryOptions({
    queryKey: ['plant', plantId, 'coverage', period],
    queryFn: ({ signal }) => getJson(`/plants/${plantId}/coverage${queryString({ ...period })}`, Coverage, signal),
    placeholderData: keepPreviousData,
  });

export const sensorsQuery = (plantId: string, period: PeriodRange) =>
  queryOptions({
    queryKey: ['plant', plantId, 'sensors', period],
    queryFn: ({ signal }) => getJson(`/plants/${plantId}/sensors${queryString({ ...period })}`, Sensors, signal),
    placeholderData: keepPreviousData,
  });

export const spotChecksQuery = (plantId: string) =>
  queryOptions({
    queryKey: ['plant', plantId, 'spot-checks'],
    queryFn: ({ signal }) => getJson(`/plants/${plantId}/spot-checks?limit=200`, SpotChecks, signal),
  });
