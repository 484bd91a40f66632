import type { Preview } from '../schemas/upload';
import type { TimestampForm } from '../trends/types';

type Table = Preview['tables'][number];

const DELIMITERS: Readonly<Record<string, string>> = { ',': 'comma', ';': 'semicolon', '\t': 'tab', '|': 'bar' };
const ENCODINGS: Readonly<Record<string, string>> = {
  'utf-8': 'UTF-8',
  'utf-16le': 'UTF-16, low byte first',
  'utf-16be': 'UTF-16, high byte first',
  'windows-1252': 'Windows-1252',
};

/** How the bytes became rows: `comma, UTF-8, decimal point, 3 lines before the heading`. */
export function dialectWords({ dialect }: Pick<Table, 'dialect'>): string {
  const { headerRow, upperHeaderRow, unitRow } = dialect;
  const firstHeading = upperHeaderRow ?? headerRow;
  const before = firstHeading - 1;
  return [
    DELIMITERS[dialect.delimiter] ?? dialect.delimiter,
    ENCODINGS[dialect.encoding] ?? dialect.encoding,
    `decimal ${dialect.decimal === ',' ? 'comma' : 'point'}`,
    ...(headerRow === 0 ? ['no heading'] : []),
    ...(upperHeaderRow == null ? [] : ['a heading of two rows']),
    ...(unitRow === null ? [] : [`units in row ${unitRow}`]),
    ...(before > 0 ? [`${before} ${before === 1 ? 'line' : 'lines'} before the heading`] : []),
  ].join(', ');
}

/** What its cells are: `a column a point`, or `a row a reading: point in "Name", value in "Value"`. */
export function shapeWords({ shape }: Pick<Table, 'shape'>): string {
  if (shape.kind === 'wide') return shape.status ? `a column a point, status in “${shape.status}”` : 'a column a point';
  const parts = [
    `point in “${shape.point}”`,
    `value in “${shape.value}”`,
    ...(shape.status === null ? [] : [`status in “${shape.status}”`]),
    ...(shape.unit === null ? [] : [`unit in “${shape.unit}”`]),
  ];
  return `a row a reading: ${parts.join(', ')}`;
}

/** The files of a table by name, the first few of many: `a.csv, b.csv and 5 more`. */
export function filesWords(names: readonly string[], most = 3): string {
  const shown = names.slice(0, names.length === most + 1 ? most + 1 : most);
  const more = names.length - shown.length;
  return more === 0 ? shown.join(', ') : `${shown.join(', ')} and ${more} more`;
}

/** Forms of a time as a person would describe them. */
export const FORM_WORDS: Readonly<Record<TimestampForm, string>> = {
  iso: 'year-month-day (ISO 8601)',
  'month/day/year': 'month, day, year',
  'day/month/year': 'day, month, year',
  'year/month/day': 'year, month, day',
  'month/day': 'month, day, no year',
  'day/month': 'day, month, no year',
  'epoch-s': 'seconds since 1970 (UTC)',
  'epoch-ms': 'milliseconds since 1970 (UTC)',
  'spreadsheet-serial': 'a spreadsheet’s day number',
};
