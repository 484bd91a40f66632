import { describe, expect, test } from 'vitest';
import { FS, PS, readLoop, SR, SS, TEMPERATURES } from '@/lib/hydronics/loop-record';
import { medianOf, recordNoise } from '@/lib/hydronics/record-noise';
import { mixingScale } from '@/lib/hydronics/mixing-scale';
import type { Measurements } from '@/lib/hydronics/types';
import { randomSource } from '../support/simulation/random';
import { plantOf, recordOf, WATER } from './support/plants';

const plant = plantOf();
const N = 2016;
const EVERYWHERE = new Float64Array(N).fill(1);

function noiseOf(channels: Parameters<typeof recordOf>[2], use = EVERYWHERE, n = N) {
  const record: Measurements = recordOf(n, 5, channels);
  return recordNoise(readLoop(record, plant, mixingScale(50, WATER)), use);
}

/** A level that drifts smoothly, over hours and over the day; of the size given. */
function drift(size: number, seed: number): (slot: number) => number {
  const random = randomSource(seed, 'drift');
  const waves = [24, 11, 5, 3].map((hours) => ({ slots: hours * 12, at: random.between(0, 6.28) }));
  return (slot) => size * waves.reduce((sum, { slots, at }) => sum + 0.4 * Math.sin(at + (6.28 * slot) / slots), 0);
}

/** Readings about a level that drifts. */
function drifting(sigma: number, seed: number, level = 44, size = 2): number[] {
  const random = randomSource(seed, 'noise');
  const away = drift(size, seed);
  return Array.from({ length: N }, (_, slot) => level + away(slot) + sigma * random.normal());
}

describe('the noise of a record', () => {
  test.each([0.05, 0.1, 0.2, 0.3])('is found within 15 percent of %f F while the level drifts', (sigma) => {
    for (let seed = 1; seed <= 5; seed += 1) {
      const { noise } = noiseOf({ primarySupplyF: drifting(sigma, seed) });
      expect(noise[PS]! / sigma).toBeGreaterThan(0.85);
      expect(noise[PS]! / sigma).toBeLessThan(1.15);
    }
  });

  test('is a share of reading for a flow', () => {
    const random = randomSource(2, 'flow noise');
    const away = drift(400, 2);
    const flow = Array.from({ length: N }, (_, slot) => (1500 + away(slot)) * (1 + 0.01 * random.normal()));
    const { noise } = noiseOf({ secondaryFlowGpm: flow });
    expect(noise[TEMPERATURES + FS]! / 0.01).toBeGreaterThan(0.85);
    expect(noise[TEMPERATURES + FS]! / 0.01).toBeLessThan(1.15);
  });

  test('does not see ramps, steps and one spike in fifty readings', () => {
    const random = randomSource(4, 'spikes');
    const values = Array.from({ length: N }, (_, slot) => {
      const step = slot % 200 < 100 ? 3 : 0;
      const spike = slot % 50 === 0 ? 20 : 0;
      return 44 + 0.05 * (slot % 100) + step + spike + 0.1 * random.normal();
    });
    const { noise } = noiseOf({ secondarySupplyF: values });
    expect(noise[SS]! / 0.1).toBeGreaterThan(0.85);
    expect(noise[SS]! / 0.1).toBeLessThan(1.2);
  });

  test('is taken only from slots that may be used', () => {
    const random = randomSource(5, 'use');
    const values = Array.from({ length: N }, (_, slot) => 44 + (slot < N / 2 ? 0.1 : 2) * random.normal());
    const use = Float64Array.from({ length: N }, (_, slot) => (slot < N / 2 - 1 ? 1 : 0));
    expect(noiseOf({ primarySupplyF: values }, use).noise[PS]! / 0.1).toBeCloseTo(1, 0);
    expect(noiseOf({ primarySupplyF: values }).noise[PS]).toBeGreaterThan(0.2);
  });

  test('passes over gaps, and is not said of a channel that is hardly there', () => {
    const values = drifting(0.1, 6);
    const gappy = values.map((value, slot) => (slot % 4 === 0 ? Number.NaN : value));
    expect(noiseOf({ primarySupplyF: gappy }).noise[PS]! / 0.1).toBeGreaterThan(0.8);
    const bare = values.map((value, slot) => (slot < 15 ? value : Number.NaN));
    const { noise, increment } = noiseOf({ primarySupplyF: bare });
    expect([noise[PS], increment[PS], noise[SR]]).toEqual([Number.NaN, 0, Number.NaN]);
  });

  test('is not said of a meter that stands at zero', () => {
    const { noise } = noiseOf({ secondaryFlowGpm: 0, primarySupplyF: Infinity });
    expect(noise[TEMPERATURES + FS]).toBeNaN();
    expect(noise[PS]).toBeNaN();
  });
});

describe('the increment of a record', () => {
  test.each([0.1, 0.25, 0.5, 1])(
    'is seen where readings are rounded to %f F, and is worth its step over root 12',
    (step) => {
      const values = drifting(0.1, 7).map((value) => Math.round(value / step) * step);
      const { noise, increment } = noiseOf({ primarySupplyF: values });
      // On the mixing scale a degree is bent by parts in a thousand.
      expect(increment[PS]! / step).toBeCloseTo(1, 1);
      expect(noise[PS]).toBeGreaterThanOrEqual(increment[PS]! / Math.sqrt(12));
    },
  );

  test('of readings logged by change of value is their least change', () => {
    let held = Number.POSITIVE_INFINITY;
    const values = drifting(0.02, 8).map((value) => (held = Math.abs(value - held) >= 0.5 ? value : held));
    const { noise, increment } = noiseOf({ primarySupplyF: values });
    expect(increment[PS]).toBeGreaterThan(0.45);
    expect(increment[PS]).toBeLessThan(0.6);
    expect(noise[PS]).toBeGreaterThan(0.45 / Math.sqrt(12));
  });

  test('is none where readings have digits enough', () => {
    const { increment } = noiseOf({ primarySupplyF: drifting(0.1, 9), secondaryFlowGpm: drifting(10, 9, 1500, 100) });
    expect([increment[PS], increment[TEMPERATURES + FS]]).toEqual([0, 0]);
  });

  test('of a meter in whole gallons is one, and widens no share', () => {
    const flow = drifting(15, 10, 1500, 100).map(Math.round);
    const { noise, increment } = noiseOf({ secondaryFlowGpm: flow });
    expect(increment[TEMPERATURES + FS]).toBeLessThanOrEqual(1);
    expect(noise[TEMPERATURES + FS]! / 0.01).toBeCloseTo(1, 0);
  });
});

describe('the median', () => {
  test.each([
    [[], 0, Number.NaN],
    [[3], 1, 3],
    [[3, 1, 2], 3, 2],
    [[4, 1, 3, 2], 4, 2.5],
    [[5, 1, 9, 100, -100], 3, 5],
  ])('of the first of %j', (values, count, expected) => {
    expect(medianOf(Float64Array.from(values), count)).toBe(expected);
  });
});
