import { createHash } from 'node:crypto';
import { TrendError, type ReadPlan } from './types';

/** A name without outer blanks and with single ones inside. */
export const plainName = (text: string): string => text.trim().replace(/\s+/g, ' ');

/**
 * The names columns go by: the heading's cells without outer blanks, `column 3` where a heading is empty, and
 * ` (2)` behind a name that was there before, so that every name means one column. Empty cells at the end are dropped.
 */
export function columnNames(heading: readonly string[]): string[] {
  const named = heading.findLastIndex((cell) => cell.trim() !== '');
  // A file without a heading: its columns go by their numbers.
  const last = named === -1 ? heading.length - 1 : named;
  const taken = new Set<string>();
  return heading.slice(0, last + 1).map((cell, i) => {
    const name = plainName(cell) || `column ${i + 1}`;
    let unique = name;
    for (let n = 2; taken.has(unique); n++) unique = `${name} (${n})`;
    taken.add(unique);
    return unique;
  });
}

/**
 * Two heading rows as one: a group's name stands over its first column and reaches to the next. Nothing reaches from the
 * first column, which is the time's.
 */
export function joinedHeading(upper: readonly string[], lower: readonly string[]): readonly string[] {
  if (upper.length === 0) return lower;
  let group = '';
  return lower.map((cell, i) => {
    const own = plainName(upper[i] ?? '');
    if (i === 0) return plainName(`${own} ${cell}`);
    if (own !== '') group = own;
    return plainName(`${group} ${cell}`);
  });
}

/** SHA-256 of names and units, whatever their case and spacing: files with equal prints can share a mapping. */
export function headingFingerprint(names: readonly string[], units: readonly string[] | null): string {
  const parts = [...names, '', ...(units ?? [])].map((text) => plainName(text).normalize('NFKC').toLowerCase());
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
    const cell = names.indexOf(plainName(column));
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
