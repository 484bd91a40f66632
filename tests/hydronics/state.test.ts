import { describe, expect, test } from 'vitest';
import { markQuality } from '@/lib/hydronics/quality';
import { plantStates } from '@/lib/hydronics/state';
import { markSteady } from '@/lib/hydronics/steadiness';
import { STATES } from '@/lib/hydronics/types';
import type { Measurements } from '@/lib/hydronics/types';
import { plantOf, recordOf } from './support/plants';

const plant = plantOf();
function statesOf(record: Measurements): string[] {
  const codes = new Float64Array(record.n);
  plantStates(record, plant, codes);
  return Array.from(codes, (code) => STATES[code] ?? '?');
}
function steadyOf(record: Measurements): number[] {
  const steady = new Float64Array(record.n);
  markSteady(record, plant, steady);
  return [...steady];
}

describe('plantStates', () => {
  test('starting lasts 15 minutes after the first unit comes on, and a second unit starts nothing', () => {
    const record = recordOf(
      8,
      5,
      { secondaryFlowGpm: [0, 0, 900, 900, 900, 900, 900, 900] },
      {
        unitStatus: [
          [0, 0, 1, 1, 1, 1, 1, 1],
          [0, 0, 0, 0, 0, 0, 1, 1],
        ],
      },
    );
    expect(statesOf(record)).toEqual([
      'off',
      'off',
      'starting',
      'starting',
      'starting',
      'running',
      'running',
      'running',
    ]);
  });

  test('pulling a warm loop down still counts as starting, but for an hour at the most', () => {
    const n = 16;
    const on = Array.from({ length: n }, (_, slot) => (slot === 0 ? 0 : 1));
    const warm = recordOf(n, 5, { primarySupplyF: 60 }, { unitStatus: [on, 0] });
    expect(statesOf(warm).slice(1, 13)).toEqual(new Array(12).fill('starting'));
    expect(statesOf(warm).slice(13)).toEqual(['running', 'running', 'running']);
    // Against the set-point in force, not the design one.
    const reset = recordOf(n, 5, { primarySupplyF: 54, supplySetpointF: 52 }, { unitStatus: [on, 0] });
    expect(statesOf(reset).slice(1, 6)).toEqual(['starting', 'starting', 'starting', 'running', 'running']);
  });

  test('units off with the distribution pumped is coasting, by flow or by pump power', () => {
    expect(statesOf(recordOf(1, 5, { secondaryFlowGpm: 700 }, { unitStatus: [0, 0] }))).toEqual(['coasting']);
    expect(statesOf(recordOf(1, 5, { distributionPumpPowerKw: 12 }, { unitStatus: [0, 0] }))).toEqual(['coasting']);
    expect(statesOf(recordOf(1, 5, { secondaryFlowGpm: 20 }, { unitStatus: [0, 0] }))).toEqual(['off']);
    expect(statesOf(recordOf(1, 5, {}, { unitStatus: [0, 0] }))).toEqual(['off']);
  });

  test('without status, power tells; without power, the unit’s flow; then primary flow and rise', () => {
    expect(statesOf(recordOf(1, 5, {}, { unitPowerKw: [200, 0] }))).toEqual(['running']);
    expect(statesOf(recordOf(1, 5, {}, { unitPowerKw: [2, 0] }))).toEqual(['off']);
    expect(statesOf(recordOf(1, 5, {}, { unitFlowGpm: [850, 0] }))).toEqual(['running']);
    expect(statesOf(recordOf(1, 5, { primaryFlowGpm: 900 }))).toEqual(['running']);
    expect(statesOf(recordOf(1, 5, { primaryFlowGpm: 5 }))).toEqual(['off']);
    const idle = { primaryFlowGpm: 900, secondaryFlowGpm: 900, primarySupplyF: 58, secondaryReturnF: 58.3 };
    expect(statesOf(recordOf(1, 5, idle))).toEqual(['coasting']);
    expect(statesOf(recordOf(1, 5, { primarySupplyF: 44, secondaryReturnF: 54 }))).toEqual(['running']);
  });

  test('what nothing measured tells is unknown, and so is a loop whose temperatures are close and flow unmeasured', () => {
    expect(statesOf(recordOf(1, 5, {}))).toEqual(['unknown']);
    expect(statesOf(recordOf(1, 5, { primarySupplyF: 50, secondaryReturnF: 50.3 }))).toEqual(['unknown']);
  });

  test('a record that begins, or goes on after a gap, with units on is running: nothing says that it just started', () => {
    const record = recordOf(
      3,
      5,
      {},
      {
        unitStatus: [
          [1, Number.NaN, 1],
          [0, Number.NaN, 0],
        ],
      },
    );
    expect(statesOf(record)).toEqual(['running', 'unknown', 'running']);
  });

  test('one unit on is enough; one silent unit beside stopped ones leaves it open', () => {
    expect(statesOf(recordOf(1, 5, {}, { unitStatus: [1, Number.NaN] }))).toEqual(['running']);
    expect(statesOf(recordOf(1, 5, {}, { unitStatus: [0, Number.NaN] }))).toEqual(['unknown']);
  });

  test('refuses an output of another length', () => {
    expect(() => plantStates(recordOf(2, 5, {}), plant, new Float64Array(3))).toThrow(RangeError);
  });
});

describe('markSteady', () => {
  test('a quiet record is steady throughout', () => {
    expect(steadyOf(recordOf(6, 5, { primarySupplyF: 44, secondaryFlowGpm: 900 }, { unitStatus: [1, 0] }))).toEqual(
      new Array(6).fill(1),
    );
  });

  test('staging marks the five minutes to each side', () => {
    const status = [1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1];
    const second = status.map((_, minute) => (minute >= 8 ? 1 : 0));
    const steady = steadyOf(recordOf(16, 1, {}, { unitStatus: [status, second] }));
    expect(steady).toEqual([1, 1, 1, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 1, 1, 1]);
  });

  test('a jump in flow or temperature marks its surroundings, sensor noise does not', () => {
    const jump = [44, 44, 44, 47, 47, 47];
    expect(steadyOf(recordOf(6, 5, { secondarySupplyF: jump }))).toEqual([1, 1, 0, 0, 1, 1]);
    const flow = [900, 900, 900, 1300, 1300, 1300];
    expect(steadyOf(recordOf(6, 5, { secondaryFlowGpm: flow }))).toEqual([1, 1, 0, 0, 1, 1]);
    expect(steadyOf(recordOf(6, 5, { secondarySupplyF: [44, 44.3, 43.8, 44.2, 44, 44.1] }))).toEqual(
      new Array(6).fill(1),
    );
  });

  test('missing neighbours are no change', () => {
    expect(steadyOf(recordOf(3, 5, { primarySupplyF: [Number.NaN, 44, Number.NaN] }))).toEqual([1, 1, 1]);
  });

  test('refuses an output of another length', () => {
    expect(() => markSteady(recordOf(2, 5, {}), plant, new Float64Array(3))).toThrow(RangeError);
  });
});

describe('markQuality', () => {
  test('is the share of the plant’s own points that were measured', () => {
    const quality = new Float64Array(3);
    const record = recordOf(
      3,
      5,
      { primarySupplyF: [44, Number.NaN, Number.NaN], secondaryFlowGpm: [900, 900, Number.NaN] },
      {
        unitStatus: [
          [1, 1, Number.NaN],
          [0, Number.NaN, Number.NaN],
        ],
      },
    );
    markQuality(record, quality);
    expect([...quality]).toEqual([1, 0.5, 0]);
  });

  test('does not count what the estimate does not read', () => {
    const quality = new Float64Array(1);
    markQuality(recordOf(1, 5, { primarySupplyF: 44, outdoorF: Number.NaN }), quality);
    expect(quality[0]).toBe(1);
  });

  test('refuses an output of another length', () => {
    expect(() => markQuality(recordOf(2, 5, {}), new Float64Array(3))).toThrow(RangeError);
  });
});
