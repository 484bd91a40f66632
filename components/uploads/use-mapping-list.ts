import { useState } from 'react';
import type { Preview } from '@/lib/schemas/upload';
import { isOpen, roleLabel, type ColumnAnswer } from './mapping-form';

/** Rows in the page at once: each has two lists of choices, and a long file can have thousands of points. */
export const ROWS_A_PAGE = 40;

export interface ListedRow {
  /** Index into the preview's columns. */
  index: number;
  table: number;
}

export interface MappingList {
  rows: readonly ListedRow[];
  /** Rows that pass the filter. */
  matching: number;
  page: number;
  pages: number;
  setPage: (page: number) => void;
  filter: string;
  setFilter: (text: string) => void;
  onlyOpen: boolean;
  setOnlyOpen: (only: boolean) => void;
  /** Columns answered by earlier files: folded away while there is something new beside them. */
  known: number;
  showsKnown: boolean;
  setShowsKnown: (show: boolean) => void;
}

/** Which rows are listed: filtered, without what earlier files have settled, a page at a time. */
export function useMappingList(
  preview: Preview,
  answers: readonly ColumnAnswer[],
  openFirst: boolean,
  foldKnown: boolean,
): MappingList {
  const [filter, setFilterText] = useState('');
  // The rows undecided when the filter was set: one that gets its answer stays in view until the list is asked for again.
  const [wasOpen, setWasOpen] = useState<ReadonlySet<number> | null>(null);
  const [showsKnown, setShowsKnown] = useState(!foldKnown);
  const [wantedPage, setPage] = useState(0);
  const isKnown = (index: number) => foldKnown && preview.columns[index]?.known === true;
  const words = filter.trim().toLowerCase();
  const listed = preview.columns.flatMap((column, index): ListedRow[] => {
    const answer = answers[index];
    if (answer === undefined || (wasOpen !== null && !wasOpen.has(index))) return [];
    if (isKnown(index) && !showsKnown && words === '' && !isOpen(answer)) return [];
    const text = `${column.column} ${roleLabel(answer.role)}`.toLowerCase();
    return words === '' || text.includes(words) ? [{ index, table: column.table ?? 0 }] : [];
  });
  const unsure = (index: number) => Number((preview.columns[index]?.confidence ?? 1) < 0.5);
  listed.sort((a, b) => a.table - b.table || (openFirst ? unsure(b.index) - unsure(a.index) : 0) || a.index - b.index);
  const pages = Math.max(1, Math.ceil(listed.length / ROWS_A_PAGE));
  const page = Math.min(wantedPage, pages - 1);
  return {
    rows: listed.slice(page * ROWS_A_PAGE, (page + 1) * ROWS_A_PAGE),
    matching: listed.length,
    page,
    pages,
    setPage,
    filter,
    setFilter: (text) => {
      setFilterText(text);
      setPage(0);
    },
    onlyOpen: wasOpen !== null,
    setOnlyOpen: (only) => {
      setPage(0);
      setWasOpen(only ? new Set(answers.flatMap((answer, index) => (isOpen(answer) ? [index] : []))) : null);
    },
    known: preview.columns.filter((_, index) => isKnown(index)).length,
    showsKnown,
    setShowsKnown,
  };
}
