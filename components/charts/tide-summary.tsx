'use client';
import { useFormat } from '@/components/shell/units-context';
import { formatHoursMinutes } from '@/lib/client/format';
import type { TimeColumn } from './time-columns';
import type { TideCell } from './tide-table';

export interface TideSummaryProps {
  columns: readonly TimeColumn[];
  cells: readonly TideCell[];
  /** Width of the plot above: a column cut off by the range's ends to less than its figures shows none. */
  widthPx: number;
}

const ROOM_PX = 34;

/** The tide table: numbers under the strip, on the strip's own columns. */
export function TideSummary({ columns, cells, widthPx }: TideSummaryProps) {
  const print = useFormat();
  const shares = columns.map((column) => `minmax(0, ${column.endMs - column.startMs}fr)`).join(' ');
  const lengthMs = (columns.at(-1)?.endMs ?? 0) - (columns[0]?.startMs ?? 0);
  const tight = (column: TimeColumn | undefined) =>
    column !== undefined && ((column.endMs - column.startMs) / lengthMs) * widthPx < ROOM_PX;
  const rows: readonly { name: string; figure: (cell: TideCell) => string }[] = [
    {
      name: 'reverse, h:min',
      figure: (cell) =>
        cell.reverseMinutes === null ? '-' : cell.reverseMinutes === 0 ? '·' : formatHoursMinutes(cell.reverseMinutes),
    },
    {
      name: `largest, ${print.unit('flow')}`,
      figure: (cell) => (cell.reverseMinutes === 0 ? '·' : print.bypass(cell.largestGpm)),
    },
    { name: `warmest, ${print.unit('temperature')}`, figure: (cell) => print.temperature(cell.warmestSupplyF) },
  ];
  const grid = { gridTemplateColumns: `64px ${shares}` };
  return (
    <div role="table" aria-label="Tide table" className="mr-[124px] border-y border-ink py-1 text-small">
      <div role="row" className="sr-only">
        <span role="columnheader">per column</span>
        {columns.map((column) => (
          <span key={column.startMs} role="columnheader">
            {column.label}
          </span>
        ))}
      </div>
      {rows.map(({ name, figure }) => (
        <div key={name} role="row" className="grid" style={grid}>
          <span role="rowheader" className="narrower text-micro leading-(--t-small-line) whitespace-nowrap text-ink-2">
            {name}
          </span>
          {cells.map((cell, index) => (
            <span
              key={columns[index]?.startMs ?? index}
              role="cell"
              className={`border-l border-rule pr-1.5 text-end last:border-r ${cell.heavy ? 'font-semibold' : ''}`}
            >
              {tight(columns[index]) ? <span className="sr-only">{figure(cell)}</span> : figure(cell)}
            </span>
          ))}
        </div>
      ))}
    </div>
  );
}
