import fc from 'fast-check';
import { describe, test } from 'vitest';
import type { PlantRecord, RecordColumn } from '@/fixtures/trends/record';
import { STAMP_NAMES } from '@/fixtures/trends/stamps';
import { headingOf, PLAIN, TEXT_ENCODINGS, writeRecord, writtenUnit, type Dress } from '@/fixtures/trends/write-record';
import type { ReadPlan, TrendPreview } from '@/lib/trends';
import type { TrendUnitId } from '@/lib/units';
import { differences, previewTexts, readConfirmed } from './gallery-support';

// The writer is the fixtures' (fixtures/trends/write-record.ts): it shares nothing with the reader but the list of units.

type Point = Pick<RecordColumn, 'name' | 'role' | 'unitIndex' | 'unit' | 'decimals'> & { low: number; high: number };
const point = (
  name: string,
  role: RecordColumn['role'],
  unit: TrendUnitId,
  decimals: number,
  low: number,
  high: number,
  unitIndex: number | null = null,
): Point => ({ name, role, unit, decimals, low, high, unitIndex });

const POINTS: readonly Point[] = [
  point('CHW Primary Supply Temp', 'primarySupplyTemp', 'degF', 1, 39, 52),
  point('CHW Primary Return Temp', 'primaryReturnTemp', 'degF', 2, 45, 62),
  point('CHW Secondary Supply Temp', 'secondarySupplyTemp', 'degF', 1, 39, 55),
  point('CHW Primary Flow', 'primaryFlow', 'gpm', 0, 0, 3400),
  point('CHW Secondary Flow', 'secondaryFlow', 'gpm', 1, 0, 2800),
  point('Chiller 1 Status', 'unitStatus', 'on/off', 0, 0, 1, 1),
  point('Plant Power', 'plantPower', 'kW', 1, 0, 1900),
  point('CHW Differential Pressure', 'differentialPressure', 'psi', 2, 0, 40),
];

/** Readings of a point: of its digits, and sometimes none. */
const valuesOf = ({ low, high, decimals, unit }: Point, rows: number) => {
  const scale = 10 ** decimals;
  const reading = fc.integer({ min: low * scale, max: high * scale }).map((value) => value / scale);
  const gaps = unit === 'on/off' ? 0 : 1;
  return fc.array(fc.oneof({ weight: 12, arbitrary: reading }, { weight: gaps, arbitrary: fc.constant(Number.NaN) }), {
    minLength: rows,
    maxLength: rows,
  });
};

const records: fc.Arbitrary<PlantRecord> = fc
  .tuple(fc.integer({ min: 12, max: 20 }), fc.subarray([...POINTS], { minLength: 3, maxLength: 5 }))
  .chain(([rows, points]) =>
    fc
      .tuple(...points.map((each) => valuesOf(each, rows)))
      .map((values) => ({ columns: points.map((each, i) => ({ ...each, values: values[i]! })) })),
  );

const UNITS: readonly Dress['units'][] = [
  {},
  { temperature: ['degC', 2], flow: ['L/s', 2], pressure: ['kPa', 1] },
  { temperature: ['K', 2], flow: ['m3/h', 1] },
  { flow: ['L/min', 0] },
];
const STATE_WORDS: readonly Dress['states'][] = [
  ['0', '1'],
  ['Off', 'On'],
  ['FALSE', 'TRUE'],
  ['stopped', 'running'],
];
const ZONES = ['America/New_York', 'Europe/Berlin', 'Asia/Kolkata', 'UTC', 'Australia/Sydney'];
const BAD_WORDS = ['Bad', 'NaN', '---', '#N/A', 'null'];
const PREAMBLES: readonly string[][] = [[], ['Trend report'], ['Site: Pellmarsh Works', 'Interval: 5 minutes', '']];

/** Delimiter, decimal sign and grouping that can stand together without quotes around every number. */
const NUMBERS = fc.constantFrom(
  ...([',', ';', '\t', '|'] as const).flatMap((delimiter) =>
    (['.', ','] as const).flatMap((decimal) =>
      (['', decimal === '.' ? ',' : '.'] as const).map((thousands) => ({ delimiter, decimal, thousands }) as const),
    ),
  ),
);

// Days on which no zone above changes its clock; those have tests of their own.
const START_MS = fc
  .record({ day: fc.integer({ min: 0, max: 900 }), slot: fc.integer({ min: 0, max: 287 }) })
  .map(({ day, slot }) => Date.UTC(2024, 0, 1 + day) + slot * 300_000)
  .filter((ms) => [0, 1, 4, 5, 6, 7, 11].includes(new Date(ms).getUTCMonth()));

/** Thousands of cases in some seconds: records are small. */
const RUNS = 1500;

interface Case {
  record: PlantRecord;
  dress: Dress;
  word: string;
}

const cases: fc.Arbitrary<Case> = fc
  .record({
    record: records,
    numbers: NUMBERS,
    startMs: START_MS,
    stepMinutes: fc.constantFrom(1, 5, 10, 15),
    timeZone: fc.constantFrom(...ZONES),
    stamp: fc.constantFrom(...STAMP_NAMES.filter((name) => name !== 'hour-24')),
    shape: fc.constantFrom<Dress['shape']>('wide', 'wide', 'wide', 'long', 'long with units'),
    newline: fc.constantFrom<Dress['newline']>('\n', '\r\n', '\r'),
    quoting: fc.constantFrom<Dress['quoting']>('needed', 'all'),
    encoding: fc.constantFrom(...TEXT_ENCODINGS),
    unitAt: fc.constantFrom<Dress['unitAt']>('heading', 'heading', 'row after', 'row before', 'value'),
    units: fc.constantFrom(...UNITS),
    preamble: fc.constantFrom(...PREAMBLES),
    states: fc.constantFrom(...STATE_WORDS),
    word: fc.constantFrom(...BAD_WORDS),
    newestFirst: fc.boolean(),
  })
  .map(({ record, numbers, stepMinutes, word, newestFirst, shape, unitAt, ...rest }) => {
    const wide = shape === 'wide';
    // What goes on from the row before only reads forward.
    const mayReverse = rest.stamp !== 'time-only' && rest.stamp !== 'no-year';
    const dress: Dress = {
      ...PLAIN,
      ...rest,
      ...numbers,
      shape,
      unitAt: wide ? unitAt : 'heading',
      stepMs: stepMinutes * 60_000,
      startMs: rest.startMs - (rest.startMs % (stepMinutes * 60_000)),
      timeHeadings: rest.stamp === 'split' ? ['Date', 'Time'] : ['Timestamp'],
      preamble: [...rest.preamble],
      cell: (text) => (text === '' ? word : text),
      lines: (lines) => (newestFirst && mayReverse ? [...lines].reverse() : lines),
    };
    // Only whole numbers: nothing in the file tells a group of three digits from three digits behind the decimal sign.
    const isWhole = record.columns.every((column) => writtenUnit(column, dress)[1] === 0 || column.unit === 'on/off');
    return { record, dress: isWhole ? { ...dress, thousands: '' } : dress, word };
  });

/** What a person confirms: the suggestion of how to read, with the roles that are known here, and each unit as suggested. */
function confirm({ record, dress }: Case, preview: TrendPreview, plan: ReadPlan): ReadPlan {
  const name = (column: RecordColumn) => (dress.shape === 'long with units' ? column.name : headingOf(column, dress));
  const columns = record.columns.map((column) => {
    const suggested = plan.columns.find((each) => each.column === name(column));
    if (!suggested) throw new Error(`no column ${name(column)} among ${plan.columns.map((c) => c.column).join('; ')}`);
    const [unit] = writtenUnit(column, dress);
    return { ...suggested, role: column.role, unitIndex: column.unitIndex, unit };
  });
  const asked = preview.problems.some(({ code }) => code === 'day-or-month');
  const form = asked ? dayOrMonth(dress, plan.timestamp.form) : plan.timestamp.form;
  const year = plan.timestamp.year == null ? {} : { year: new Date(dress.startMs).getUTCFullYear() };
  return { ...plan, columns, timestamp: { ...plan.timestamp, form, ...year } };
}

/** The answer to the one question that a file may leave open. */
function dayOrMonth({ stamp }: Dress, form: ReadPlan['timestamp']['form']): ReadPlan['timestamp']['form'] {
  const dayFirst = stamp.startsWith('day-first');
  if (form === 'month/day' || form === 'day/month') return 'month/day';
  return dayFirst ? 'day/month/year' : 'month/day/year';
}

const show = ({ record, dress }: Case): string =>
  JSON.stringify({ ...dress, text: new TextDecoder().decode(writeRecord(record, { ...dress, encoding: 'utf-8' })) });

/** A record as a log of changes: what did not change is not written. */
const changes = cases.map(({ record, dress }): Case => {
  const columns = record.columns.map((column) => {
    const known = column.values.filter((value) => !Number.isNaN(value));
    // Each value stands for some rows.
    const values = column.values.map((_, row) => known[Math.floor(row / 3) % Math.max(1, known.length)] ?? 0);
    return { ...column, values };
  });
  return { record: { columns }, dress: { ...dress, onChange: true }, word: '' };
});

function check(each: Case, isAllowed: (wrong: string) => boolean = () => false): void {
  const { record, dress } = each;
  const texts = [{ name: 'trend.csv', bytes: writeRecord(record, dress) }];
  const options = { timeZone: dress.timeZone, nowMs: dress.startMs + 40 * 86_400_000 };
  const preview = previewTexts(texts, options);
  const read = readConfirmed(texts, preview, dress.stepMs / 60_000, (plan) => confirm(each, preview, plan));
  const wrong = differences(record, dress, read).filter((text) => !isAllowed(text));
  if (wrong.length > 0) throw new Error(`${wrong.slice(0, 4).join('\n')}\n${show(each)}`);
}

describe('a plant record in any dress', () => {
  test('reads back to the same numbers, to the written digits', () => {
    fc.assert(
      fc.property(cases, (each) => check(each)),
      { numRuns: RUNS },
    );
  }, 120_000);

  test('that was logged on change reads back to the same numbers or to none, never to others', () => {
    // With so few rows a point may be taken for one that is logged at a distance: then a value stands for that long, at the
    // end of the file too.
    const isShortOrLate = (wrong: string) => wrong.endsWith('was read as undefined') || wrong.includes('too many');
    fc.assert(
      fc.property(changes, (each) => check(each, isShortOrLate)),
      { numRuns: RUNS / 3 },
    );
  }, 120_000);

  test('a chiller’s status beside one other point is a point, not the status of its readings', () => {
    const values = Array.from({ length: 24 }, (_, row) => (row < 12 ? 0 : 1));
    const [flow, status] = [POINTS[4]!, POINTS[5]!];
    const record = {
      columns: [
        { ...flow, values: values.map((on, row) => 400 * on + 450 + row) },
        { ...status, values },
      ],
    };
    check({ record, dress: { ...PLAIN, states: ['stopped', 'running'] }, word: '' });
  });
});
