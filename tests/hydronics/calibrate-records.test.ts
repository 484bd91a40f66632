import { describe, expect, test } from 'vitest';
import { calibrateRecord } from '@/lib/hydronics/calibrate';
import type { Calibration } from '@/lib/hydronics/calibration-types';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { choleskyInPlace } from '@/lib/hydronics/linear-algebra';
import { parameterCount, SET_GAINS, setOffset } from '@/lib/hydronics/sensor-errors';
import { RESULT_CHANNELS } from '@/lib/hydronics/types';
import type { Measurements, PlantModel } from '@/lib/hydronics/types';
import { furtherSensors } from '@/lib/hydronics/value-of-information';
import { simulatePlant } from '../support/simulation/simulate';
import { exactLoop, LOOP_TEMPERATURES } from './support/exact-loop';
import { plantOf, recordOf } from './support/plants';

const plant = plantOf();
const N = 96;

/** Values and covariance are numbers, the covariance one of possible errors, and estimates rest on it without failing. */
function expectSound(record: Measurements, of: PlantModel = plant): Calibration {
  const calibration = calibrateRecord(record, of);
  const p = parameterCount(calibration.sets.length);
  expect(calibration.values).toHaveLength(p);
  expect(calibration.values.every(Number.isFinite)).toBe(true);
  expect(calibration.covariance.every(Number.isFinite)).toBe(true);
  expect(choleskyInPlace(Float64Array.from(calibration.covariance), p)).toBe(true);
  expect(calibration.shareScale).toBeGreaterThan(0);
  for (const { value, lo, hi, told } of calibration.findings) {
    expect(lo).toBeLessThanOrEqual(value);
    expect(hi).toBeGreaterThanOrEqual(value);
    expect(told >= 0 && told <= 1).toBe(true);
  }
  const estimates = estimateIntervals(record, of, calibration);
  for (const channel of RESULT_CHANNELS) {
    expect([channel, estimates[channel].some((value) => Math.abs(value) === Infinity)]).toEqual([channel, false]);
  }
  return calibration;
}

const LOOP = { primarySupplyF: 44, primaryReturnF: 54, secondarySupplyF: 45, secondaryReturnF: 56 };
const FLOWS = { primaryFlowGpm: 1000, secondaryFlowGpm: 1100 };
const missing = Array.from({ length: N }, () => Number.NaN);

describe('a record with hardly anything in it is calibrated without failing', () => {
  test.each<[string, Measurements]>([
    ['empty', recordOf(0, 15, {})],
    ['one interval', recordOf(1, 15, { ...LOOP, ...FLOWS })],
    ['no points', recordOf(N, 15, {})],
    ['points without readings', recordOf(N, 15, { primarySupplyF: missing, secondaryFlowGpm: missing })],
    ['one temperature', recordOf(N, 15, { primarySupplyF: 44 })],
    ['one meter', recordOf(N, 15, { secondaryFlowGpm: 1100 })],
    ['the pipe’s own sensor', recordOf(N, 15, { bypassF: 50, bypassFlowUnsignedGpm: 100 })],
    ['flows of zero', recordOf(N, 15, { ...LOOP, primaryFlowGpm: 0, secondaryFlowGpm: 0 })],
    ['one flow of zero', recordOf(N, 15, { ...LOOP, primaryFlowGpm: 1000, secondaryFlowGpm: 0 })],
    [
      'equal temperatures',
      recordOf(N, 15, { primarySupplyF: 50, primaryReturnF: 50, secondarySupplyF: 50, secondaryReturnF: 50, ...FLOWS }),
    ],
    [
      'supply warmer than return',
      recordOf(N, 15, { primarySupplyF: 56, primaryReturnF: 46, secondarySupplyF: 55, secondaryReturnF: 44, ...FLOWS }),
    ],
    ['a meter that reads backwards', recordOf(N, 15, { ...LOOP, primaryFlowGpm: -1000, secondaryFlowGpm: 1100 })],
    ['readings held at one value', recordOf(N, 15, { ...LOOP, ...FLOWS })],
    [
      'status without rated flow to go by',
      recordOf(N, 15, { ...LOOP, secondaryFlowGpm: 1100 }, { unitStatus: [1, Number.NaN] }),
    ],
  ])('%s', (_, record) => {
    expectSound(record);
  });

  test('readings that are not finite', () => {
    const wild = Array.from({ length: N }, (_, slot) => [44, Infinity, -Infinity, Number.NaN, 1e300][slot % 5]!);
    const flow = Array.from(
      { length: N },
      (_, slot) => [1100, Infinity, -Infinity, Number.NaN, 1e300][(slot + 2) % 5]!,
    );
    expectSound(recordOf(N, 15, { ...LOOP, primarySupplyF: wild, secondaryFlowGpm: flow, primaryFlowGpm: 1000 }));
    expectSound(
      recordOf(
        N,
        15,
        { secondarySupplyF: 45, secondaryReturnF: 56, secondaryFlowGpm: flow },
        { unitLeavingF: [wild], unitFlowGpm: [flow], unitStatus: [1, 0] },
      ),
    );
  });

  test('a plant of each arrangement', () => {
    const { record } = exactLoop({ days: 1 });
    for (const arrangement of ['primary-secondary', 'variable-primary', 'building-bridge'] as const) {
      expectSound(record, plantOf(undefined, arrangement));
    }
  });

  test('refuses a channel of another length, naming it', () => {
    const record = { ...recordOf(N, 15, LOOP), secondaryFlowGpm: new Float64Array(3) };
    expect(() => calibrateRecord(record, plant)).toThrow(/secondaryFlowGpm has length 3/);
  });

  test('nothing is written to what it was given', () => {
    const { record } = exactLoop({ days: 1, stepMinutes: 30 });
    const before = structuredClone(record);
    calibrateRecord(record, plant);
    expect(record).toEqual(before);
  });
});

describe('a calibration that was stored as JSON', () => {
  const { record } = exactLoop({ days: 2, channels: [...LOOP_TEMPERATURES, 'secondaryFlowGpm'] });
  const calibration = calibrateRecord(record, plant);
  // What is not a number (noise of points that do not exist) becomes null.
  const stored = JSON.parse(JSON.stringify(calibration)) as Calibration;

  test('has null where it had no number, and only there', () => {
    expect(calibration.noise.some(Number.isNaN)).toBe(true);
    const noise: (number | null)[] = stored.noise;
    expect(noise.map((value) => value ?? Number.NaN)).toEqual(calibration.noise);
    expect(stored.values).toEqual(calibration.values);
    expect(stored.covariance).toEqual(calibration.covariance);
  });

  test('gives the same estimates as it stands, and the same advice', () => {
    expect(estimateIntervals(record, plant, stored)).toEqual(estimateIntervals(record, plant, calibration));
    expect(furtherSensors(record, plant, stored)).toEqual(furtherSensors(record, plant, calibration));
  });
});

describe('a plant with pumps of rated flow', () => {
  const sim = simulatePlant({
    seed: 14,
    sensing: 'pump-status',
    balance: 'varied',
    days: 4,
    units: 2,
    ratedFlowPercent: 10,
    nightOff: false,
    bypassTemp: false,
    missing: false,
    spikes: false,
  });
  const calibration = calibrateRecord(sim.measurements, sim.plant);
  /** The same plant with its two units listed the other way round. */
  const swap = <Value>(values: readonly Value[]): Value[] => [...values].reverse();
  const turned: Measurements = {
    ...sim.measurements,
    unitStatus: swap(sim.measurements.unitStatus),
    primaryPumpStatus: swap(sim.measurements.primaryPumpStatus),
  };
  const turnedPlant: PlantModel = { ...sim.plant, units: swap(sim.plant.units) };
  const again = calibrateRecord(turned, turnedPlant);
  const turnedMask = (mask: number) => (mask < 0 ? mask : ((mask & 1) << 1) | (mask >> 1));

  test('has a gain for each set of units that ran, most frequent first', () => {
    expect(calibration.sets.length).toBeGreaterThanOrEqual(3);
    expect(calibration.sets.at(-1)).toBe(-1);
    expect(calibration.values).toHaveLength(parameterCount(calibration.sets.length));
    const finding = calibration.findings.find(({ role }) => role === 'ratedFlow')!;
    expect(finding.value).toBeCloseTo(100 * calibration.values[SET_GAINS]!, 9);
    expect(calibration.findings.some(({ role }) => role === 'primaryFlow')).toBe(false);
  });

  test('says the same of each set whichever way its units are listed', () => {
    expect([...again.sets].sort()).toEqual([...calibration.sets].map(turnedMask).sort());
    const count = calibration.sets.length;
    calibration.sets.forEach((mask, index) => {
      const place = again.sets.indexOf(turnedMask(mask));
      expect(again.values[SET_GAINS + place]).toBeCloseTo(calibration.values[SET_GAINS + index]!, 5);
      expect(again.values[setOffset(count, place)]).toBeCloseTo(calibration.values[setOffset(count, index)]!, 5);
    });
    for (let place = 0; place < SET_GAINS; place += 1) {
      expect(again.values[place]).toBeCloseTo(calibration.values[place]!, 5);
    }
  });

  test('is answered alike whichever way its units are listed', () => {
    const estimates = estimateIntervals(sim.measurements, sim.plant, calibration);
    const turnedRound = estimateIntervals(turned, turnedPlant, again);
    let apart = 0;
    for (let slot = 0; slot < sim.measurements.n; slot += 1) {
      const [one, other] = [estimates.bypass_flow_gpm[slot]!, turnedRound.bypass_flow_gpm[slot]!];
      if (!(Math.abs(one - other) < 0.5) && !(Number.isNaN(one) && Number.isNaN(other))) apart += 1;
    }
    expect(apart).toBeLessThan(0.005 * sim.measurements.n);
  });

  test('uses its sets on a stretch of the record in which only some of them ran', () => {
    const day = recordOf(N, 15, { secondaryFlowGpm: 200 }, { unitStatus: [1, 0], primaryPumpStatus: [1, 0] });
    const estimates = estimateIntervals(day, sim.plant, calibration);
    const place = calibration.sets.indexOf(1);
    const gain = calibration.values[SET_GAINS + place]!;
    expect(Math.abs(gain)).toBeGreaterThan(0.02);
    const ratedGpm = sim.plant.units[0]!.flowGpm;
    expect(estimates.primary_flow_gpm[10]! / (ratedGpm / (1 + gain))).toBeCloseTo(1, 2);
  });
});

test('two meters that nothing else checks are left as their class says, though they disagree', () => {
  const { record } = exactLoop({
    days: 3,
    channels: ['primaryFlowGpm', 'secondaryFlowGpm'],
    errors: { primaryFlowGpm: 0.03, secondaryFlowGpm: -0.02 },
  });
  const { findings } = calibrateRecord(record, plantOf());
  expect(findings.map(({ role, value, told, tie }) => ({ role, value, told, tie }))).toEqual([
    { role: 'primaryFlow', value: 0, told: 0, tie: 'none' },
    { role: 'secondaryFlow', value: 0, told: 0, tie: 'none' },
  ]);
});
