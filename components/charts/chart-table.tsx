import type { ReactNode } from 'react';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';

export interface ChartTableProps {
  caption: string;
  head: readonly { label: ReactNode; numeric?: boolean }[];
  /** First cell of a row names it. */
  rows: readonly { key: string | number; cells: readonly ReactNode[] }[];
}

/** The numbers of a chart in its place: scrolls inside its own frame, which the keyboard can reach. */
export function ChartTable({ caption, head, rows }: ChartTableProps) {
  return (
    <div tabIndex={0} role="region" aria-label={caption} className="max-h-105 overflow-auto border-y border-rule">
      <Table bare caption={caption} dense className="narrow">
        <thead className="sticky top-0 bg-paper">
          <tr>
            {head.map(({ label, numeric }, index) => (
              <HeadCell key={index} numeric={numeric} className="pt-2">
                {label}
              </HeadCell>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map(({ key, cells }) => (
            <tr key={key}>
              {cells.map((cell, index) =>
                index === 0 ? (
                  <RowHead key={index} className="whitespace-nowrap">
                    {cell}
                  </RowHead>
                ) : (
                  <Cell key={index} numeric={head[index]?.numeric}>
                    {cell}
                  </Cell>
                ),
              )}
            </tr>
          ))}
        </tbody>
      </Table>
    </div>
  );
}
