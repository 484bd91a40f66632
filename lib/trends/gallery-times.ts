import type { ExportShape } from './gallery';

export const TIME_SHAPES: readonly ExportShape[] = [
  { id: 'iso', shape: 'ISO 8601', example: '2026-07-20T06:00:00' },
  { id: 'iso-offset', shape: 'ISO 8601 with its distance from UTC', example: '2026-07-20T06:00:00-04:00' },
  { id: 'iso-utc', shape: 'ISO 8601 in UTC', example: '2026-07-20T10:00:00.000Z' },
  { id: 'year-first', shape: 'Year first with strokes', example: '2026/07/20 06:00' },
  { id: 'month-first', shape: 'Month first', example: '07/20/2026 06:00' },
  { id: 'day-first', shape: 'Day first', example: '20/07/2026 06:00' },
  {
    id: 'day-or-month',
    shape: 'Day or month first, and nothing that tells',
    example: '07/08/2026 06:00',
    note: 'The plant’s country decides what is suggested.',
    asks: 'whether the month or the day comes first',
  },
  { id: 'named-month', shape: 'Month by name', example: '20-Jul-2026 06:00:00' },
  { id: '12-hour', shape: 'AM and PM', example: '7/20/2026 10:00:00 AM\n7/20/2026 1:55:00 PM' },
  {
    id: 'hour-24',
    shape: 'Midnight as hour 24',
    example: '07/20/2026 24:00',
    note: 'Taken for the end of its interval, and said.',
  },
  {
    id: 'no-year',
    shape: 'No year',
    example: '07/20  06:00:00',
    note: 'The latest year that puts no row in the future, and said.',
  },
  { id: 'two-digit-year', shape: 'Year of two digits', example: '07/20/26 06:00' },
  { id: 'time-only', shape: 'The date once a day, then times alone', example: '07/20/2026 22:00\n22:05' },
  { id: 'epoch-s', shape: 'Seconds since 1970', example: '1784541600' },
  { id: 'epoch-ms', shape: 'Milliseconds since 1970', example: '1784541600000' },
  { id: 'serial', shape: 'Spreadsheet day numbers', example: '46223.25000000' },
  {
    id: 'repeated-hour',
    shape: 'The hour that comes twice in autumn',
    example: '2026-11-01 01:00',
    note: 'The passes are told apart by the order of the rows.',
  },
  { id: 'missing-hour', shape: 'The hour that is missing in spring', example: '2026-03-08 01:55\n2026-03-08 03:00' },
  {
    id: 'interval-end',
    shape: 'Times that end their interval',
    example: 'Interval End',
    note: 'Told from the heading, moved one step back, and said.',
  },
];
