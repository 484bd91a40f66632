import { expect, test } from 'vitest';
import { nearestPoint, planeLimits, scatterPoints } from '@/components/charts/scatter-points';
import { hourlyTide } from '../../support/tide-bars';

const FROM = Date.parse('2026-07-13T04:00:00Z');

test('only hours with load and flow are marks, by rising load', () => {
  const tide = hourlyTide(FROM, [100, null, -200]);
  const bars = tide.bars.map((bar, index) => (index === 0 ? { ...bar, loadTons: 900 } : bar));
  const points = scatterPoints({ ...tide, bars });
  expect(points.map((point) => [point.loadTons, point.direction])).toEqual([
    [700, 'reverse'],
    [900, 'forward'],
  ]);
});

test('the plane holds every mark and the lines near them, not a line far above', () => {
  const limits = planeLimits(scatterPoints(hourlyTide(FROM, [100, -200])), [860, 1720, 9000]);
  expect(limits.flow[1]).toBeGreaterThan(1920);
  expect(limits.flow[1]).toBeLessThan(9000);
  expect(limits.flow[0]).toBeLessThanOrEqual(860);
});

test('the nearest mark is found within reach and not beyond', () => {
  const points = scatterPoints(hourlyTide(FROM, [100, -200]));
  const place = (point: { flowGpm: number }) => [10, point.flowGpm / 10] as const;
  expect(nearestPoint(points, place, [12, 163])?.direction).toBe('forward');
  expect(nearestPoint(points, place, [60, 163])).toBeNull();
});
