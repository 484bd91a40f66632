import { recogniseTable, type NumberedRow } from './dialect';
import { detectEncoding, TextStream } from './encoding';
import { columnNames, headingFingerprint } from './headings';
import { StepCounter } from './step';
import { shapeOf } from './table-shape';
import { findTime, type FoundTime } from './time-column';
import { MINUTE_MS, StampParser } from './timestamps';
import type { Dialect, PreviewOptions, TableShape } from './types';

/** What the head of one file shows before anything is said of its points. */
export interface FileTable {
  dialect: Dialect;
  shape: TableShape;
  names: string[];
  units: string[] | null;
  preamble: string[][];
  data: NumberedRow[];
  time: FoundTime;
  fingerprint: string;
  stepMinutes: number | null;
}

/**
 * Recognises how one file is written, where its time stands, and whether it has a column a point or a row a reading.
 *
 * Throws  TrendError, in words, for a file that is no table of readings.
 */
export function recogniseFile(head: Uint8Array, options: PreviewOptions): FileTable {
  const encoding = detectEncoding(head);
  // As the reader decodes it: one way of turning bytes to text.
  const stream = new TextStream(encoding);
  const text = stream.decode(head) + (options.complete ? stream.end() : '');
  const { dialect, heading, units, preamble, data } = recogniseTable(text, options.complete);
  const names = columnNames(heading);
  const time = findTime(names, data, options.timeZone, dialect.decimal, { nowMs: options.nowMs });
  const shape = shapeOf(names, data, time.cells);
  const long = shape.kind === 'long';
  return {
    dialect: { encoding, ...dialect },
    shape,
    names,
    units,
    preamble,
    data,
    time,
    fingerprint: headingFingerprint(long ? [...names, 'a row a reading'] : names, units),
    stepMinutes: usualStep(data, time, dialect.decimal, long ? names.indexOf(shape.point) : -1),
  };
}

/** The usual distance between rows; of a long table between the rows of one point. */
function usualStep(
  data: readonly NumberedRow[],
  time: FoundTime,
  decimal: '.' | ',',
  pointCell: number,
): number | null {
  const step = new StepCounter();
  const previous = new Map<string, number>();
  const parsers = new Map<string, StampParser>();
  for (const { cells } of data) {
    const point = cells[pointCell] ?? '';
    const parser = parsers.get(point) ?? StampParser.of(time.plan, decimal);
    parsers.set(point, parser);
    if (!parser.parse(time.cells.map((cell) => cells[cell] ?? '').join(' '))) continue;
    const before = previous.get(point);
    if (before !== undefined) step.add(parser.ms - before);
    previous.set(point, parser.ms);
  }
  return step.usualMs === 0 ? null : step.usualMs / MINUTE_MS;
}
