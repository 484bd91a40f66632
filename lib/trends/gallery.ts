import { TABLE_SHAPES, TEXT_SHAPES } from './gallery-tables';
import { TIME_SHAPES } from './gallery-times';
import { UNIT_SHAPES, VALUE_SHAPES } from './gallery-values';

/** A shape of export that is read. Its fixture in fixtures/trends has the same id; a test reads it and holds all of this to it. */
export interface ExportShape {
  id: string;
  /** In words. */
  shape: string;
  /** Pieces of the fixture as they stand there, a line each. */
  example: string;
  /** What it is read as, where that is not plain. */
  note?: string;
  /** What a person decides beside confirming; left out where nothing. */
  asks?: string;
}

export interface ExportGroup {
  id: string;
  title: string;
  lead: string;
  shapes: readonly ExportShape[];
}

/** What the page and the documentation list and the tests go through: one list, so that they cannot drift apart. */
export const EXPORT_GROUPS: readonly ExportGroup[] = [
  {
    id: 'tables',
    title: 'Tables and files',
    lead: 'Drop one file, several, or an archive of them: files that share a heading are read as one.',
    shapes: TABLE_SHAPES,
  },
  {
    id: 'text',
    title: 'Text and packing',
    lead: 'Delimiter, decimal sign and encoding are told from the file, never from a setting.',
    shapes: TEXT_SHAPES,
  },
  {
    id: 'times',
    title: 'Times',
    lead: 'The form is told from the whole column. Local times follow the plant’s zone through its clock changes.',
    shapes: TIME_SHAPES,
  },
  {
    id: 'values',
    title: 'Values and rows',
    lead: 'What is no reading is missing, counted and said with its row; it is never averaged in and never filled.',
    shapes: VALUE_SHAPES,
  },
  {
    id: 'units',
    title: 'Units',
    lead: 'Read from the heading, a row of units, beside the value or from the values; the suggestion says from which.',
    shapes: UNIT_SHAPES,
  },
];

export const EXPORT_SHAPES: readonly ExportShape[] = EXPORT_GROUPS.flatMap(({ shapes }) => shapes);
