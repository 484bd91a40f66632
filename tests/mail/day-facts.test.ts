import { describe, expect, it } from 'vitest';
import { dominantCause, hourBars, situationOf, type DayHour } from '@/lib/mail/day-facts';
import type { DaySlot } from '@/lib/mail/reverse-stretches';

const HOUR_MS = 3_600_000;
function hour(changes: Partial<DayHour>): DayHour {
  return {
    hourStartMs: 0,
    low: false,
    cause: 'none',
    runningMinutes: 60,
    forwardMinutes: 0,
    reverseMinutes: 0,
    stillMinutes: 0,
    unknownMinutes: 0,
    bypassFlowGpm: NaN,
    reverseFlowGpm: NaN,
    excessFlowGpm: NaN,
    excessCost: NaN,
    unitsRunning: NaN,
    quality: 1,
    ...changes,
  };
}

describe('hourBars', () => {
  it('splits an hour’s net flow into what went forward and what came back', () => {
    // 20 min at 300 gpm backward, 40 min at 150 forward: 100 and 100 over the hour, net 0.
    const [bar] = hourBars(
      [hour({ reverseMinutes: 20, forwardMinutes: 40, reverseFlowGpm: 300, bypassFlowGpm: 0 })],
      [0],
    );
    expect(bar?.reverseGpm).toBeCloseTo(100, 9);
    expect(bar?.forwardGpm).toBeCloseTo(100, 9);
    expect(bar?.kind).toBe('forward');
  });
  it('tells an hour without data from one when the plant stood', () => {
    const bars = hourBars(
      [hour({ hourStartMs: HOUR_MS }), hour({ hourStartMs: 2 * HOUR_MS, quality: 0 })],
      [0, HOUR_MS, 2 * HOUR_MS],
    );
    expect(bars.map((bar) => bar.kind)).toEqual(['no-data', 'off', 'no-data']);
  });
  it('gives a still or unknown hour no bar', () => {
    const bars = hourBars(
      [
        hour({ stillMinutes: 50, forwardMinutes: 10, bypassFlowGpm: 5 }),
        hour({ hourStartMs: HOUR_MS, unknownMinutes: 60 }),
      ],
      [0, HOUR_MS],
    );
    expect(bars.map((bar) => [bar.kind, bar.forwardGpm, bar.reverseGpm])).toEqual([
      ['still', 0, 0],
      ['unknown', 0, 0],
    ]);
  });
});

describe('dominantCause', () => {
  it('is the cause that cost most, not the one with most hours', () => {
    const hours = [
      hour({ low: true, cause: 'coil-shortfall', excessCost: 1, excessFlowGpm: 900 }),
      hour({ low: true, cause: 'coil-shortfall', excessCost: 1, excessFlowGpm: 900 }),
      hour({ low: true, cause: 'reverse-flow', excessCost: 5, excessFlowGpm: 300 }),
    ];
    expect(dominantCause(hours)).toBe('reverse-flow');
  });
  it('goes by flow as soon as one low hour has no cost', () => {
    const hours = [
      hour({ low: true, cause: 'coil-shortfall', excessFlowGpm: 900 }),
      hour({ low: true, cause: 'reverse-flow', excessCost: 5, excessFlowGpm: 300 }),
    ];
    expect(dominantCause(hours)).toBe('coil-shortfall');
  });
  it('is none of a day without low hours', () => {
    expect(dominantCause([hour({ cause: 'reverse-flow', excessCost: 9 })])).toBeNull();
  });
});

describe('situationOf', () => {
  const slot: DaySlot = {
    startMs: HOUR_MS + 300_000,
    reverse: true,
    bypassFlowGpm: -966,
    bypassFlowLoGpm: NaN,
    bypassFlowHiGpm: NaN,
    blendedSupplyF: 49,
    primarySupplyF: 44,
    primaryFlowGpm: 1720,
    secondaryFlowGpm: 2686,
  };
  it('counts the units of the hour the flow fell in, and the most of the day', () => {
    const hours = [
      hour({ unitsRunning: 1 }),
      hour({ hourStartMs: HOUR_MS, unitsRunning: 2 }),
      hour({ hourStartMs: 2 * HOUR_MS, unitsRunning: 2.4 }),
    ];
    expect(situationOf(slot, hours, 3)).toMatchObject({
      unitsRunning: 2,
      mostUnitsRunning: 3,
      productionFlowGpm: 1720,
    });
  });
  it('does not name a number of units that changed within the hour', () => {
    expect(situationOf(slot, [hour({ hourStartMs: HOUR_MS, unitsRunning: 1.5 })], 3)?.unitsRunning).toBeNull();
  });
  it('is nothing when a flow is not known', () => {
    expect(situationOf({ ...slot, primaryFlowGpm: NaN }, [], 3)).toBeNull();
  });
});
