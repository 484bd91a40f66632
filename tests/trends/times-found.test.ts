import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { findTime, type FoundTime } from '@/lib/trends/time-column';
import { TrendError } from '@/lib/trends';

const NOW_MS = Date.parse('2026-12-01T12:00Z');

/** The time found in a table of cells under names. */
function found(
  names: string[],
  rows: string[][],
  options: { timeZone?: string; decimal?: '.' | ','; nowMs?: number | null } = {},
): FoundTime {
  const { timeZone = 'America/Denver', decimal = '.', nowMs = NOW_MS } = options;
  const data = rows.map((cells, i) => ({ cells, row: i + 2 }));
  return findTime(names, data, timeZone, decimal, { nowMs });
}
const column = (name: string, texts: string[], options = {}) =>
  found(
    [name, 'a'],
    texts.map((text, i) => [text, String(44 + (i % 7) * 0.13)]),
    options,
  );
const codes = ({ doubts }: FoundTime) => doubts.map(({ code }) => code);

const two = (value: number) => String(value).padStart(2, '0');
/** `08/28 00:05` and the like, a row every `stepMinutes`. */
const monthDay = (from: string, rows: number, stepMinutes: number, sign = '/', dayFirst = false) =>
  Array.from({ length: rows }, (_, i) => {
    const d = new Date(Date.parse(from) + i * stepMinutes * 60_000);
    const parts = [two(d.getUTCMonth() + 1), two(d.getUTCDate())];
    if (dayFirst) parts.reverse();
    return `${parts.join(sign)}  ${two(d.getUTCHours())}:${two(d.getUTCMinutes())}:00`;
  });

describe('times without a year', () => {
  test('get the latest year that puts no row in the future, and the doubt is said', () => {
    const { plan, doubts } = column('date_time', monthDay('2020-08-28T00:00Z', 600, 5));
    expect(plan).toEqual({ columns: ['date_time'], form: 'month/day', year: 2026 });
    expect(doubts).toEqual([
      {
        code: 'no-year',
        message:
          'The times have no year ("08/28 00:00:00"). The first row was taken to be of 2026, the latest year that puts no row in the future; choose another if the file is older.',
      },
    ]);
  });

  test('of a month still to come are of last year', () => {
    expect(column('Time', monthDay('2020-12-13T00:00Z', 600, 5)).plan.year).toBe(2025);
  });

  test('today is decided in the plant’s zone', () => {
    const nowMs = Date.parse('2026-08-14T02:00Z');
    const texts = ['08/13 19:00', '08/13 19:30', '08/13 20:00'];
    expect(column('Time', texts, { nowMs, timeZone: 'America/Denver' }).plan.year).toBe(2026);
    expect(column('Time', texts, { nowMs, timeZone: 'America/Los_Angeles' }).plan.year).toBe(2025);
  });

  test('across New Year begin in the year before', () => {
    expect(column('Time', monthDay('2020-12-31T20:00Z', 600, 5)).plan.year).toBe(2025);
    expect(column('Time', monthDay('2020-12-31T20:00Z', 600, 5).reverse()).plan.year).toBe(2026);
  });

  test('with 29 February are of a leap year', () => {
    const { plan } = column('Time', monthDay('2024-02-28T00:00Z', 900, 5));
    expect(plan).toMatchObject({ form: 'month/day', year: 2024 });
  });

  test('with weekdays are of the latest year whose weekdays fit, and nothing is left to doubt', () => {
    // 28 August is a Friday in 2015, 2020 and 2026, which is still to come.
    const friday = ['Fri 08/28 00:00', 'Fri 08/28 00:05', 'Fri 08/28 00:10', 'Sat 08/29 00:00'];
    const settled = column('Time', friday, { nowMs: Date.parse('2026-06-01T00:00Z') });
    expect(settled.plan).toMatchObject({ form: 'month/day', year: 2020 });
    expect(codes(settled)).toEqual([]);
  });

  test('day first is found by the day over 12, by points, or by the zone with a doubt', () => {
    expect(column('Time', monthDay('2020-08-28T00:00Z', 300, 5, '/', true)).plan.form).toBe('day/month');
    expect(column('Zeit', ['01.02. 00:00', '01.02. 00:05', '01.02. 00:10']).plan.form).toBe('day/month');
    const open = ['01/02 00:00', '01/02 00:05', '01/02 00:10'];
    const german = column('Zeit', open, { timeZone: 'Europe/Berlin' });
    expect(german.plan).toMatchObject({ form: 'day/month', year: 2026 });
    expect(codes(german)).toEqual(['no-year', 'day-or-month']);
    expect(column('Time', open).plan.form).toBe('month/day');
  });

  test('stand in two columns', () => {
    const rows = monthDay('2020-08-28T00:00Z', 300, 5).map((text) => [...text.split('  '), '44.1']);
    const { plan, cells } = found(['Date', 'Clock', 'a'], rows);
    expect(plan).toEqual({ columns: ['Date', 'Clock'], form: 'month/day', year: 2026 });
    expect(cells).toEqual([0, 1]);
  });

  test('are refused in words when it is not known what day it is', () => {
    const read = () => column('date_time', monthDay('2020-08-28T00:00Z', 10, 5), { nowMs: null });
    expect(read).toThrow(expect.objectContaining({ name: 'TrendError', code: 'unsupported' }));
  });

  test('readings are not taken for days and months: 12.5, 3.1, "Dec 1"', () => {
    const rows = Array.from({ length: 30 }, (_, i) => [`${(i % 12) + 1}.${(i % 9) + 1}`, `Dec ${(i % 2) + 1}`]);
    expect(() => found(['CHWS T', 'Point'], rows)).toThrow(TrendError);
    const timed = rows.map((cells, i) => [`2026-07-20 00:${two(i)}`, ...cells]);
    expect(found(['Time', 'CHWS T', 'Point'], timed)).toMatchObject({ cells: [0], others: [] });
  });
});

describe('dates given once a day', () => {
  const clocks = Array.from(
    { length: 600 },
    (_, i) => `${two(Math.floor(((i * 5) % 1440) / 60))}:${two((i * 5) % 60)}`,
  );

  test('in a column of their own', () => {
    const rows = clocks.map((clock, i) => [i % 288 === 0 ? `07/${20 + i / 288}/2026` : '', clock, '44.1']);
    const { plan, cells } = found(['Date', 'Time', 'a'], rows);
    expect(plan).toEqual({ columns: ['Date', 'Time'], form: 'month/day/year' });
    expect(cells).toEqual([0, 1]);
  });

  test('in the column of the times', () => {
    const texts = clocks.map((clock, i) => (i % 288 === 0 ? `2026-07-${20 + i / 288} ${clock}` : clock));
    expect(column('Time', texts).plan).toEqual({ columns: ['Time'], form: 'iso' });
  });
});

describe('times in numbers', () => {
  const from = Date.parse('2026-07-20T00:00Z');
  const uneven = Array.from({ length: 50 }, (_, i) => from + i * 60_000 + ((i * i * 977) % 45_000));

  test('seconds of a log of changes come at no even distance and are times because the heading says so', () => {
    expect(
      column(
        'ts',
        uneven.map((ms) => String(ms / 1000)),
      ).plan.form,
    ).toBe('epoch-s');
  });

  test.each([
    ['epoch-s', (ms: number) => (ms / 1e9 / 1000).toFixed(9) + 'e9'],
    ['epoch-ms', (ms: number) => String(ms)],
    ['epoch-ms', (ms: number) => `${ms}000`],
    ['epoch-ms', (ms: number) => `${ms}000000`],
    ['spreadsheet-serial', (ms: number) => (ms / 86_400_000 + 25_569).toFixed(6)],
  ] as const)('%s', (form, write) => {
    const texts = Array.from({ length: 50 }, (_, i) => write(from + i * 300_000));
    expect(column('Time', texts).plan).toEqual({ columns: ['Time'], form });
  });

  test('with a decimal comma', () => {
    const texts = Array.from({ length: 50 }, (_, i) =>
      ((from + i * 300_000) / 86_400_000 + 25_569).toFixed(6).replace('.', ','),
    );
    expect(column('Time', texts, { decimal: ',' }).plan.form).toBe('spreadsheet-serial');
  });

  test('a day’s number in one column and its time in another', () => {
    const rows = Array.from({ length: 50 }, (_, i) => ['46223', `00:${two(i)}`, '44.1']);
    expect(found(['Date', 'Time', 'a'], rows).plan).toEqual({ columns: ['Date', 'Time'], form: 'spreadsheet-serial' });
  });

  test('a steady counter in that range is no time, alone or beside one', () => {
    const counter = Array.from({ length: 50 }, (_, i) => String(46_223 + i * 12));
    const still = counter.map(() => '46223');
    expect(() =>
      found(
        ['kWh', 'b'],
        counter.map((text, i) => [text, still[i]!]),
      ),
    ).toThrow(TrendError);
    const rows = counter.map((text, i) => [`2026-07-20 00:${two(i)}`, text, still[i]!]);
    expect(found(['Time', 'kWh', 'b'], rows)).toMatchObject({ cells: [0], others: [] });
  });
});

describe('month and day', () => {
  test('weekdays tell them apart', () => {
    // 2026-07-08 is a Wednesday, 2026-08-07 a Friday.
    const wednesday = ['Wed 08/07/2026 00:00', 'Wed 08/07/2026 00:05', 'Wed 08/07/2026 00:10'];
    const settled = column('Time', wednesday);
    expect(settled.plan.form).toBe('day/month/year');
    expect(codes(settled)).toEqual([]);
  });

  test('a day over 12 in the last row of the head settles it', () => {
    const texts = [
      ...Array.from({ length: 500 }, (_, i) => `07/08/2026 ${two(Math.floor(i / 60))}:${two(i % 60)}`),
      '13/08/2026 00:00',
    ];
    expect(column('Time', texts).plan.form).toBe('day/month/year');
  });
});

describe('ends of intervals', () => {
  const iso = Array.from({ length: 40 }, (_, i) => `2026-07-20 ${two(Math.floor(i / 4))}:${two((i % 4) * 15)}`);

  test.each([
    'Interval Ending',
    'IntervalEnd',
    'Period End',
    'period_end_time',
    'Hour Ending',
    'HE',
    'End Time',
    'Time (HE)',
    'End of interval',
    'Intervallende',
  ])('the heading %j says so', (name) => {
    const { plan, doubts } = column(name, iso);
    expect(plan).toEqual({ columns: [name], form: 'iso', stamps: 'end' });
    expect(doubts).toEqual([
      {
        code: 'end-stamps',
        message: `The heading "${name}" names the end of an interval, so each time was taken for the end of its interval and moved one usual step back. Choose the start if it is the moment of the reading.`,
      },
    ]);
  });

  test.each([
    'Timestamp',
    'Interval Start',
    'Period Beginning',
    'Time',
    'Date/Time',
    'Calendar time',
    'The Time he saw',
  ])('the heading %j does not', (name) => {
    expect(column(name, iso).plan.stamps).toBeUndefined();
  });

  test('between a start and an end, the start is the time', () => {
    const rows = iso.slice(1).map((end, i) => [iso[i]!, end, '44']);
    const { plan, cells, others } = found(['Interval Start', 'Interval End', 'a'], rows);
    expect(plan).toEqual({ columns: ['Interval Start'], form: 'iso' });
    expect([cells, others]).toEqual([[0], [1]]);
  });

  const day = (last: string) => [
    ...Array.from({ length: 23 }, (_, i) => `07/20/2026 ${two(i + 1)}:00`),
    last,
    '07/21/2026 01:00',
  ];
  test('days that end with hour 24 and never begin with 00:00 do, unless the heading speaks of starts', () => {
    expect(column('Time', day('07/20/2026 24:00')).plan.stamps).toBe('end');
    expect(column('Start', day('07/20/2026 24:00')).plan.stamps).toBeUndefined();
    expect(column('Time', day('07/21/2026 00:00')).plan.stamps).toBeUndefined();
    expect(column('Time', ['07/20/2026 00:00', ...day('07/20/2026 24:00')]).plan.stamps).toBeUndefined();
  });
});

const LABORATORY = path.resolve(import.meta.dirname, '../../../shared/data/nist_ibal/csv');
test.skipIf(!existsSync(LABORATORY))('a laboratory’s day: no year, two blanks, hour 24', () => {
  const lines = readFileSync(path.join(LABORATORY, 'Tucson_Eff_MPC.csv'), 'utf8').trim().split(/\r?\n/);
  const [names, ...rows] = lines.map((line) => line.split(','));
  const time = found(names!, rows);
  expect(time.plan).toEqual({ columns: ['date_time'], form: 'month/day', year: 2026, stamps: 'end' });
  expect(codes(time)).toEqual(['no-year', 'end-stamps']);
});
