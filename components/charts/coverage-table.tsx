import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { formatPercent } from '@/lib/client/format';
import type { CoverageRow } from './coverage-calendar';
import { coverageShare, dayName } from './coverage-shares';

export interface CoverageTableProps {
  rows: readonly CoverageRow[];
  days: readonly string[];
  weeks: readonly string[];
}

/** The calendar by week, for readers who cannot see the bars. */
export function CoverageTable({ rows, days, weeks }: CoverageTableProps) {
  const starts = weeks.map((week) => days.indexOf(week));
  return (
    <div className="sr-only">
      <Table bare caption="Coverage: share of each week that arrived and passed, by point">
        <thead>
          <tr>
            <HeadCell>point</HeadCell>
            {weeks.map((week) => (
              <HeadCell key={week}>week of {dayName(week)}</HeadCell>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={row.key}>
              <RowHead>{row.label}</RowHead>
              {weeks.map((week, index) => {
                const part = coverageShare(row.days.slice(starts[index] ?? 0, starts[index + 1] ?? days.length));
                return <Cell key={week}>{part === null ? 'none' : `${formatPercent(part)} %`}</Cell>;
              })}
            </tr>
          ))}
        </tbody>
      </Table>
    </div>
  );
}
