import { createHash } from 'node:crypto';
import { plainName } from './headings';
import type { FileTable } from './table';
import type { ScannedPoint } from './point-scan';
import { unitOfHeading } from './unit-text';

/** A file of a drop as it was recognised. */
export interface DropFile {
  /** File, archive member or sheet; empty where nothing names it. */
  name: string;
  head: Uint8Array;
  /** Whether the head is the whole file. */
  complete: boolean;
  table: FileTable;
  /** Points of a long table, from a scan of the whole file. */
  points: ScannedPoint[];
}

/** The files of a drop that share a heading, and what its columns go by in the drop. */
export interface DropTable {
  files: DropFile[];
  fingerprint: string;
  names: { cell: string; column: string }[];
}

/** Headings that say what a cell is but not of which point. */
const GENERIC = /^(present )?(value|reading|data|wert|messwert|valeur|valor|y|val|trend|log|column \d+)s?$/i;
/** A line above the heading that names the point. */
const POINT_LINE = /^(?:point|name|object|trend(?: name| log)?|tag|sensor|series|channel)(?: name)?\s*[:=]?\s*(.*)$/i;
/** What a program adds to a file's name: dates, times, counters, copies. */
const FILE_TAIL =
  /[\s._-]*(?:\(?\d{4}[-_.]?\d{2}(?:[-_.]?\d{2})?(?:[T_ -]?\d{2,6})?\)?|\(\d{1,3}\)|copy|export(?:ed)?|to|bis|from)$/i;

/**
 * Groups the files of a drop by heading and gives every column a name of its own in the drop: its heading's; the file's where
 * each file holds one point under a heading that does not name it; the file's before it where two headings share a name.
 */
export function dropTables(files: readonly DropFile[]): DropTable[] {
  const tables = new Map<string, DropTable>();
  const pointFiles = filesOfOnePoint(files);
  for (const file of files) {
    const point = pointFiles.get(file);
    const fingerprint = point === undefined ? file.table.fingerprint : ofPoint(file.table.fingerprint, point);
    const table = tables.get(fingerprint) ?? { files: [], fingerprint, names: [] };
    tables.set(fingerprint, table);
    table.files.push(file);
    const known = new Set(table.names.map(({ cell }) => cell));
    for (const cell of columnsOf(file)) {
      if (!known.has(cell)) table.names.push({ cell, column: point !== undefined ? point : cell });
    }
  }
  return toldApart([...tables.values()]);
}

/** Names of a file's columns that may be points: those of a wide table without its times, or the points of a long one. */
function columnsOf({ table, points }: DropFile): string[] {
  if (table.shape.kind === 'long') return points.map(({ name }) => name);
  const { status } = table.shape;
  return table.names.filter((name, cell) => !table.time.cells.includes(cell) && name !== status);
}

/** Files with one column beside the time whose heading does not name the point, and the point's name. */
function filesOfOnePoint(files: readonly DropFile[]): Map<DropFile, string> {
  const single = files.filter((file) => file.table.shape.kind === 'wide' && readable(file).length === 1);
  const found = new Map<DropFile, string>();
  for (const file of single) {
    const [column] = readable(file);
    const alike = single.filter((other) => other.table.fingerprint === file.table.fingerprint);
    const own = unitOfHeading(column!).name || column!;
    const stems = new Set(alike.map(pointNameOf));
    // The same heading in files of several names: the heading does not tell them apart, the files' names do.
    if (!GENERIC.test(plainName(own)) && stems.size < 2) continue;
    const name = pointNameOf(file);
    if (name !== '') found.set(file, name);
  }
  return found;
}

/** Columns that hold readings: all but times, further times, and empty columns. */
const readable = (file: DropFile): string[] =>
  columnsOf(file).filter((name) => {
    const cell = file.table.names.indexOf(name);
    if (file.table.time.others.includes(cell)) return false;
    return file.table.data.some(({ cells }) => (cells[cell] ?? '').trim() !== '');
  });

/** The point's name from a line above the heading, or from the file's name without what programs add to it. */
function pointNameOf({ name, table }: DropFile): string {
  for (const cells of table.preamble) {
    const filled = cells.map(plainName).filter((cell) => cell !== '');
    const [first, second] = filled;
    const said = first === undefined ? null : POINT_LINE.exec(first);
    if (!said) continue;
    const value = said[1] !== '' ? said[1]! : (second ?? '');
    if (value !== '') return plainName(value);
  }
  return stemOf(name);
}

/** A file's name without folders, ending, and the dates and counters that programs add. */
function stemOf(name: string): string {
  let stem = (name.split('/').at(-1) ?? '').replace(/\.[a-z0-9]{1,5}$/i, '').replace(/\.(csv|txt)$/i, '');
  for (;;) {
    const shorter = stem.replace(FILE_TAIL, '');
    if (shorter === stem || shorter === '') return plainName(stem);
    stem = shorter;
  }
}

const ofPoint = (fingerprint: string, point: string): string =>
  createHash('sha256')
    .update(`${fingerprint}\u001f${point.normalize('NFKC').toLowerCase()}`)
    .digest('hex');

/** Puts the file's name before a column name that an earlier table of the drop has already. */
function toldApart(tables: DropTable[]): DropTable[] {
  const taken = new Set<string>();
  for (const table of tables) {
    const own = new Set<string>();
    for (const name of table.names) {
      if (taken.has(name.column)) {
        const stem = stemOf(table.files[0]!.name) || 'table';
        const base = `${stem}: ${name.column}`;
        let unique = base;
        for (let n = 2; taken.has(unique) || own.has(unique); n++) unique = `${base} (${n})`;
        name.column = unique;
      }
      own.add(name.column);
    }
    for (const column of own) taken.add(column);
  }
  return tables;
}
