import { expect, test } from 'vitest';
import { stretchesAbove, temperatureColumns, temperatureLimits } from '@/components/charts/temperature-columns';
import { hourlyTide } from '../../support/tide-bars';

const FROM = Date.parse('2026-07-13T04:00:00Z');
const HOUR_MS = 3_600_000;

test('absent bars leave a break, so that no line crosses a gap', () => {
  const tide = hourlyTide(FROM, [100, 100, 100, 100]);
  const columns = temperatureColumns({ ...tide, bars: tide.bars.filter((_, index) => index !== 2) });
  expect(columns.productionSupplyF).toEqual([44, 44, null, 44]);
  expect(columns.centresMs.map((ms) => (ms - FROM) / HOUR_MS)).toEqual([0.5, 1.5, 2.5, 3.5]);
});

test('the limits hold all four lines', () => {
  const [lo, hi] = temperatureLimits(temperatureColumns(hourlyTide(FROM, [-1000])));
  expect(lo).toBeLessThan(44);
  expect(hi).toBeGreaterThan(56);
});

test('nothing read: a window all the same', () => {
  const [lo, hi] = temperatureLimits(temperatureColumns(hourlyTide(FROM, [null])));
  expect(hi).toBeGreaterThan(lo);
});

test('a stretch above begins and ends where the lines meet', () => {
  const [stretch] = stretchesAbove([0, 1, 2, 3], [44, 46, 46, 44], [45, 45, 45, 45]);
  expect(stretch).toEqual([
    { x: 0.5, upper: 45, lower: 45 },
    { x: 1, upper: 46, lower: 45 },
    { x: 2, upper: 46, lower: 45 },
    { x: 2.5, upper: 45, lower: 45 },
  ]);
});

test('a missing value ends a stretch, and what lies below is none', () => {
  expect(stretchesAbove([0, 1, 2, 3, 4], [46, 46, null, 46, 46], [45, 45, 45, 45, 45])).toHaveLength(2);
  expect(stretchesAbove([0, 1], [44, 44], [45, 45])).toEqual([]);
});
