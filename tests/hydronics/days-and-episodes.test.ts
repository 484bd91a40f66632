import { describe, expect, test } from 'vitest';
import { summariseDay } from '@/lib/hydronics/days';
import { findEpisodes } from '@/lib/hydronics/episodes';
import type { Cause, HourResult } from '@/lib/hydronics/types';

const HOUR_MS = 3_600_000;
function hour(index: number, part: Partial<HourResult> = {}): HourResult {
  return {
    hourStartMs: index * HOUR_MS,
    low: false,
    runningMinutes: 60,
    loadTons: 500,
    deltaTF: 10,
    expectedDeltaTF: 12,
    productionDeltaTF: 10,
    primaryFlowGpm: 1200,
    secondaryFlowGpm: 1200,
    bypassFlowGpm: 0,
    primarySupplyF: 44,
    reverseMinutes: 0,
    forwardMinutes: 60,
    stillMinutes: 0,
    unknownMinutes: 0,
    reverseFlowGpm: Number.NaN,
    reverseFlowMaxGpm: Number.NaN,
    blendedSupplyF: 44,
    blendedSupplyMaxF: 44.2,
    excessFlowGpm: 200,
    avoidableFlowGpm: 100,
    cause: 'none',
    causeConfidence: Number.NaN,
    excessEnergyKwh: 0,
    excessCost: 0,
    strandedTons: 0,
    unitsRunning: 2,
    quality: 1,
    ...part,
  };
}
const low = (index: number, cause: Cause, part: Partial<HourResult> = {}) =>
  hour(index, { low: true, cause, excessEnergyKwh: 10, excessCost: 1.4, ...part });

describe('summariseDay', () => {
  test('adds minutes, energy, money and ton-hours, and keeps the largest and the warmest', () => {
    const day = summariseDay([
      low(0, 'reverse-flow', { reverseMinutes: 40, reverseFlowMaxGpm: 200, blendedSupplyMaxF: 47, unknownMinutes: 5 }),
      low(1, 'reverse-flow', { reverseMinutes: 20, reverseFlowMaxGpm: 260, blendedSupplyMaxF: 46 }),
      hour(2, { runningMinutes: 30, quality: 0.4 }),
    ]);
    expect(day).toMatchObject({
      reverseMinutes: 60,
      unknownMinutes: 5,
      runningMinutes: 150,
      largestReverseFlowGpm: 260,
      warmestSupplyF: 47,
      lowHours: 2,
      excessEnergyKwh: 20,
      loadTonHours: 1250,
    });
    expect(day.excessCost).toBeCloseTo(2.8, 12);
    expect(day.coverage).toBeCloseTo(0.8, 12);
  });

  test('leaves out what an hour does not know, and does not turn "nobody knows" into zero', () => {
    const unknown = {
      loadTons: Number.NaN,
      excessCost: Number.NaN,
      blendedSupplyMaxF: Number.NaN,
      excessEnergyKwh: Number.NaN,
    };
    expect(summariseDay([hour(0), hour(1, unknown)])).toMatchObject({ loadTonHours: 500, excessCost: 0 });
    const day = summariseDay([hour(0, unknown)]);
    expect(day.loadTonHours).toBeNaN();
    expect(day.excessCost).toBeNaN();
    expect(day.warmestSupplyF).toBeNaN();
    expect(day.largestReverseFlowGpm).toBeNaN();
  });

  test('of no hours covers nothing', () => {
    expect(summariseDay([])).toMatchObject({ coverage: 0, reverseMinutes: 0, lowHours: 0 });
  });
});

describe('findEpisodes', () => {
  test('joins hours of one cause, adds them up and names the worst', () => {
    const [episode, ...rest] = findEpisodes([
      hour(0),
      low(1, 'coil-shortfall', { excessFlowGpm: 300 }),
      low(2, 'coil-shortfall', { excessFlowGpm: 500, blendedSupplyMaxF: 45 }),
      hour(3),
    ]);
    expect(rest).toEqual([]);
    expect(episode).toMatchObject({
      cause: 'coil-shortfall',
      startMs: HOUR_MS,
      endMs: 3 * HOUR_MS,
      hours: 2,
      worstHourMs: 2 * HOUR_MS,
      warmestSupplyF: 45,
      excessEnergyKwh: 20,
    });
    expect(episode?.largestReverseFlowGpm).toBeNaN();
  });

  test('bridges a gap of one hour and counts it not, and ends at a gap of two', () => {
    const bridged = findEpisodes([low(0, 'reverse-flow'), hour(1), low(2, 'reverse-flow')]);
    expect(bridged).toMatchObject([{ startMs: 0, endMs: 3 * HOUR_MS, hours: 2 }]);
    const apart = findEpisodes([low(0, 'reverse-flow'), hour(1), hour(2), low(3, 'reverse-flow')]);
    expect(apart).toMatchObject([{ hours: 1 }, { hours: 1, startMs: 3 * HOUR_MS }]);
  });

  test('keeps causes apart, also when one interrupts the other for an hour', () => {
    const found = findEpisodes([low(0, 'reverse-flow'), low(1, 'coil-shortfall'), low(2, 'reverse-flow')]);
    expect(found.map((episode) => [episode.cause, episode.hours])).toEqual([
      ['reverse-flow', 2],
      ['coil-shortfall', 1],
    ]);
  });

  test('takes half an hour of reverse flow as reverse flow, low or not, and judges its worst by water run backwards', () => {
    const found = findEpisodes([
      hour(0, { reverseMinutes: 30, reverseFlowGpm: 100, reverseFlowMaxGpm: 150 }),
      hour(1, { reverseMinutes: 60, reverseFlowGpm: 90, reverseFlowMaxGpm: 120 }),
      hour(2, { reverseMinutes: 25 }),
    ]);
    expect(found).toMatchObject([
      { cause: 'reverse-flow', hours: 2, worstHourMs: HOUR_MS, largestReverseFlowGpm: 150 },
    ]);
  });

  test('starts nothing for a low hour without a cause', () => {
    expect(findEpisodes([low(0, 'none')])).toEqual([]);
    expect(findEpisodes([])).toEqual([]);
  });
});
