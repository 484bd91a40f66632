import { expect, test } from 'vitest';
import {
  dayOrMonth,
  doubtsOf,
  possibleForms,
  proposedShift,
  timeExample,
  timeGroups,
  timesOf,
  timestampPlan,
  type TimeAnswer,
} from '@/components/uploads/mapping-times';
import { preview, previewColumn, previewTable } from '../../support/preview';

const DENVER = 'America/Denver';
const MONTH_FIRST: TimeAnswer = { form: 'month/day/year', year: null, stamps: 'start', shiftMinutes: 0 };
const doubt = (code: string, message = '"07/08/2026 00:05" can be read both ways.', column?: string) => ({
  code,
  severity: 'warning' as const,
  message,
  count: 1,
  ...(column === undefined ? {} : { column }),
});

test('the first row shows what its time is read as, in either order of month and day', () => {
  const table = previewTable();
  expect(timeExample(table, MONTH_FIRST, DENVER)).toMatchObject({
    text: '07/08/2026 00:05',
    read: '8 July 2026, 00:05',
    counted: null,
  });
  expect(timeExample(table, { ...MONTH_FIRST, form: 'day/month/year' }, DENVER)?.read).toBe('7 August 2026, 00:05');
});

test('a shift moves the example, an end stamp says when its interval began', () => {
  const table = previewTable();
  expect(timeExample(table, { ...MONTH_FIRST, shiftMinutes: -60 }, DENVER)?.read).toBe('7 July 2026, 23:05');
  expect(timeExample(table, { ...MONTH_FIRST, stamps: 'end' }, DENVER)?.counted).toBe('8 July 2026, 00:00');
});

test('a time with an offset of its own is shown in the chosen zone', () => {
  const table = previewTable({ timestamp: { columns: ['t'], form: 'iso' }, rows: [['2026-07-08T06:05:00Z', '1']] });
  const answer: TimeAnswer = { ...MONTH_FIRST, form: 'iso' };
  expect(timeExample(table, answer, DENVER)).toMatchObject({ read: '8 July 2026, 00:05', hasOffset: true });
  expect(timeExample(table, answer, 'Europe/Zurich')?.read).toBe('8 July 2026, 08:05');
});

test('a date and a time of day in two columns are read together, wherever they stand', () => {
  const table = previewTable({
    timestamp: { columns: ['Date', 'Time'], form: 'day/month/year' },
    rows: [['7', '44.1', '08.07.2026', '00:05']],
    dialect: { ...previewTable().dialect, decimal: ',' },
  });
  expect(timeExample(table, { ...MONTH_FIRST, form: 'day/month/year' }, DENVER)).toMatchObject({
    text: '08.07.2026 00:05',
    read: '8 July 2026, 00:05',
  });
});

test('times without a year are not shown as read until a year is given', () => {
  const table = previewTable({
    timestamp: { columns: ['t'], form: 'day/month', year: 2026 },
    rows: [['20 Jul 00:05', '1']],
  });
  expect(timeExample(table, { ...MONTH_FIRST, form: 'day/month', year: null }, DENVER)?.read).toBeNull();
  expect(timeExample(table, { ...MONTH_FIRST, form: 'day/month', year: 2019 }, DENVER)?.read).toBe(
    '20 July 2019, 00:05',
  );
});

test('only forms that can read the first rows are offered', () => {
  expect(possibleForms(previewTable(), MONTH_FIRST)).toEqual(['month/day/year', 'day/month/year']);
  const settled = previewTable({ rows: [['07/25/2026 00:05', '1']] });
  expect(possibleForms(settled, MONTH_FIRST)).toEqual(['month/day/year']);
});

test('day or month is asked where the file leaves it open, and only there', () => {
  const open = preview({ problems: [doubt('day-or-month', undefined, 'Timestamp')] });
  expect(dayOrMonth(open, 0, MONTH_FIRST)).toEqual(['day/month/year', 'month/day/year']);
  // The answer changes, the question stays.
  expect(dayOrMonth(open, 0, { ...MONTH_FIRST, form: 'day/month/year' })).toEqual(['day/month/year', 'month/day/year']);
  expect(dayOrMonth(preview(), 0, MONTH_FIRST)).toBeNull();
});

test('a doubt belongs to the tables whose times it is about', () => {
  const iso = previewTable({ timestamp: { columns: ['Timestamp'], form: 'iso' }, rows: [['2026-07-08 00:00', '1']] });
  const two = preview({
    tables: [iso, previewTable()],
    columns: [previewColumn('A'), previewColumn('B', { table: 1 })],
    problems: [
      doubt('day-or-month', undefined, 'Timestamp'),
      doubt(
        'clock-offset',
        '"B" changes 1 h after "A" (90 % of steps match so). If so, shift the times of "B" by -1 h.',
      ),
    ],
  });
  expect(doubtsOf(two, 0)).toEqual([]);
  expect(doubtsOf(two, 1).map(({ code }) => code)).toEqual(['day-or-month', 'clock-offset']);
});

test('the shift that a doubt about two clocks proposes is read from its sentence', () => {
  const say = (end: string) =>
    proposedShift(doubt('clock-offset', `"B" changes after "A". If so, shift it by ${end}.`));
  expect(say('-1 h')).toBe(-60);
  expect(say('+45 min')).toBe(45);
  expect(proposedShift(doubt('end-stamps', 'shift it by -1 h.'))).toBeNull();
});

test('tables written and read alike are one question; a change of one of them parts it from the others', () => {
  const iso = previewTable({ timestamp: { columns: ['t'], form: 'iso' } });
  const drop = preview({ tables: [previewTable(), iso, previewTable()] });
  const times = timesOf(drop);
  expect(timeGroups(drop, times, false).map(({ tables }) => tables)).toEqual([[0, 2], [1]]);
  const shifted = times.map((time, index) => (index === 2 ? { ...time, shiftMinutes: 60 } : time));
  expect(timeGroups(drop, shifted, false).map(({ tables }) => tables)).toEqual([[0], [1], [2]]);
  expect(timeGroups(drop, times, true)).toHaveLength(3);
});

test('what was confirmed for an upload stands before what was suggested', () => {
  const timestamp = { columns: ['Timestamp'], form: 'day/month/year' as const, shiftMinutes: 60 };
  const confirmed = { timestamp, tables: [{ timestamp }], timeZone: 'UTC', columns: [], remember: true };
  expect(timesOf(preview({ confirmed }))).toEqual([
    { form: 'day/month/year', year: null, stamps: 'start', shiftMinutes: 60 },
  ]);
});

test('a plan says all of it, and a year only where the form has none', () => {
  expect(timestampPlan(previewTable(), MONTH_FIRST)).toEqual({
    columns: ['Timestamp'],
    form: 'month/day/year',
    stamps: 'start',
    shiftMinutes: 0,
  });
  const answer: TimeAnswer = { ...MONTH_FIRST, form: 'day/month', year: 2025 };
  expect(timestampPlan(previewTable(), answer)).toMatchObject({ form: 'day/month', year: 2025 });
});
