import { describe, expect, test } from 'vitest';
import { columnLevel, gridLines, timeColumns } from '@/components/charts/time-columns';
import { tideTable } from '@/components/charts/tide-table';
import type { PlantDay } from '@/lib/schemas/results';
import { hourlyTide, steadyBar } from '../../support/tide-bars';

const ZONE = 'America/New_York';
const DAY_MS = 86_400_000;
const HOUR_MS = 3_600_000;
const FROM = Date.parse('2026-07-13T04:00:00Z');

test.each([
  [1, 'hour'],
  [3, 'quarter'],
  [7, 'half'],
  [14, 'day'],
  [31, 'week'],
  [365, 'month'],
])('a period of %i days has columns by %s', (days, level) => {
  expect(columnLevel(FROM, FROM + days * DAY_MS, 1156)).toBe(level);
});

test('columns too narrow for their figures give way to coarser ones', () => {
  expect(columnLevel(FROM, FROM + 14 * DAY_MS, 467)).toBe('week');
  expect(columnLevel(FROM, FROM + DAY_MS, 467)).toBe('quarter');
});

describe('columns by the plant’s clock', () => {
  test('cover the range without gap or overlap', () => {
    for (const level of ['hour', 'quarter', 'half', 'day', 'week', 'month'] as const) {
      const from = FROM + 5 * HOUR_MS;
      const to = FROM + 40 * DAY_MS;
      const columns = timeColumns(from, to, ZONE, level);
      expect(columns[0]?.startMs).toBe(from);
      expect(columns.at(-1)?.endMs).toBe(to);
      columns.slice(1).forEach((column, index) => expect(column.startMs).toBe(columns[index]?.endMs));
    }
  });

  test('the day clocks go back has 25 hours, and its second half is at noon', () => {
    const start = Date.parse('2026-11-01T04:00:00Z');
    const hours = timeColumns(start, start + 25 * HOUR_MS, ZONE, 'hour');
    expect(hours).toHaveLength(25);
    expect(hours.filter((column) => column.label === '01:00')).toHaveLength(2);
    const halves = timeColumns(start, start + 25 * HOUR_MS, ZONE, 'half');
    expect(halves.map((column) => (column.endMs - column.startMs) / HOUR_MS)).toEqual([13, 12]);
  });

  test('weeks begin on Monday, and their days keep fainter lines', () => {
    const columns = timeColumns(FROM + 2 * DAY_MS, FROM + 16 * DAY_MS, ZONE, 'week');
    expect(columns.map((column) => (column.startMs - FROM) / DAY_MS)).toEqual([2, 7, 14]);
    const lines = gridLines(columns, 'week', ZONE);
    expect(lines).toHaveLength(14);
    expect(lines.filter((line) => line.opensDay)).toHaveLength(3);
  });
});

describe('the tide table', () => {
  const columns = timeColumns(FROM, FROM + 2 * DAY_MS, ZONE, 'day');

  test('sums the reverse minutes, and names the largest flow and the warmest supply of each column', () => {
    const flows = Array.from({ length: 48 }, (_, hour) => (hour >= 12 && hour < 18 ? -100 - hour : 200));
    const [first, second] = tideTable(hourlyTide(FROM, flows).bars, columns, ZONE);
    expect(first).toMatchObject({ reverseMinutes: 360, largestGpm: -117, heavy: true });
    expect(first?.warmestSupplyF).toBeCloseTo(44.2 + 117 / 200, 6);
    expect(second).toMatchObject({ reverseMinutes: 0, largestGpm: null, heavy: false });
  });

  test('reverse flow is below the line whichever sign it came with', () => {
    const bar = { ...steadyBar(FROM, 'reverse', -300), reverseFlowGpm: 300 };
    expect(tideTable([bar], columns, ZONE)[0]?.largestGpm).toBe(-300);
  });

  test('a column in which nothing was read is not a column without reverse flow', () => {
    const flows = Array.from({ length: 48 }, (_, hour) => (hour < 24 ? 100 : null));
    expect(tideTable(hourlyTide(FROM, flows).bars, columns, ZONE).map((cell) => cell.reverseMinutes)).toEqual([
      0,
      null,
    ]);
  });

  test('a column of one whole day takes the day’s own record, which thinning has not blunted', () => {
    const day: PlantDay = {
      day: '2026-07-13',
      reverseMinutes: 35,
      unknownMinutes: 0,
      runningMinutes: 1440,
      largestReverseFlowGpm: 812,
      warmestSupplyF: 49.9,
      lowHours: 3,
      excessCost: null,
      excessEnergyKwh: null,
      loadTonHours: null,
      coverage: 1,
    };
    const [first] = tideTable(hourlyTide(FROM, [-100]).bars, columns, ZONE, [day]);
    expect(first).toEqual({ reverseMinutes: 35, largestGpm: -812, warmestSupplyF: 49.9, heavy: false });
  });
});
