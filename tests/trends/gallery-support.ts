import { readFileSync } from 'node:fs';
import path from 'node:path';
import { gunzipSync } from 'node:zlib';
import type { Fixture } from '@/fixtures/trends/fixture';
import type { PlantRecord } from '@/fixtures/trends/record';
import { writtenUnit, type Dress } from '@/fixtures/trends/write-record';
import {
  createTrendReader,
  previewDrop,
  type Dialect,
  type ReadPlan,
  type TrendPreview,
  type TrendProblem,
} from '@/lib/trends';
import { TREND_UNITS } from '@/lib/units';
import { unpack } from './container-support';
import { OPTIONS } from './preview-support';

export const FOLDER = path.resolve(import.meta.dirname, '../../fixtures/trends/files');
/** The fixtures' day of reading: dates without a year are of the one before it. */
export const NOW_MS = Date.parse('2026-12-01T12:00Z');

export interface TextFile {
  name: string;
  bytes: Uint8Array;
}

export const fixtureBytes = (name: string): Uint8Array => readFileSync(path.join(FOLDER, name));

/** A file of a drop as the texts it holds: archives and workbooks are unpacked as an upload's are. */
export async function textsOf(name: string, bytes: Uint8Array): Promise<TextFile[]> {
  if (name.endsWith('.gz')) return [{ name: name.slice(0, -3), bytes: gunzipSync(bytes) }];
  if (!/\.(zip|xlsx)$/.test(name)) return [{ name, bytes }];
  const { texts } = await unpack(bytes, name);
  return Object.entries(texts).map(([member, text]) => ({ name: member, bytes: Buffer.from(text, 'utf8') }));
}

export function previewTexts(
  texts: readonly TextFile[],
  change: Partial<typeof OPTIONS> & { nowMs?: number } = {},
): TrendPreview {
  const options = { ...OPTIONS, nowMs: NOW_MS, ...change };
  return previewDrop(
    texts.map(({ name, bytes }) => ({ name, head: bytes, complete: true })),
    options,
  );
}

/** The plan of a table when every suggestion of the preview is confirmed as it stands. */
export function confirmedPlan(preview: TrendPreview, table: number, stepMinutes: number): ReadPlan {
  const { shape, dialect, timestamp, names, stepMinutes: sourceStepMinutes } = preview.tables[table]!;
  const columns = names.map(({ cell, column }) => ({
    ...preview.columns.find((each) => each.column === column)!,
    column: cell,
  }));
  return { shape, dialect, timestamp, timeZone: preview.timeZone, columns, sourceStepMinutes, stepMinutes };
}

/** Role and unit index of a reading's column. */
export const keyOf = ({ role, unitIndex }: { role: string; unitIndex?: number | null }): string =>
  unitIndex == null ? role : `${role} ${unitIndex}`;

export interface WholeRead {
  /** Value by instant (ms), by role. */
  values: Map<string, Map<number, number>>;
  problems: TrendProblem[];
}

/** Reads all files of a drop by the suggestions of its preview. */
export function readConfirmed(
  texts: readonly TextFile[],
  preview: TrendPreview,
  stepMinutes: number,
  change: (plan: ReadPlan) => ReadPlan = (plan) => plan,
): WholeRead {
  const read: WholeRead = { values: new Map(), problems: [...preview.problems] };
  for (const [index, table] of preview.tables.entries()) {
    const plan = change(confirmedPlan(preview, index, stepMinutes));
    for (const { bytes } of texts.filter(({ name }) => table.files.includes(name))) {
      const reader = createTrendReader(plan);
      reader.push(bytes);
      for (const { column, day, values } of reader.finish()) {
        const key = keyOf(plan.columns[column]!);
        const samples = read.values.get(key) ?? new Map<number, number>();
        read.values.set(key, samples);
        const stepMs = stepMinutes * 60_000;
        values.forEach((value, slot) => {
          if (!Number.isNaN(value)) samples.set(Date.parse(`${day}T00:00Z`) + slot * stepMs, value);
        });
      }
      read.problems.push(...reader.report().problems);
    }
  }
  return read;
}

/** What differs between a record and what was read, in words; empty when every number is the same to its written digits. */
export function differences(
  record: PlantRecord,
  dress: Dress,
  read: WholeRead,
  isMissing: (column: string, row: number) => boolean = () => false,
  shiftMs = 0,
): string[] {
  const wrong: string[] = [];
  for (const column of record.columns) {
    const samples = new Map(read.values.get(keyOf(column)));
    const [unit, decimals] = writtenUnit(column, dress);
    const { toStored } = TREND_UNITS[unit];
    const slack = 0.5 * 10 ** -decimals * Math.abs(toStored(1) - toStored(0));
    column.values.forEach((value, row) => {
      const ms = dress.startMs + row * dress.stepMs + shiftMs;
      const got = samples.get(ms);
      samples.delete(ms);
      const expected = isMissing(column.name, row) ? Number.NaN : value;
      const same = Number.isNaN(expected)
        ? got === undefined
        : got !== undefined && Math.abs(got - expected) <= slack + 1e-6 * Math.abs(expected);
      if (!same) wrong.push(`${column.name}, row ${row}: ${expected} was read as ${got}`);
    });
    const [extra] = samples;
    if (extra)
      wrong.push(`${column.name}: ${samples.size} readings too many, ${new Date(extra[0]).toISOString()} ${extra[1]}`);
  }
  return wrong;
}

/** Whether a fixture does not hold a reading. */
export const missingOf =
  ({ missing }: Fixture) =>
  (column: string, row: number): boolean =>
    missing.some(([c, r]) => (c === null || c === column) && r === row);

/** What a person has to do beyond confirming: columns without a sure suggestion, and questions about the times. */
export function decisions(preview: TrendPreview): string[] {
  const columns = preview.columns.filter(({ confidence }) => confidence < 0.5);
  const asked = preview.problems.filter(({ code }) => code === 'day-or-month');
  return [
    ...columns.map(({ column, role, unit, confidence }) => `${column}: ${role} ${unit} ${confidence}`),
    ...asked.map(({ code }) => code),
  ];
}

/** The dialect in which a fixture is written. */
export function dialectOf({ dress }: Fixture): Pick<Dialect, 'encoding' | 'delimiter' | 'decimal'> {
  const { delimiter, decimal, encoding } = dress;
  const names: Readonly<Record<string, Dialect['encoding']>> = {
    'latin-1': 'windows-1252',
    'windows-1252': 'windows-1252',
  };
  const utf16 = /^utf-16[lb]e/.exec(encoding)?.[0] as Dialect['encoding'] | undefined;
  // Nothing in the bytes of plain ASCII tells its encoding, and UTF-8 it is.
  return { encoding: names[encoding] ?? utf16 ?? 'utf-8', delimiter, decimal };
}
