import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { calibrateRecord } from '@/lib/hydronics/calibrate';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { DIRECTIONS, REASONS, RESULT_CHANNELS, STATES } from '@/lib/hydronics/types';
import type { Estimates, Measurements } from '@/lib/hydronics/types';
import { BOTH_METERS, exactLoop, LOOP_TEMPERATURES } from './support/exact-loop';
import type { LoopChannel } from './support/exact-loop';
import { plantOf, recordOf, TWO_UNITS } from './support/plants';

const N = 64;
const LOOP_CHANNELS = [
  'primarySupplyF',
  'primaryReturnF',
  'secondarySupplyF',
  'secondaryReturnF',
  'bypassF',
  'headerSupplyF',
  'primaryFlowGpm',
  'secondaryFlowGpm',
  'bypassFlowGpm',
  'bypassFlowUnsignedGpm',
  'bypassValvePercent',
  'supplySetpointF',
] as const satisfies readonly (keyof Measurements)[];

/** What every slot's numbers keep, whatever was measured. */
function expectConsistent(estimates: Estimates, n: number): void {
  for (const channel of RESULT_CHANNELS) {
    expect(estimates[channel]).toHaveLength(n);
    expect([channel, estimates[channel].some((value) => Math.abs(value) === Infinity)]).toEqual([channel, false]);
  }
  const within = (low: number, value: number, high: number) => Number.isNaN(value) || (low <= value && value <= high);
  for (let slot = 0; slot < n; slot += 1) {
    const at = (channel: (typeof RESULT_CHANNELS)[number]) => estimates[channel][slot]!;
    expect(within(0, at('reverse_probability'), 1)).toBe(true);
    expect(within(at('bypass_flow_lo_gpm'), at('bypass_flow_gpm'), at('bypass_flow_hi_gpm'))).toBe(true);
    expect(within(at('blended_supply_lo_f'), at('blended_supply_f'), at('blended_supply_hi_f'))).toBe(true);
    const [direction, reason] = [DIRECTIONS[at('direction')], REASONS[at('reason')]];
    expect(direction).toBeDefined();
    expect(STATES[at('state')]).toBeDefined();
    expect(reason === '').toBe(direction !== 'unknown');
    if (direction === 'reverse') expect(at('reverse_probability')).toBeGreaterThanOrEqual(0.75);
    if (direction === 'forward') expect(at('reverse_probability')).toBeLessThanOrEqual(0.25);
  }
}

/** A sensor in some state: steady with noise, drifting, stuck, at zero, wild, with gaps or infinite readings. */
const sensor = (low: number, high: number) => {
  const level = fc.double({ min: low, max: high, noNaN: true });
  const reading = fc.oneof(
    { weight: 6, arbitrary: fc.double({ min: -1, max: 1, noNaN: true }) },
    { weight: 1, arbitrary: fc.constantFrom(Number.NaN, Infinity, -Infinity, 1e9, -1e4, 40) },
  );
  const whole = fc.constantFrom(0, Number.NaN, -5, high);
  const readings = fc.array(reading, { minLength: N, maxLength: N });
  return fc.oneof(
    { weight: 5, arbitrary: fc.tuple(level, readings).map(([at, away]) => away.map((x, i) => at + x + 0.02 * i)) },
    { weight: 1, arbitrary: whole.map((value) => Array.from({ length: N }, () => value)) },
  );
};
const ranges: Record<(typeof LOOP_CHANNELS)[number], [number, number]> = {
  primarySupplyF: [40, 50],
  primaryReturnF: [46, 62],
  secondarySupplyF: [40, 54],
  secondaryReturnF: [46, 62],
  bypassF: [40, 70],
  headerSupplyF: [40, 54],
  primaryFlowGpm: [0, 2200],
  secondaryFlowGpm: [0, 2200],
  bypassFlowGpm: [-900, 900],
  bypassFlowUnsignedGpm: [0, 900],
  bypassValvePercent: [0, 100],
  supplySetpointF: [40, 48],
};
const channels = fc.record(
  Object.fromEntries(LOOP_CHANNELS.map((name) => [name, sensor(...ranges[name])])) as Record<
    (typeof LOOP_CHANNELS)[number],
    fc.Arbitrary<number[]>
  >,
  { requiredKeys: [] },
);
const status = fc.array(fc.constantFrom(0, 1, 1, Number.NaN, 0.4), { minLength: N, maxLength: N });
const units = fc.record({
  unitStatus: fc.array(status, { maxLength: 2 }),
  primaryPumpStatus: fc.array(status, { maxLength: 2 }),
  unitLeavingF: fc.array(sensor(40, 50), { maxLength: 2 }),
  unitFlowGpm: fc.array(sensor(0, 1000), { maxLength: 2 }),
});
const arrangement = fc.constantFrom(
  'primary-secondary' as const,
  'variable-primary' as const,
  'building-bridge' as const,
);
const BRIDGE = { ...TWO_UNITS, design: { ...TWO_UNITS.design, blendedSupplyF: 46 } };

describe('any sensors in any state, any arrangement, any step', () => {
  test('give a calibration and estimates within their own bounds, without failing', () => {
    fc.assert(
      fc.property(arrangement, channels, units, fc.constantFrom(1, 5, 15, 60), (kind, loop, perUnit, stepMinutes) => {
        const plant = plantOf(kind === 'building-bridge' ? BRIDGE : TWO_UNITS, kind);
        const record = recordOf(N, stepMinutes, loop, perUnit);
        const calibration = calibrateRecord(record, plant);
        expect(calibration.values.every(Number.isFinite)).toBe(true);
        expect(calibration.covariance.every(Number.isFinite)).toBe(true);
        expectConsistent(estimateIntervals(record, plant, calibration), N);
        expectConsistent(estimateIntervals(record, plant), N);
      }),
      { numRuns: 120, seed: 20, endOnFailure: true },
    );
  }, 60_000);

  test('may be estimated with a calibration of another record of the plant', () => {
    const { record } = exactLoop({ days: 2, channels: [...BOTH_METERS, 'bypassFlowGpm'] });
    const calibration = calibrateRecord(record, plantOf());
    fc.assert(
      fc.property(channels, units, (loop, perUnit) => {
        expectConsistent(estimateIntervals(recordOf(N, 5, loop, perUnit), plantOf(), calibration), N);
      }),
      { numRuns: 60, seed: 21, endOnFailure: true },
    );
  }, 30_000);
});

describe('one wild reading', () => {
  const forward = (slot: number) => 0.25 + 0.02 * Math.sin(slot / 9);
  const loops = [
    ['forward', exactLoop({ seed: 3, days: 1, stepMinutes: 5, share: forward, noiseF: 0.1, noiseShare: 0.01 }).record],
    [
      'reverse',
      exactLoop({ seed: 4, days: 1, stepMinutes: 5, share: (slot) => -forward(slot), noiseF: 0.1, noiseShare: 0.01 })
        .record,
    ],
  ] as const;
  const wild = fc.oneof(fc.double({ min: -40, max: 40, noNaN: true }), fc.constantFrom(-1e3, 1e3, 0, 5, -5, 8, -8));

  test.each(loops)(
    'in a record of clear %s flow does not turn its interval round, nor its neighbours',
    (way, record) => {
      const calibration = calibrateRecord(record, plantOf());
      const plain = estimateIntervals(record, plantOf(), calibration);
      const code = DIRECTIONS.indexOf(way);
      const opposite = DIRECTIONS.indexOf(way === 'forward' ? 'reverse' : 'forward');
      expect(plain.direction.every((direction) => direction === code)).toBe(true);
      const slots = fc.integer({ min: 10, max: record.n - 10 });
      fc.assert(
        fc.property(fc.constantFrom(...BOTH_METERS), slots, wild, (channel: LoopChannel, slot, away) => {
          const values = record[channel]!.slice();
          values[slot]! += channel.endsWith('Gpm') ? 40 * away : away;
          const estimates = estimateIntervals({ ...record, [channel]: values }, plantOf(), calibration);
          for (let near = slot - 8; near <= slot + 8; near += 1) {
            expect(estimates.direction[near]).not.toBe(opposite);
            if (near !== slot) expect(estimates.direction[near]).toBe(code);
          }
        }),
        { numRuns: 150, seed: 5 },
      );
    },
    30_000,
  );

  test.each(loops)('in a record of clear %s flow without meters is at most undecided', (way, record) => {
    const bare = { ...record };
    delete bare.primaryFlowGpm;
    delete bare.secondaryFlowGpm;
    const calibration = calibrateRecord(bare, plantOf());
    const code = DIRECTIONS.indexOf(way);
    fc.assert(
      fc.property(fc.constantFrom(...LOOP_TEMPERATURES), fc.constantFrom(-20, -6, -4, 4, 6, 20), (channel, away) => {
        const values = bare[channel]!.slice();
        values[100]! += away;
        const { direction } = estimateIntervals({ ...bare, [channel]: values }, plantOf(), calibration);
        expect([code, DIRECTIONS.indexOf('unknown')]).toContain(direction[100]);
        for (const near of [95, 98, 99, 101, 102, 105]) expect(direction[near]).toBe(code);
      }),
      { numRuns: 24, seed: 6 },
    );
  });
});
