import type { ExportShape } from './gallery';

export const TABLE_SHAPES: readonly ExportShape[] = [
  { id: 'wide', shape: 'One time column, a column a point', example: '07/20/2026 06:00,43.9,53.6,43.9,54.1,862,823' },
  {
    id: 'long',
    shape: 'A row a reading, with its status',
    example: 'Timestamp,Point,Value,Status\n07/20/2026 06:00,CHW Primary Supply Temp (degF),43.9,ok',
  },
  {
    id: 'long-units',
    shape: 'A row a reading, with its unit',
    example: 'Timestamp,Point,Value,Unit\n07/20/2026 06:00,CHW Primary Supply Temp,43.9,degF',
  },
  {
    id: 'point-files',
    shape: 'One point a file',
    example: 'Timestamp,Value (gpm)\n07/20/2026 06:00,862',
    note: 'The points go by the files’ names, or by a line above the heading.',
  },
  {
    id: 'several-files',
    shape: 'Several files of different columns in one drop',
    example: '07/20/2026 06:00,43.9,53.6,43.9,54.1,862,823\n2026-07-20T06:00:00,1,0',
    note: 'Their points are judged together.',
  },
  {
    id: 'split-time',
    shape: 'Date and time in two columns',
    example: '07/20/2026,06:00:00,43.9,53.6',
  },
  { id: 'preamble', shape: 'Lines above the heading', example: 'Site: Pellmarsh Works\nInterval: 5 minutes' },
  { id: 'unit-row-after', shape: 'A row of units below the heading', example: ',degF,degF,degF,degF,gpm,gpm' },
  { id: 'unit-row-before', shape: 'A row of units above the heading', example: ',degF,degF,degF,degF,gpm,gpm' },
  {
    id: 'two-line-heading',
    shape: 'A heading of two lines',
    example: ',CHW Primary,,CHW Secondary,\nTimestamp,Supply Temp (degF),Return Temp (degF)',
    note: 'The groups above are joined to the names below.',
  },
  { id: 'footer', shape: 'Lines below the data', example: '******** End of report ********\nRows: 48' },
  {
    id: 'heading-again',
    shape: 'The heading again among the rows',
    example: 'Timestamp,CHW Primary Supply Temp (degF)',
  },
  { id: 'newest-first', shape: 'Newest row first', example: '07/20/2026 09:55,43.8' },
];

export const TEXT_SHAPES: readonly ExportShape[] = [
  { id: 'comma', shape: 'Comma-separated', example: '07/20/2026 06:00,43.9,53.6,43.9,54.1,862,823,1,0' },
  { id: 'semicolon', shape: 'Semicolon-separated', example: '07/20/2026 06:00;43.9;53.6;43.9;54.1;862;823' },
  { id: 'tab', shape: 'Tab-separated', example: '07/20/2026 06:00\t43.9\t53.6\t43.9\t54.1\t862\t823' },
  { id: 'pipe', shape: 'Separated by upright strokes', example: '07/20/2026 06:00|43.9|53.6|43.9|54.1|862|823' },
  { id: 'decimal-comma', shape: 'Decimal comma', example: '07/20/2026 06:00;43,9;53,6;43,9;54,1;862;823' },
  {
    id: 'decimal-comma-quoted',
    shape: 'Decimal comma in quoted, comma-separated cells',
    example: '"07/20/2026 06:00","43,9","53,6"',
  },
  { id: 'thousands', shape: 'Thousands separated by commas', example: '43.9,57.3,46.8,57.3,864,"1,102"' },
  {
    id: 'thousands-points',
    shape: 'Thousands separated by points, decimal comma',
    example: '07/20/2026 06:00;43,9;53,6;43,9;54,1;3.263,0;3.115,4',
  },
  {
    id: 'quoted-newlines',
    shape: 'Line ends inside quoted cells',
    example: 'Timestamp,"CHW Primary Supply Temp\n(degF)","CHW Primary Return Temp',
  },
  { id: 'utf-8', shape: 'UTF-8', example: 'Timestamp,CHW Primary Supply Temp (°F)' },
  { id: 'utf-8-mark', shape: 'UTF-8 with a byte-order mark', example: 'Timestamp,CHW Primary Supply Temp (°F)' },
  { id: 'utf-16le', shape: 'UTF-16, little endian', example: '07/20/2026 06:00\t43.9' },
  { id: 'utf-16be', shape: 'UTF-16, big endian', example: '07/20/2026 06:00\t43.9' },
  {
    id: 'windows-1252',
    shape: 'Windows-1252',
    example: 'Trend of “Pellmarsh”\nTimestamp,CHW – Primary Supply Temp (°F)',
  },
  { id: 'latin-1', shape: 'Latin-1', example: 'Datum & Uhrzeit;CHW Primary Supply Temp (°C)' },
  { id: 'line-ends-cr', shape: 'Lines that end with a carriage return alone', example: '07/20/2026 06:00,43.9,53.6' },
  { id: 'line-ends-lf', shape: 'Lines that end with a line feed alone', example: '07/20/2026 06:00,43.9,53.6' },
  { id: 'zip', shape: 'A zip archive of several files', example: '07/20/2026 06:00;862;823' },
  { id: 'gzip', shape: 'Gzip', example: '07/20/2026 06:00,43.9,53.6' },
  { id: 'workbook', shape: 'A workbook (XLSX)', example: '2026-07-20 06:00:00,43.9,53.6' },
  {
    id: 'workbook-sheets',
    shape: 'A workbook of several sheets',
    example: '2026-07-20 06:00:00,43.9,53.6\n2026-07-20 06:00:00,862,823',
    note: 'Hidden sheets are left out, and said.',
  },
];
