import { describe, expect, test } from 'vitest';
import { calibrateRecord } from '@/lib/hydronics/calibrate';
import type { Calibration, SpotCheck } from '@/lib/hydronics/calibration-types';
import { NINETY_PERCENT_Z } from '@/lib/hydronics/normal';
import {
  BYPASS_GAIN,
  parameterCount,
  PRIMARY_GAIN,
  priorCovariance,
  SECONDARY_GAIN,
} from '@/lib/hydronics/sensor-errors';
import { choleskyInPlace } from '@/lib/hydronics/linear-algebra';
import { randomSource } from '../support/simulation/random';
import { BOTH_METERS, CHANNEL_ROLES, exactLoop, LOOP_TEMPERATURES, swing } from './support/exact-loop';
import type { ExactLoopOptions, LoopChannel } from './support/exact-loop';
import { plantOf } from './support/plants';

const plant = plantOf();
const DAYS = 3;
const PER_DAY = 96;

function calibrated(options: ExactLoopOptions, checks: readonly SpotCheck[] = []): Calibration {
  return calibrateRecord(exactLoop({ days: DAYS, ...options }).record, plant, checks);
}

const findingOf = (calibration: Calibration, channel: LoopChannel) =>
  calibration.findings.find((finding) => finding.role === CHANNEL_ROLES[channel]);
/** What a calibration says a sensor reads too high: deg F or share. */
const foundOf = (calibration: Calibration, channel: LoopChannel): number => {
  const finding = findingOf(calibration, channel);
  return (finding?.value ?? Number.NaN) / (finding?.kind === 'gain' ? 100 : 1);
};
const sigmaOf = ({ covariance, sets }: Calibration, place: number): number =>
  Math.sqrt(covariance[place * parameterCount(sets.length) + place]!);

/** Errors drawn for every sensor: offsets within half a degree, gains within 4 %. */
function planted(seed: number): Record<LoopChannel, number> {
  const random = randomSource(seed, 'planted');
  const entries = Object.keys(CHANNEL_ROLES).map((name) => [
    name,
    name.endsWith('Gpm') ? random.within(0.02, 0.04) : random.within(0.25, 0.5),
  ]);
  return Object.fromEntries(entries) as Record<LoopChannel, number>;
}

/** Errors of the offsets found, less their mean: an offset that all share cannot be told. */
function offsetMisses(calibration: Calibration, errors: Record<LoopChannel, number>): number[] {
  const misses = LOOP_TEMPERATURES.map((name) => foundOf(calibration, name) - errors[name]);
  const mean = misses.reduce((sum, miss) => sum + miss, 0) / misses.length;
  return misses.map((miss) => miss - mean);
}

describe('a record that goes both ways, with planted errors', () => {
  test.each([1, 2, 3, 4])(
    'tells the offsets within 0.06 F and the meters’ ratio within 0.3 percent: draw %i',
    (seed) => {
      const errors = planted(seed);
      const calibration = calibrated({ seed, errors });
      for (const miss of offsetMisses(calibration, errors)) expect(Math.abs(miss)).toBeLessThan(0.06);
      const ratio = (1 + foundOf(calibration, 'primaryFlowGpm')) / (1 + foundOf(calibration, 'secondaryFlowGpm'));
      const truth = (1 + errors.primaryFlowGpm) / (1 + errors.secondaryFlowGpm);
      expect(Math.abs(ratio / truth - 1)).toBeLessThan(0.003);
    },
  );

  test.each([1, 2, 3])(
    'tells with one meter or none how far each pair of sensors is apart, within 0.05 F: draw %i',
    (seed) => {
      const errors = planted(seed);
      for (const channels of [[...LOOP_TEMPERATURES, 'secondaryFlowGpm'], LOOP_TEMPERATURES] as const) {
        const calibration = calibrated({ seed, errors, channels });
        for (const [one, other] of [
          ['primarySupplyF', 'secondarySupplyF'],
          ['primaryReturnF', 'secondaryReturnF'],
        ] as const) {
          const apart = foundOf(calibration, one) - foundOf(calibration, other);
          expect(Math.abs(apart - (errors[one] - errors[other]))).toBeLessThan(0.05);
        }
      }
    },
  );

  test('tells a meter in the common pipe against the mains', () => {
    const errors = { ...planted(5), bypassFlowGpm: 0.06 };
    const calibration = calibrated({ errors, channels: [...BOTH_METERS, 'bypassFlowGpm'] });
    const against = foundOf(calibration, 'bypassFlowGpm') - foundOf(calibration, 'primaryFlowGpm');
    expect(findingOf(calibration, 'bypassFlowGpm')?.tie).toBe('flow-balance');
    expect(Math.abs(against - (errors.bypassFlowGpm - errors.primaryFlowGpm))).toBeLessThan(0.03);
  });

  test('holds the truth in its intervals', () => {
    let [held, all] = [0, 0];
    for (const seed of [1, 2, 3, 4, 5, 6]) {
      const errors = planted(seed);
      const calibration = calibrated({ seed, errors, days: 2 });
      for (const name of BOTH_METERS) {
        const { lo, hi, kind } = findingOf(calibration, name)!;
        const value = errors[name] * (kind === 'gain' ? 100 : 1);
        all += 1;
        if (value >= lo && value <= hi) held += 1;
      }
    }
    // 36 intervals of 90 %: fewer than 29 would be a chance of one in a hundred.
    expect(held / all).toBeGreaterThan(0.8);
  });

  test('says how unsure it is of what sensors with 1 F of noise tell', () => {
    const scores: number[] = [];
    for (let seed = 1; seed <= 24; seed += 1) {
      const errors = planted(seed);
      const share = (slot: number) => 0.25 + 0.05 * Math.sin(slot / 5);
      const options = { seed, errors, share, days: 1.5, noiseF: 1, channels: LOOP_TEMPERATURES };
      const calibration = calibrated(options);
      const p = parameterCount(0);
      const at = (i: number, j: number) => calibration.covariance[i * p + j]!;
      // Forward flow: both supplies, first and third, are one stream.
      const sigma = Math.sqrt(at(0, 0) + at(2, 2) - 2 * at(0, 2));
      const apart = calibration.values[0]! - calibration.values[2]!;
      scores.push((apart - (errors.primarySupplyF - errors.secondarySupplyF)) / sigma);
    }
    const rms = Math.sqrt(scores.reduce((sum, z) => sum + z * z, 0) / scores.length);
    expect(rms).toBeGreaterThan(0.4);
    expect(rms).toBeLessThan(1.25);
  });

  test('is not led astray by an hour in which one sensor is 8 F off', () => {
    const errors = planted(2);
    const { record } = exactLoop({ seed: 2, days: DAYS, errors });
    for (let slot = 100; slot < 104; slot += 1) record.secondarySupplyF![slot]! += 8;
    for (const miss of offsetMisses(calibrateRecord(record, plant), errors)) expect(Math.abs(miss)).toBeLessThan(0.07);
  });
});

describe('what no record of its kind can tell', () => {
  const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
  const offsets = (calibration: Calibration) => LOOP_TEMPERATURES.map((_, place) => calibration.values[place]!);

  test('an offset common to all temperatures stays at zero, with the doubt of four sensors’ mean, and is said', () => {
    const errors = Object.fromEntries(LOOP_TEMPERATURES.map((name) => [name, 0.3]));
    const [plain, moved] = [calibrated({}), calibrated({ errors })];
    expect(moved.limits).toContain('common-offset');
    expect(mean(offsets(moved))).toBeCloseTo(0, 3);
    offsets(moved).forEach((value, place) => expect(value).toBeCloseTo(offsets(plain)[place]!, 2));
    const p = parameterCount(0);
    let variance = 0;
    for (let i = 0; i < 4; i += 1) for (let j = 0; j < 4; j += 1) variance += moved.covariance[i * p + j]! / 16;
    // Sensors of this plant turn out better than their class by as much as 0.7.
    expect(Math.sqrt(variance)).toBeGreaterThan(0.65 * (0.25 / 2));
    for (const { lo, hi } of moved.findings.filter(({ kind }) => kind === 'offset'))
      expect(hi - lo).toBeGreaterThan(0.28);
  });

  test('a gain common to both meters stays at zero, and is said', () => {
    const moved = calibrated({ errors: { primaryFlowGpm: 0.03, secondaryFlowGpm: 0.03 } });
    expect(moved.limits).toContain('common-gain');
    expect(moved.values[PRIMARY_GAIN]! + moved.values[SECONDARY_GAIN]!).toBeCloseTo(0, 3);
    const { lo, hi } = findingOf(moved, 'primaryFlowGpm')!;
    expect((hi - lo) / (2 * NINETY_PERCENT_Z)).toBeGreaterThan(0.65 * 3);
  });

  const forward = (slot: number) => 0.2 + 0.1 * Math.sin(slot / 20);
  test.each([
    [
      'forward',
      forward,
      ['primarySupplyF', 'secondarySupplyF'],
      ['primaryReturnF', 'secondaryReturnF'],
      'supplies-agree',
    ],
    [
      'reverse',
      (slot: number) => -forward(slot),
      ['primaryReturnF', 'secondaryReturnF'],
      ['primarySupplyF', 'secondarySupplyF'],
      'returns-agree',
    ],
  ] as const)('a pair that only mixes, in a record of %s flow alone with one meter', (_, share, tied, untied, tie) => {
    const errors = { [tied[0]]: 0.2, [tied[1]]: -0.2, [untied[0]]: 0.3 };
    const calibration = calibrated({ share, errors, channels: [...LOOP_TEMPERATURES, 'secondaryFlowGpm'] });
    expect(calibration.limits).toContain('one-way-only');
    expect(foundOf(calibration, tied[0]) - foundOf(calibration, tied[1])).toBeCloseTo(0.4, 1);
    for (const channel of tied) expect(findingOf(calibration, channel)).toMatchObject({ tie });
    for (const channel of untied) {
      const { value, tie: none, told, evidenceHours, lo, hi } = findingOf(calibration, channel)!;
      expect(Math.abs(value)).toBeLessThan(0.01);
      expect([none, evidenceHours]).toEqual(['none', 0]);
      expect(told).toBeLessThan(0.05);
      // The class: 0.25 F, less or more as this plant's other sensors turn out.
      expect((hi - lo) / (2 * NINETY_PERCENT_Z)).toBeGreaterThan(0.7 * 0.25);
      expect((hi - lo) / (2 * NINETY_PERCENT_Z)).toBeLessThan(1.5 * 0.25);
    }
  });

  test('flows, where none is measured', () => {
    const calibration = calibrated({ channels: LOOP_TEMPERATURES });
    expect(calibration.limits).toContain('no-flow');
    expect(calibration.limits).not.toContain('common-gain');
    expect(calibration.limits).toContain('span');
    expect(calibration.findings.some(({ kind }) => kind === 'gain')).toBe(false);
    for (const place of [PRIMARY_GAIN, SECONDARY_GAIN, BYPASS_GAIN])
      expect(calibration.values[place]).toBeCloseTo(0, 9);
  });

  test('supplies against returns, with one meter, until both are checked; and never with two', () => {
    const one = [...LOOP_TEMPERATURES, 'secondaryFlowGpm'] as const;
    expect(calibrated({ channels: one }).limits).toContain('span');
    expect(calibrated({ channels: [...one, 'primaryFlowGpm'] }).limits).not.toContain('span');
    expect(calibrated({ channels: ['primarySupplyF', 'primaryFlowGpm'] }).limits).not.toContain('span');
  });

  test('two meters that nothing else checks, in a record of forward flow', () => {
    const calibration = calibrated({
      channels: ['primaryFlowGpm', 'secondaryFlowGpm'],
      errors: { primaryFlowGpm: 0.03, secondaryFlowGpm: -0.03 },
      share: forward,
    });
    for (const channel of ['primaryFlowGpm', 'secondaryFlowGpm'] as const) {
      expect(findingOf(calibration, channel)).toMatchObject({ tie: 'none' });
      expect(Math.abs(foundOf(calibration, channel))).toBeLessThan(0.001);
    }
  });

  test('anything, from less than an hour: sensors are taken as their class says', () => {
    const calibration = calibrated({ days: 0.03, errors: planted(1) });
    expect(calibration.limits).toContain('too-short');
    expect(calibration.values.every((value) => value === 0)).toBe(true);
    expect(calibration.covariance).toEqual([...priorCovariance(plant, 0)]);
    for (const { told, tie } of calibration.findings) expect([told, tie]).toEqual([0, 'none']);
  });
});

describe('a spot check', () => {
  const errors: Record<LoopChannel, number> = {
    ...planted(3),
    primarySupplyF: 0.4,
    primaryReturnF: 0.25,
    secondarySupplyF: 0.2,
    secondaryReturnF: 0.35,
  };
  const { truth, record } = exactLoop({ days: DAYS, errors });
  const check = (channel: LoopChannel, sigma: number, slot = 100): SpotCheck => ({
    slot,
    role: CHANNEL_ROLES[channel],
    reading: truth[channel][slot]!,
    sigma,
    shown: Number.NaN,
  });

  test('of one temperature settles the offset that all share', () => {
    const before = calibrateRecord(record, plant);
    const after = calibrateRecord(record, plant, [check('secondaryReturnF', 0.05)]);
    expect(after.limits).not.toContain('common-offset');
    expect(findingOf(after, 'secondaryReturnF')?.tie).toBe('spot-check');
    for (const name of LOOP_TEMPERATURES) {
      expect(Math.abs(foundOf(before, name) - errors[name])).toBeGreaterThan(0.2);
      expect(Math.abs(foundOf(after, name) - errors[name])).toBeLessThan(0.1);
      const place = LOOP_TEMPERATURES.indexOf(name);
      expect(sigmaOf(after, place)).toBeLessThan(sigmaOf(before, place));
    }
  });

  test('of one flow settles the gain that both meters share', () => {
    const shared = { primaryFlowGpm: 0.04, secondaryFlowGpm: 0.04 };
    const loop = exactLoop({ days: DAYS, errors: shared });
    const reading = loop.truth.secondaryFlowGpm[100]!;
    const spot: SpotCheck = { slot: 100, role: 'secondaryFlow', reading, sigma: 0.5, shown: Number.NaN };
    const after = calibrateRecord(loop.record, plant, [spot]);
    expect(after.limits).not.toContain('common-gain');
    expect(foundOf(after, 'primaryFlowGpm')).toBeCloseTo(0.04, 2);
    expect(foundOf(after, 'secondaryFlowGpm')).toBeCloseTo(0.04, 2);
  });

  test('counts by what the sensor showed then, where that is given, wherever the instant lies', () => {
    const given = { ...check('secondaryReturnF', 0.05), slot: -1000, shown: truth.secondaryReturnF[100]! + 0.35 };
    const after = calibrateRecord(record, plant, [given]);
    expect(Math.abs(foundOf(after, 'secondaryReturnF') - 0.35)).toBeLessThan(0.1);
  });

  test('of which nothing is known of what was shown, or without a doubt above zero, says nothing', () => {
    const plain = calibrateRecord(record, plant);
    const outside = { ...check('secondaryReturnF', 0.05), slot: 10 ** 6 };
    const certain = { ...check('secondaryReturnF', 0.05), sigma: 0 };
    const rated = { ...check('secondaryReturnF', 0.05), role: 'ratedFlow' as const };
    for (const spot of [outside, certain, rated]) expect(calibrateRecord(record, plant, [spot])).toEqual(plain);
  });

  test('stands even where the record is too short to tell anything else', () => {
    const short = exactLoop({ days: 0.03, errors });
    const spot = { ...check('secondaryReturnF', 0.05, 1), reading: short.truth.secondaryReturnF[1]! };
    const after = calibrateRecord(short.record, plant, [spot]);
    expect(after.limits).toContain('too-short');
    expect(Math.abs(after.values[3]! - 0.35)).toBeLessThan(0.1);
    expect(after.values[0]).toBeCloseTo(0, 6);
  });
});

describe('a calibration', () => {
  const calibration = calibrated({ errors: planted(7), share: swing(-0.3, 0.3, PER_DAY) });
  const p = parameterCount(calibration.sets.length);

  test('has a covariance that is symmetric and positive definite', () => {
    expect(calibration.values).toHaveLength(p);
    expect(calibration.covariance).toHaveLength(p * p);
    for (let i = 0; i < p; i += 1) {
      for (let j = 0; j < i; j += 1) {
        expect(calibration.covariance[i * p + j]! - calibration.covariance[j * p + i]!).toBeCloseTo(0, 12);
      }
    }
    expect(choleskyInPlace(Float64Array.from(calibration.covariance), p)).toBe(true);
  });

  test('never knows a sensor better than before by more than it was doubtful: its covariance is within the prior’s', () => {
    const prior = priorCovariance(plant, calibration.sets.length);
    // Twice the class, if this plant's sensors turn out so, and what two ideal tees leave out.
    for (let i = 0; i < p; i += 1) {
      expect(calibration.covariance[i * p + i]).toBeGreaterThan(0);
      expect(calibration.covariance[i * p + i]!).toBeLessThan(4.2 * prior[i * p + i]! + 0.02);
    }
  });

  test('has findings that say what its values and covariance say', () => {
    expect(calibration.findings.map(({ role }) => role)).toEqual(BOTH_METERS.map((name) => CHANNEL_ROLES[name]));
    for (const { role, kind, value, lo, hi, told, evidenceHours } of calibration.findings) {
      const channel = (Object.keys(CHANNEL_ROLES) as LoopChannel[]).find((name) => CHANNEL_ROLES[name] === role)!;
      const temperature = LOOP_TEMPERATURES.indexOf(channel as (typeof LOOP_TEMPERATURES)[number]);
      const place = kind === 'offset' ? temperature : role === 'primaryFlow' ? PRIMARY_GAIN : SECONDARY_GAIN;
      const unit = kind === 'offset' ? 1 : 100;
      expect(value).toBeCloseTo(unit * calibration.values[place]!, 12);
      expect((lo + hi) / 2).toBeCloseTo(value, 12);
      expect((hi - lo) / 2).toBeCloseTo(NINETY_PERCENT_Z * unit * sigmaOf(calibration, place), 12);
      expect(told).toBeGreaterThanOrEqual(0);
      expect(told).toBeLessThanOrEqual(1);
      expect(evidenceHours).toBeLessThanOrEqual(24 * DAYS);
    }
  });

  test('fits its own record: most intervals within the limit of chance', () => {
    expect(calibration.intervals).toBeGreaterThan(200);
    expect(calibration.chiSquare.shareWithin).toBeGreaterThan(0.9);
    expect(calibration.chiSquare.median).toBeLessThan(calibration.chiSquare.limit);
  });

  test('is the same each time', () => {
    expect(calibrated({ errors: planted(7), share: swing(-0.3, 0.3, PER_DAY) })).toEqual(calibration);
  });
});
