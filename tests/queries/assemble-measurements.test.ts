import { describe, expect, test } from 'vitest';
import { assembleMeasurements, type PointPlace } from '@/lib/queries/assemble-measurements';

const STEP = 60;
const stretch = { fromDay: '2026-06-02', toDay: '2026-06-03', stepMinutes: STEP, unitCount: 1 };
const place = (id: string, role: string, firstDay: string, lastDay: string): PointPlace => ({
  id,
  role,
  unitIndex: 0,
  firstDay,
  lastDay,
});
const day = (pointId: string, date: string, value: number) => ({
  pointId,
  day: date,
  values: new Float32Array(24).fill(value),
});

describe('several feeders of one role', () => {
  const both = [
    place('a', 'primaryFlow', '2026-06-01', '2026-06-30'),
    place('b', 'primaryFlow', '2026-06-01', '2026-06-30'),
  ];

  test('flows add up where all are there, and one missing makes the sum missing', () => {
    const blocks = [day('a', '2026-06-02', 400), day('b', '2026-06-02', 500), day('a', '2026-06-03', 400)];
    const { primaryFlowGpm } = assembleMeasurements(both, blocks, stretch);
    expect([...(primaryFlowGpm ?? [])].slice(0, 24)).toEqual(Array(24).fill(900));
    expect([...(primaryFlowGpm ?? [])].slice(24)).toEqual(Array(24).fill(NaN));
  });

  test('a meter that is silent in the whole stretch still makes the sum missing', () => {
    const { primaryFlowGpm } = assembleMeasurements(both, [day('a', '2026-06-02', 400)], stretch);
    expect(primaryFlowGpm?.every(Number.isNaN)).toBe(true);
  });

  test('a meter taken away more than a month ago, or fitted later, does not count', () => {
    const points = [
      place('a', 'primaryFlow', '2026-01-01', '2026-06-30'),
      place('old', 'primaryFlow', '2026-01-01', '2026-04-30'),
      place('new', 'primaryFlow', '2026-06-04', '2026-06-30'),
    ];
    const { primaryFlowGpm } = assembleMeasurements(points, [day('a', '2026-06-02', 400)], stretch);
    expect(primaryFlowGpm?.[3]).toBe(400);
  });

  test('temperatures average over those that are there', () => {
    const points = [
      place('a', 'primarySupplyTemp', '2026-06-01', '2026-06-30'),
      place('b', 'primarySupplyTemp', '2026-06-01', '2026-06-30'),
    ];
    const { primarySupplyF } = assembleMeasurements(
      points,
      [day('a', '2026-06-02', 44), day('b', '2026-06-02', 45), day('a', '2026-06-03', 44)],
      stretch,
    );
    expect(primarySupplyF?.[0]).toBe(44.5);
    expect(primarySupplyF?.[30]).toBe(44);
  });
});
