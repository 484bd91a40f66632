import { createTrendReader, type DayOfColumn, type ReadPlan, type ReadReport } from '@/lib/trends';

export const bytesOf = (text: string): Uint8Array => new TextEncoder().encode(text);

/** UTF-16 bytes, with or without a byte-order mark. */
export function utf16Of(text: string, littleEndian: boolean, mark: boolean): Uint8Array {
  const marked = mark ? `\ufeff${text}` : text;
  const view = new DataView(new ArrayBuffer(marked.length * 2));
  for (let i = 0; i < marked.length; i++) view.setUint16(i * 2, marked.charCodeAt(i), littleEndian);
  return new Uint8Array(view.buffer);
}

/** A plan for `time,a` in UTC at one minute, changed as a test needs it. */
export function planFor(
  change: Partial<Omit<ReadPlan, 'dialect'>> & { dialect?: Partial<ReadPlan['dialect']> } = {},
): ReadPlan {
  const { dialect, ...rest } = change;
  return {
    dialect: {
      encoding: 'utf-8',
      delimiter: ',',
      decimal: '.',
      headerRow: 1,
      unitRow: null,
      firstDataRow: 2,
      ...dialect,
    },
    timestamp: { columns: ['time'], form: 'iso' },
    timeZone: 'UTC',
    stepMinutes: 1,
    columns: [{ column: 'a', role: 'primarySupplyTemp', unit: 'degF' }],
    ...rest,
  };
}

export interface Read {
  days: DayOfColumn[];
  report: ReadReport;
}

/** Reads a whole text, cut into pieces of the given lengths (the rest in one). */
export function readText(
  text: string | Uint8Array,
  plan: ReadPlan,
  cuts: readonly number[] = [],
  blockCharacters?: number,
): Read {
  const bytes = typeof text === 'string' ? bytesOf(text) : text;
  const reader = createTrendReader(plan, { blockCharacters });
  let at = 0;
  for (const cut of cuts) {
    reader.push(bytes.subarray(at, at + cut));
    at += cut;
  }
  reader.push(bytes.subarray(at));
  const days = reader.finish();
  return { days, report: reader.report() };
}

/** All numbers of a plan column as [ISO instant, value], in the order of time. */
export function samplesOf({ days }: Read, column = 0): [string, number][] {
  return days
    .filter((day) => day.column === column)
    .sort((a, b) => a.day.localeCompare(b.day))
    .flatMap(({ day, values }) => {
      const stepMs = 86_400_000 / values.length;
      return [...values].flatMap((value, slot): [string, number][] =>
        Number.isNaN(value)
          ? []
          : [[new Date(Date.parse(`${day}T00:00Z`) + slot * stepMs).toISOString().slice(0, 16), value]],
      );
    });
}

export const messagesOf = ({ report }: Read): string[] => report.problems.map(({ message }) => message);

const wall = new Map<string, Intl.DateTimeFormat>();
/** The wall time of an instant in a zone, independent of the code under test: `2026-03-08 01:59:00`. */
export function wallTime(utcMs: number, timeZone: string): string {
  let format = wall.get(timeZone);
  if (!format) {
    format = new Intl.DateTimeFormat('sv-SE', { timeZone, dateStyle: 'short', timeStyle: 'medium' });
    wall.set(timeZone, format);
  }
  return format.format(utcMs);
}
