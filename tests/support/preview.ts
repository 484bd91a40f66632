import type { Preview } from '@/lib/schemas/upload';

type Table = Preview['tables'][number];
type Column = Preview['columns'][number];

/** A table of a preview: a column a point, month first, five minutes. */
export const previewTable = (part: Partial<Table> = {}): Table => ({
  files: ['week.csv'],
  shape: { kind: 'wide', status: null },
  dialect: { encoding: 'utf-8', delimiter: ',', decimal: '.', headerRow: 1, unitRow: null, firstDataRow: 2 },
  timestamp: { columns: ['Timestamp'], form: 'month/day/year' },
  fingerprint: 'f',
  names: [],
  stepMinutes: 5,
  rows: [
    ['07/08/2026 00:05', '44.1'],
    ['07/08/2026 00:10', '44.2'],
  ],
  firstRows: 288,
  ...part,
});

export const previewColumn = (column: string, part: Partial<Column> = {}): Column => ({
  column,
  role: 'primarySupplyTemp',
  unit: 'degF',
  unitIndex: null,
  confidence: 0.9,
  reason: 'Name holds it.',
  samples: [1, 2, 3],
  low: 1,
  high: 3,
  table: 0,
  ...part,
});

export function preview(part: Partial<Preview> = {}): Preview {
  const tables = part.tables ?? [previewTable()];
  const [first = previewTable()] = tables;
  const { dialect, timestamp, rows, firstRows, stepMinutes } = first;
  return {
    tables,
    dialect,
    timestamp,
    timeZone: 'America/Denver',
    stepMinutes,
    columns: [previewColumn('CHWS')],
    rows,
    firstRows,
    problems: [],
    ...part,
  };
}
