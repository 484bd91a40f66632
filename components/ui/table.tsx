import type { ComponentProps, ReactNode } from 'react';
import { TableFrame } from './table-frame';

export interface TableProps extends ComponentProps<'table'> {
  /** Names the table; hidden from sight unless `showCaption`, since a section's heading usually says it. */
  caption: ReactNode;
  showCaption?: boolean;
  /** Tighter rows: 4 px in place of 5. */
  dense?: boolean;
  /** Stronger row lines, between unlike things. */
  ruled?: boolean;
  /** Rows answer the pointer. */
  hover?: boolean;
  /** No scrolling frame: a table that is never too wide, or that stands hidden for readers. */
  bare?: boolean;
}

/** A table with the house's lines. Wide ones scroll inside their own frame, never the page. */
export function Table(props: TableProps) {
  const { caption, showCaption, dense, ruled, hover, bare = false, className = '', children, ...rest } = props;
  const table = (
    <table className={`table ${className}`} data-dense={dense} data-ruled={ruled} data-hover={hover} {...rest}>
      <caption className={showCaption ? 'mb-2' : 'sr-only'}>{caption}</caption>
      {children}
    </table>
  );
  return bare ? table : <TableFrame label={typeof caption === 'string' ? caption : undefined}>{table}</TableFrame>;
}

export interface HeadCellProps extends ComponentProps<'th'> {
  numeric?: boolean;
  /** The column the rows are ranked by: bold. */
  ranked?: boolean;
}

export function HeadCell({ numeric, ranked, ...rest }: HeadCellProps) {
  return <th scope="col" data-numeric={numeric} data-ranked={ranked} {...rest} />;
}

export function RowHead({ numeric, ...rest }: ComponentProps<'th'> & { numeric?: boolean }) {
  return <th scope="row" data-numeric={numeric} {...rest} />;
}

export function Cell({ numeric, ...rest }: ComponentProps<'td'> & { numeric?: boolean }) {
  return <td data-numeric={numeric} {...rest} />;
}
