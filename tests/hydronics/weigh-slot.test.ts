import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { choleskyInPlace } from '@/lib/hydronics/linear-algebra';
import { NINETY_PERCENT_Z, normalCdf } from '@/lib/hydronics/normal';
import { reconcileDecoupler } from '@/lib/hydronics/reconcile-decoupler';
import { bypassQuantile } from '@/lib/hydronics/verdict';
import type { Verdict } from '@/lib/hydronics/verdict';
import { emptyWayState } from '@/lib/hydronics/way-state';
import type { WayState } from '@/lib/hydronics/way-state';
import { randomSource } from '../support/simulation/random';
import {
  balancedValues,
  COUNT,
  correlated,
  drawn,
  independent,
  only,
  READINGS,
  readingOf,
  verdictOf,
  weighing,
  without,
} from './support/readings';
import type { ReadingName, ReadingValues } from './support/readings';

const random = randomSource(29, 'weigh-slot');

const weighed = (values: ReadingValues, covariance: Float64Array): Verdict => verdictOf(readingOf(values, covariance));

/** Places of the general routine's quantities among the readings. */
const GENERAL = ['fp', 'fs', 'fb', 'ps', 'ss', 'pr', 'sr', 'tb'] as const satisfies readonly ReadingName[];

/** The same readings by the general routine for measurements with bilinear balances. */
function reconciled(values: ReadingValues, covariance: Float64Array) {
  const place = GENERAL.map((name) => READINGS.indexOf(name));
  const measured = Float64Array.from(GENERAL, (name) => values[name] ?? Number.NaN);
  const sigmas = Float64Array.from(place, (i) => Math.sqrt(covariance[i * COUNT + i]!));
  const turned = Float64Array.from({ length: COUNT * COUNT }, (_, cell) => {
    return covariance[place[Math.floor(cell / COUNT)]! * COUNT + place[cell % COUNT]!]!;
  });
  const found = reconcileDecoupler(measured, sigmas, { covariance: turned });
  const x = (name: (typeof GENERAL)[number]) => found.best.x[GENERAL.indexOf(name)]!;
  const sigma = (name: (typeof GENERAL)[number]) => {
    const i = GENERAL.indexOf(name);
    return Math.sqrt(found.best.covariance[i * COUNT + i]!);
  };
  return { way: found.way, x, sigma, chiSquare: found.best.chiSquare };
}

/** In sigmas: slopes are taken at the readings, not at the reconciled values (second order in the errors). */
const CLOSE = 0.15;

describe('one interval in clear flow', () => {
  // The pipe's own sensor stays out: the general routine lets it miss nothing of its stream.
  const SUBSETS: [string, ReadingName[]][] = [
    ['all loop sensors and both meters', ['ps', 'pr', 'ss', 'sr', 'fp', 'fs']],
    ['a meter in the pipe too', ['ps', 'pr', 'ss', 'sr', 'fp', 'fs', 'fb']],
    ['the primary meter', ['ps', 'pr', 'ss', 'sr', 'fp']],
    ['the secondary meter', ['ps', 'pr', 'ss', 'sr', 'fs']],
  ];
  for (const way of ['forward', 'reverse'] as const) {
    test.each(SUBSETS)(`in ${way} flow is reconciled as by the general routine: %s`, (_, names) => {
      let tooFar = 0;
      for (let draw = 0; draw < 60; draw += 1) {
        const covariance = draw % 2 === 0 ? independent() : correlated(random);
        const factor = covariance.slice();
        choleskyInPlace(factor, COUNT);
        const values = only(drawn(balancedValues(way, random.between(0.2, 0.4)), factor, random), ...names);
        const general = reconciled(values, covariance);
        // One draw in some hundred is so far off that no one way is claimed of all readings.
        if (general.chiSquare > 9) {
          tooFar += 1;
          continue;
        }
        const verdict = weighed(values, covariance);
        // Beyond what independent errors explain, intervals are widened; here only the values are compared then.
        const widened = general.chiSquare > 1;
        expect(general.way).toBe(way);
        const sigma = general.sigma('fb');
        expect(Math.abs(verdict.bypassGpm - general.x('fb'))).toBeLessThan(CLOSE * sigma);
        expect(Math.abs(verdict.primaryFlowGpm - general.x('fp'))).toBeLessThan(CLOSE * general.sigma('fp'));
        expect(Math.abs(verdict.secondaryFlowGpm - general.x('fs'))).toBeLessThan(CLOSE * general.sigma('fs'));
        (['ps', 'pr', 'ss', 'sr'] as const).forEach((name, i) => {
          expect(Math.abs(verdict.temperatures[i]! - general.x(name))).toBeLessThan(CLOSE * general.sigma(name));
        });
        expect(Math.abs(verdict.chiSquare - general.chiSquare)).toBeLessThan(0.05 * (1 + general.chiSquare));
        const halfWidth = (verdict.bypassHiGpm - verdict.bypassLoGpm) / 2;
        if (widened) expect(halfWidth).toBeGreaterThan(0.95 * NINETY_PERCENT_Z * sigma);
        else {
          expect(halfWidth / (NINETY_PERCENT_Z * sigma)).toBeCloseTo(1, 1);
          expect(verdict.blendSigma / general.sigma('ss')).toBeCloseTo(1, 1);
        }
      }
      expect(tooFar).toBeLessThan(4);
    });
  }
});

describe('the point below which the bypass lies with a probability', () => {
  /** A way's state with this much of it that a quantile looks at. */
  const state = (bypassGpm: number, bypassSigma: number): WayState => ({ ...emptyWayState(), bypassGpm, bypassSigma });

  /** Probability below `b` of two normals cut off at zero, reverse counted backwards: by summing up their densities. */
  function below(b: number, pReverse: number, forward: WayState, reverse: WayState): number {
    const mass = (way: WayState, from: number, to: number) => {
      const steps = 4000;
      let sum = 0;
      for (let step = 0; step < steps; step += 1) {
        const x = from + ((step + 0.5) * (to - from)) / steps;
        sum += Math.exp(-0.5 * ((x - way.bypassGpm) / way.bypassSigma) ** 2);
      }
      return (sum * (to - from)) / steps;
    };
    const far = (way: WayState) => Math.max(0, way.bypassGpm) + 9 * way.bypassSigma;
    if (b < 0) return (pReverse * mass(reverse, -b, far(reverse))) / mass(reverse, 0, far(reverse));
    return pReverse + ((1 - pReverse) * mass(forward, 0, b)) / mass(forward, 0, far(forward));
  }

  test('agrees with the two densities summed up', () => {
    const mean = fc.double({ min: -120, max: 300, noNaN: true });
    const sigma = fc.double({ min: 20, max: 90, noNaN: true });
    const probability = fc.double({ min: 0.001, max: 0.999, noNaN: true });
    fc.assert(
      fc.property(
        mean,
        sigma,
        mean,
        sigma,
        probability,
        fc.constantFrom(0.05, 0.3, 0.5, 0.95),
        (mf, sf, mr, sr, p, level) => {
          const [forward, reverse] = [state(mf, sf), state(mr, sr)];
          const b = bypassQuantile(level, p, forward, reverse);
          const found = below(b, p, forward, reverse);
          // Where both normals end at zero a whole range of levels meets there.
          if (b === 0) expect(Math.abs(p - level)).toBeLessThan(1e-3);
          else expect(Math.abs(found - level)).toBeLessThan(2e-3);
        },
      ),
      { numRuns: 300, seed: 1 },
    );
  });

  test('is that of one normal where the other way is out of the question and zero is far', () => {
    const forward = state(400, 30);
    expect(bypassQuantile(0.05, 0, forward, state(Number.NaN, Number.NaN))).toBeCloseTo(400 - NINETY_PERCENT_Z * 30, 6);
    expect(bypassQuantile(0.95, 1, state(Number.NaN, Number.NaN), forward)).toBeCloseTo(
      -400 + NINETY_PERCENT_Z * 30,
      6,
    );
  });

  test('rises with the level across zero', () => {
    const [forward, reverse] = [state(40, 50), state(10, 30)];
    const points = Array.from({ length: 99 }, (_, i) => bypassQuantile((i + 1) / 100, 0.35, forward, reverse));
    points.forEach((b, i) => expect(b).toBeGreaterThan(points[i - 1] ?? Number.NEGATIVE_INFINITY));
    expect(points[33]).toBeLessThan(0);
    expect(points[36]).toBeGreaterThan(0);
  });

  test('never crosses into the other way, however far the evidence pulls there', () => {
    expect(bypassQuantile(0.5, 0, state(-400, 30), state(0, 1))).toBeGreaterThanOrEqual(0);
    expect(bypassQuantile(0.5, 1, state(0, 1), state(-400, 30))).toBeLessThanOrEqual(0);
    expect(bypassQuantile(0.5, 0, state(80, 0), state(0, 1))).toBe(80);
  });
});

/** How often the 90 % intervals hold the truth, over intervals of a loop whose errors have just the stated covariance. */
function coverage(names: readonly ReadingName[], share: () => number, spanF: number, covariance: Float64Array) {
  const factor = covariance.slice();
  choleskyInPlace(factor, COUNT);
  const scratch = weighing();
  const [draws, within] = [1500, { bypass: 0, blend: 0 }];
  const probabilities: [number, number][] = [];
  for (let draw = 0; draw < draws; draw += 1) {
    const signed = share();
    const truth = balancedValues(signed < 0 ? 'reverse' : 'forward', Math.abs(signed), 1500, spanF);
    const verdict = verdictOf(readingOf(only(drawn(truth, factor, random), ...names), covariance), scratch);
    if (verdict.bypassLoGpm <= truth.fb && truth.fb <= verdict.bypassHiGpm) within.bypass += 1;
    if (Math.abs(verdict.temperatures[2]! - truth.ss) <= NINETY_PERCENT_Z * verdict.blendSigma) within.blend += 1;
    probabilities.push([verdict.reverseProbability, signed < 0 ? 1 : 0]);
  }
  return { bypass: within.bypass / draws, blend: within.blend / draws, probabilities };
}

const TEMPERATURES = ['ps', 'pr', 'ss', 'sr'] as const;
const BOTH_METERS = [...TEMPERATURES, 'fp', 'fs'] as const;
const far = () => (random.chance(0.5) ? -1 : 1) * random.between(0.15, 0.4);
const near = () => random.between(-0.05, 0.05);
const anywhere = () => random.between(-0.3, 0.3);

describe('the central 90 % intervals', () => {
  // 1500 draws: two standard deviations are 0.016.
  test.each<[string, readonly ReadingName[], () => number, number, number]>([
    ['both meters, far from balance', BOTH_METERS, far, 12, 0.94],
    ['both meters, near balance', BOTH_METERS, near, 12, 0.94],
    ['both meters, 2 F between supply and return', BOTH_METERS, near, 2, 0.94],
    ['both meters, 1 F between supply and return', BOTH_METERS, anywhere, 1, 0.94],
    ['meters alone', ['fp', 'fs'], near, 12, 0.94],
    ['a meter in the pipe', [...BOTH_METERS, 'fb'], near, 12, 0.94],
    ['one meter, far from balance', [...TEMPERATURES, 'fp'], far, 12, 0.94],
    ['one meter, anywhere', [...TEMPERATURES, 'fs'], anywhere, 12, 0.94],
    // A flat prior out to where all flow crosses over makes them wider than they need be this close to zero.
    ['one meter, near balance', [...TEMPERATURES, 'fp'], near, 12, 0.97],
    ['one meter, 2 F between supply and return', [...TEMPERATURES, 'fs'], far, 2, 0.96],
  ])('hold the truth 9 times in 10: %s', (_, names, share, spanF, most) => {
    for (const covariance of [independent(), correlated(random)]) {
      const held = coverage(names, share, spanF, covariance);
      expect(held.bypass).toBeGreaterThan(0.86);
      expect(held.bypass).toBeLessThan(most);
      if (names.length === 2) continue;
      expect(held.blend).toBeGreaterThan(0.86);
      expect(held.blend).toBeLessThan(most);
    }
  });

  test('of a pipe that truly stands still hold zero, at most a little too often', () => {
    const { bypass } = coverage(BOTH_METERS, () => 0, 12, independent());
    expect(bypass).toBeGreaterThan(0.88);
    expect(bypass).toBeLessThan(0.96);
  });
});

describe('P(reverse)', () => {
  test('is as often right as it says, near balance, where both ways are as likely', () => {
    const { probabilities } = coverage(BOTH_METERS, () => random.between(-0.1, 0.1), 12, independent());
    for (const [low, high] of [
      [0.02, 0.25],
      [0.25, 0.5],
      [0.5, 0.75],
      [0.75, 0.98],
    ] as const) {
      const inside = probabilities.filter(([p]) => p >= low && p < high);
      const said = inside.reduce((sum, [p]) => sum + p, 0) / inside.length;
      const so = inside.reduce((sum, [, reverse]) => sum + reverse, 0) / inside.length;
      expect(inside.length).toBeGreaterThan(40);
      // Three standard deviations of so many draws.
      expect(Math.abs(said - so)).toBeLessThan(3 * Math.sqrt(0.25 / inside.length));
    }
  });

  test('falls from certain to none as the meters pass each other, without a jump', () => {
    const at = (fp: number) => weighed({ fp, fs: 1500 }, independent({ fp: 20, fs: 20 })).reverseProbability;
    let before = 1;
    for (let fp = 1380; fp <= 1620; fp += 4) {
      const p = at(fp);
      expect(p).toBeLessThanOrEqual(before);
      expect(before - p).toBeLessThan(0.08);
      before = p;
    }
    expect(at(1380)).toBeGreaterThan(0.999);
    expect(at(1620)).toBeLessThan(0.001);
    expect(at(1490)).toBeCloseTo(normalCdf(10 / Math.hypot(20, 20)), 2);
  });

  test('is weakened by disagreement: meters far apart from temperatures leave both ways open', () => {
    const clear = { ...without(balancedValues('reverse', 0.2), 'fb', 'tb') };
    const agreeing = weighed(clear, independent());
    const against = weighed({ ...clear, fp: 1700 }, independent());
    expect(agreeing.reverseProbability).toBeGreaterThan(0.999);
    expect(against.reverseProbability).toBeLessThan(0.95);
    expect(against.direction).toBe('unknown');
    expect(against.bypassLoGpm).toBeLessThan(0);
    expect(against.bypassHiGpm).toBeGreaterThan(0);
  });
});
