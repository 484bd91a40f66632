import { z } from 'zod';
import { Analysis } from '../../schemas/alert';
import { listOf, Paging, PlantParams, UploadParams } from '../../schemas/common';
import {
  AnalysisParams,
  AnalysisStarted,
  Coverage,
  CoverageQuery,
  DaysQuery,
  EpisodesQuery,
  HourQuery,
  StartAnalysis,
  TideQuery,
  UploadAccepted,
  UploadQuery,
} from '../../schemas/data-requests';
import {
  Episode,
  HourDetail,
  HourParams,
  HourRow,
  HoursQuery,
  IntervalRow,
  IntervalsQuery,
  PlantDay,
  Series,
  SeriesQuery,
  Tide,
} from '../../schemas/results';
import { ConfirmMapping, Preview, Upload } from '../../schemas/upload';
import { named, type Operation } from './describe';

const uploads = { tag: 'Uploads' } as const;
const data = { tag: 'Results' } as const;
const EVERY_ROLE = 'every role; scopes read and manage';
const file = z.string().meta({ format: 'binary' });
const csv = { 'text/csv': { schema: z.string() } };
const UploadDocument = named('Upload', Upload);
const HourDocument = named('Hour', HourRow);

export const UPLOAD_OPERATIONS: readonly Operation[] = [
  {
    ...uploads,
    method: 'get',
    path: '/plants/{plantId}/uploads',
    summary: 'The plant’s uploads, newest first; a token of scope ingest sees its own.',
    who: 'every role; every scope',
    params: PlantParams,
    query: Paging,
    answers: { 200: { description: 'A page of uploads.', schema: listOf(UploadDocument) } },
  },
  {
    ...uploads,
    method: 'post',
    path: '/plants/{plantId}/uploads',
    summary:
      'Send a file, or several of one drop in one form. The body streams; gzip is unpacked. A raw body takes its name from `filename`.',
    who: 'owner, engineer; scopes ingest and manage',
    params: PlantParams,
    query: UploadQuery,
    bodyContent: {
      'multipart/form-data': { schema: z.object({ file: z.array(file) }) },
      'text/csv': { schema: z.string() },
      'text/plain': { schema: z.string() },
      'application/gzip': { schema: file },
      'application/octet-stream': { schema: file },
    },
    idempotent: true,
    answers: { 202: { description: 'Received; its reading has been enqueued.', schema: UploadAccepted } },
  },
  {
    ...uploads,
    method: 'get',
    path: '/uploads/{uploadId}',
    summary: 'An upload: how far it has come, and what was met in it.',
    who: 'every role; every scope',
    params: UploadParams,
    answers: { 200: { description: 'The upload.', schema: UploadDocument } },
  },
  {
    ...uploads,
    method: 'delete',
    path: '/uploads/{uploadId}',
    summary: 'Take the file’s samples out again; the days it touched are analysed again.',
    who: 'owner, engineer; scope manage',
    params: UploadParams,
    answers: { 204: { description: 'It no longer counts.' } },
  },
  {
    ...uploads,
    method: 'get',
    path: '/uploads/{uploadId}/preview',
    summary: 'What was recognised in the file, and the suggestion for each column.',
    who: 'owner, engineer; scopes ingest and manage',
    params: UploadParams,
    answers: { 200: { description: 'The preview.', schema: named('Preview', Preview) } },
    refusals: [409],
  },
  {
    ...uploads,
    method: 'put',
    path: '/uploads/{uploadId}/mapping',
    summary: 'Confirm how the columns are read; the import goes on. Takes the shape of the preview.',
    who: 'owner, engineer; scopes ingest and manage',
    params: UploadParams,
    body: named('ConfirmMapping', ConfirmMapping),
    answers: { 202: { description: 'Confirmed.', schema: UploadAccepted } },
    refusals: [409, 422],
  },
];

export const DATA_OPERATIONS: readonly Operation[] = [
  {
    ...data,
    method: 'post',
    path: '/plants/{plantId}/analyses',
    summary: 'Analyse stored samples again with today’s settings.',
    who: 'owner, engineer; scope manage',
    params: PlantParams,
    body: StartAnalysis,
    idempotent: true,
    answers: { 202: { description: 'Begun.', schema: AnalysisStarted } },
  },
  {
    ...data,
    method: 'get',
    path: '/plants/{plantId}/analyses/{analysisId}',
    summary: 'How far an analysis has come.',
    who: EVERY_ROLE,
    params: AnalysisParams,
    answers: { 200: { description: 'The analysis.', schema: named('Analysis', Analysis) } },
  },
  {
    ...data,
    method: 'get',
    path: '/plants/{plantId}/tide',
    summary: 'The tide strip: bypass flow thinned to bars that follow the plant’s clock.',
    who: EVERY_ROLE,
    params: PlantParams,
    query: TideQuery,
    conditional: true,
    answers: { 200: { description: 'The bars.', schema: named('Tide', Tide) } },
  },
  {
    ...data,
    method: 'get',
    path: '/plants/{plantId}/series',
    summary:
      'Chart data of point roles (primaryFlow, unitFlow:2) and results (bypassFlowGpm), thinned to a width; missing is null.',
    who: EVERY_ROLE,
    params: PlantParams,
    query: SeriesQuery,
    conditional: true,
    answers: { 200: { description: 'The series.', schema: named('Series', Series) } },
  },
  {
    ...data,
    method: 'get',
    path: '/plants/{plantId}/intervals',
    summary: 'One row an interval. CSV is not paginated and streams.',
    who: EVERY_ROLE,
    params: PlantParams,
    query: IntervalsQuery,
    conditional: true,
    answers: {
      200: {
        description: 'A page of intervals, or the file.',
        content: { 'application/json': { schema: listOf(named('Interval', IntervalRow)) }, ...csv },
      },
    },
  },
  {
    ...data,
    method: 'get',
    path: '/plants/{plantId}/hours',
    summary: 'The low delta-T hours, worst first; with all=true every hour by time. Files are not paginated.',
    who: EVERY_ROLE,
    params: PlantParams,
    query: HoursQuery,
    conditional: true,
    answers: {
      200: {
        description: 'A page of hours, or the file.',
        content: {
          'application/json': { schema: listOf(HourDocument) },
          ...csv,
          'application/vnd.openxmlformats-officedocument.spreadsheetml.sheet': { schema: file },
        },
      },
    },
  },
  {
    ...data,
    method: 'get',
    path: '/plants/{plantId}/hours/{hourStart}',
    summary: 'One hour: tee sheet, ledger and evidence. `from` and `to` say among which hours it is ranked.',
    who: EVERY_ROLE,
    params: HourParams,
    query: HourQuery,
    conditional: true,
    answers: { 200: { description: 'The hour.', schema: named('HourDetail', HourDetail) } },
  },
  {
    ...data,
    method: 'get',
    path: '/plants/{plantId}/days',
    summary: 'Sums of the local days that a period touches.',
    who: EVERY_ROLE,
    params: PlantParams,
    query: DaysQuery,
    conditional: true,
    answers: { 200: { description: 'A page of days.', schema: listOf(named('PlantDay', PlantDay)) } },
  },
  {
    ...data,
    method: 'get',
    path: '/plants/{plantId}/episodes',
    summary: 'Runs of hours with one cause that touch a period, the newest first.',
    who: EVERY_ROLE,
    params: PlantParams,
    query: EpisodesQuery,
    answers: { 200: { description: 'A page of episodes.', schema: listOf(named('Episode', Episode)) } },
  },
  {
    ...data,
    method: 'get',
    path: '/plants/{plantId}/coverage',
    summary: 'How much of each local day arrived, point by point.',
    who: EVERY_ROLE,
    params: PlantParams,
    query: CoverageQuery,
    answers: { 200: { description: 'The shares.', schema: named('Coverage', Coverage) } },
  },
];
