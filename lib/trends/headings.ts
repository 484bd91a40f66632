import { createHash } from 'node:crypto';
import { TrendError, type ReadPlan } from './types';

const plain = (text: string) => text.trim().replace(/\s+/g, ' ');

/**
 * The names columns go by: the heading's cells without outer blanks, `column 3` where a heading is empty, and
 * ` (2)` behind a name that was there before, so that every name means one column. Empty cells at the end are dropped.
 */
export function columnNames(heading: readonly string[]): string[] {
  const last = heading.findLastIndex((cell) => cell.trim() !== '');
  const taken = new Set<string>();
  return heading.slice(0, last + 1).map((cell, i) => {
    const name = plain(cell) || `column ${i + 1}`;
    let unique = name;
    for (let n = 2; taken.has(unique); n++) unique = `${name} (${n})`;
    taken.add(unique);
    return unique;
  });
}

/** SHA-256 of names and units, whatever their case and spacing: files with equal prints can share a mapping. */
export function headingFingerprint(names: readonly string[], units: readonly string[] | null): string {
  const parts = [...names, '', ...(units ?? [])].map((text) => plain(text).normalize('NFKC').toLowerCase());
  return createHash('sha256').update(parts.join('\u001f'), 'utf8').digest('hex');
}

/** Where in a row the plan's cells stand. */
export interface ColumnPlaces {
  /** One or two indexes of the time. */
  time: number[];
  /** For each plan column that is read, its index in the row and in the plan. */
  read: { cell: number; plan: number }[];
  /** Cells of the heading. */
  width: number;
  /** The heading's text over the time, to know the heading when it comes again. */
  timeHeading: string;
}

/**
 * Finds the plan's columns in a heading.
 *
 * Throws  TrendError `no-column` when one is not there.
 */
export function placeColumns(heading: readonly string[], plan: ReadPlan): ColumnPlaces {
  const names = columnNames(heading);
  const place = (column: string) => {
    const cell = names.indexOf(plain(column));
    if (cell === -1) {
      const what = `Row ${plan.dialect.headerRow} has no column "${column}".`;
      throw new TrendError('no-column', `${what} Map the columns of this file anew.`, plan.dialect.headerRow);
    }
    return cell;
  };
  const time = plan.timestamp.columns.map(place);
  const read = plan.columns.flatMap(({ column, role }, i) =>
    role === 'ignore' ? [] : [{ cell: place(column), plan: i }],
  );
  return { time, read, width: names.length, timeHeading: heading[time[0]!]?.trim() ?? '' };
}
