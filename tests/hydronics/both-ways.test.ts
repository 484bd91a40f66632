import { describe, expect, test } from 'vitest';
import { emptyBothWays, weighBothWays } from '@/lib/hydronics/both-ways';
import { choleskyInPlace } from '@/lib/hydronics/linear-algebra';
import { NINETY_PERCENT_Z } from '@/lib/hydronics/normal';
import { usualBothPrior } from '@/lib/hydronics/weigh-slot';
import { randomSource } from '../support/simulation/random';
import {
  balancedValues,
  COUNT,
  drawn,
  fitted,
  independent,
  READINGS,
  readingOf,
  verdictOf,
  without,
} from './support/readings';
import type { ReadingName, ReadingValues } from './support/readings';

const SWINGS = 'both ways within the interval';

/** Means over an interval in which the pipe ran forward for a while and backward for a while, with the mains held. */
function huntingValues(ahead: number, back: number, mainGpm = 1500): Required<ReadingValues> {
  const [cold, spanF] = [44, 12];
  const net = ahead - back;
  return {
    ps: cold,
    ss: cold + back * spanF,
    sr: cold + spanF,
    pr: cold + spanF - ahead * spanF,
    tb: cold + spanF * (back / (ahead + back)),
    fp: net >= 0 ? mainGpm : mainGpm * (1 + net),
    fs: net >= 0 ? mainGpm * (1 - net) : mainGpm,
    fb: net * mainGpm,
  };
}

const verdictOn = (values: ReadingValues, covariance?: Float64Array) => verdictOf(readingOf(values, covariance));

const BARE = ['fb', 'tb'] as const satisfies readonly ReadingName[];

describe('an interval in which the common pipe ran both ways', () => {
  test.each([
    ['evenly', 0.15, 0.15],
    ['mostly forward', 0.2, 0.12],
    ['mostly backward', 0.12, 0.25],
  ])('%s is told from one way and from bad sensors', (_, ahead, back) => {
    const verdict = verdictOn(without(huntingValues(ahead, back), ...BARE));
    expect([verdict.direction, verdict.reason]).toEqual(['unknown', SWINGS]);
    // Its net is what the meters and the temperatures say together, and no direction is claimed of it.
    const net = (ahead - back) * 1500;
    expect(verdict.bypassLoGpm).toBeLessThan(net);
    expect(verdict.bypassHiGpm).toBeGreaterThan(net);
    expect(Math.abs(verdict.bypassGpm - net)).toBeLessThan(20);
  });

  test('passes on the supply as measured: the mean of what went out', () => {
    expect(verdictOn(without(huntingValues(0.15, 0.15), ...BARE)).temperatures[2]).toBeCloseTo(44 + 0.15 * 12, 9);
  });

  test('is told from temperatures alone', () => {
    expect(verdictOn(without(huntingValues(0.15, 0.15), ...BARE, 'fp', 'fs')).reason).toBe(SWINGS);
  });

  test('is found in nine of ten intervals whose sensors have just the stated errors, and called a fault in none', () => {
    const random = randomSource(1, 'hunting');
    const covariance = independent();
    const factor = covariance.slice();
    choleskyInPlace(factor, COUNT);
    let found = 0;
    for (let draw = 0; draw < 300; draw += 1) {
      const truth = huntingValues(random.between(0.12, 0.3), random.between(0.12, 0.3));
      const verdict = verdictOn(without(drawn(truth, factor, random), ...BARE), covariance);
      expect(verdict.reason).not.toBe('sensors contradict');
      if (verdict.reason === SWINGS) found += 1;
    }
    expect(found / 300).toBeGreaterThan(0.9);
  });

  test('is never asked of intervals that run one way: fewer than 1 in 100 are mistaken', () => {
    const random = randomSource(2, 'one way');
    const covariance = independent();
    const factor = covariance.slice();
    choleskyInPlace(factor, COUNT);
    let mistaken = 0;
    for (let draw = 0; draw < 1000; draw += 1) {
      const truth = balancedValues(random.chance(0.5) ? 'forward' : 'reverse', random.between(0, 0.4));
      if (verdictOn(without(drawn(truth, factor, random), ...BARE), covariance).reason === SWINGS) mistaken += 1;
    }
    expect(mistaken).toBeLessThan(10);
  });

  test('is likelier the longer an interval is', () => {
    expect(usualBothPrior(15)).toBeGreaterThan(usualBothPrior(1));
    expect(usualBothPrior(600)).toBeLessThan(0.5);
  });
});

describe('one bad sensor in a pipe that ran one way', () => {
  const reverse = without(balancedValues('reverse', 0.2), ...BARE);
  const forward = without(balancedValues('forward', 0.2), ...BARE);

  test.each<[string, ReadingValues, string]>([
    ['a primary return 1.4 F cold while meters and supply say reverse', { ...reverse, pr: 54.6 }, 'reverse'],
    ['a secondary supply 1.4 F warm while meters and return say forward', { ...forward, ss: 45.4 }, 'forward'],
  ])('is a contradiction, not a swing: %s', (_, values, way) => {
    const verdict = verdictOn(values);
    expect(verdict.reason).not.toBe(SWINGS);
    expect([way, 'unknown']).toContain(verdict.direction);
    expect(verdict.chiSquare).toBeGreaterThan(12);
  });

  test('that reads outside supply and return is never a swing', () => {
    for (const values of [
      { ...reverse, pr: 58 },
      { ...forward, ss: 42 },
      { ...reverse, ps: 50 },
    ]) {
      expect(verdictOn(values).reason).not.toBe(SWINGS);
    }
  });

  test.each<ReadingName>(['ps', 'pr', 'ss', 'sr'])(
    'cannot be told from a swing without %s: nothing is claimed',
    (name) => {
      const both = emptyBothWays();
      weighBothWays(readingOf(without(huntingValues(0.15, 0.15), name)), both);
      expect(both.logEvidence).toBe(Number.NEGATIVE_INFINITY);
      expect(both.bypassGpm).toBeNaN();
    },
  );
});

describe('a meter in the common pipe', () => {
  const hunting = without(huntingValues(0.2, 0.2), 'tb');

  test('that shows, with the mains, clear flow one way forbids the swing that temperatures alone suggest', () => {
    for (const [values, way] of [
      [{ ...balancedValues('forward', 0.2), ss: 45.2 }, 'forward'],
      [{ ...balancedValues('reverse', 0.2), pr: 54.8 }, 'reverse'],
    ] as const) {
      expect(verdictOn(without(values, 'tb', 'fp', 'fs', 'fb')).reason).toBe(SWINGS);
      expect(verdictOn(without(values, 'tb')).direction).toBe(way);
    }
  });

  test('takes from the likelihood of a swing the more, the further it is from the net', () => {
    const evidence = (fb: number) => {
      const both = emptyBothWays();
      weighBothWays(readingOf({ ...hunting, fb }), both);
      return both.logEvidence;
    };
    const sigmaGpm = 40;
    for (const fb of [100, 200, 300]) {
      expect(evidence(0) - evidence(fb)).toBeGreaterThan(0.5 * (fb / sigmaGpm) ** 2);
      expect(evidence(-fb)).toBeCloseTo(evidence(fb), 6);
    }
  });

  test('without a sign confirms it by showing water of both ways, and forbids it by showing the net alone', () => {
    const magnitude = (fb: number) => {
      const reading = readingOf({ ...hunting, fb });
      reading.bypassUnsigned = true;
      return verdictOf(reading).reason;
    };
    expect(magnitude(0.4 * 1500)).toBe(SWINGS);
    expect(magnitude(0)).not.toBe(SWINGS);
  });

  test('is weighed by its own doubt: a vague one forbids nothing', () => {
    expect(verdictOn({ ...hunting, fb: 300 }, independent({ fb: 400 })).reason).toBe(SWINGS);
  });
});

describe('the likelihood of a swing', () => {
  /** Log of the readings' density, with temperatures held at a swing of these shares and the flows' net as it follows. */
  const logDensity = (values: ReadingValues, covariance: Float64Array, ahead: number, back: number) => {
    const spanF = values.sr! - values.ps!;
    const [vps, vpr, vss, vsr, vfp, vfs] = ['ps', 'pr', 'ss', 'sr', 'fp', 'fs'].map((name) => {
      const i = READINGS.indexOf(name as ReadingName);
      return covariance[i * COUNT + i]!;
    }) as [number, number, number, number, number, number];
    const rise = values.ss! - values.ps! - back * spanF;
    const fall = values.sr! - values.pr! - ahead * spanF;
    // Covariance of rise and fall, whose errors lean on both ends of the span.
    const [r0, f0] = [values.ss! - values.ps!, values.sr! - values.pr!].map((x) => x / spanF) as [number, number];
    const vr = vss + (1 - r0) ** 2 * vps + r0 * r0 * vsr;
    const vf = vpr + f0 * f0 * vps + (1 - f0) ** 2 * vsr;
    const c = (1 - r0) * f0 * vps - r0 * (1 - f0) * vsr;
    const determinant = vr * vf - c * c;
    const square = (vf * rise * rise - 2 * c * rise * fall + vr * fall * fall) / determinant;
    const net = values.fp! - values.fs! - (ahead - back) * Math.max(values.fp!, values.fs!);
    const vn = vfp + vfs;
    return -0.5 * (square + Math.log(determinant) + (net * net) / vn + Math.log(vn) + 3 * Math.log(2 * Math.PI));
  };

  test.each([
    [0.15, 0.15],
    [0.25, 0.1],
  ])('is the integral over both shares by brute force: %d ahead, %d back', (ahead, back) => {
    const covariance = independent();
    // Meters 20 gpm off the net that the temperatures make: far from it, a swing is ruled out and has no likelihood.
    const netGpm = (ahead - back) * 1530 + 20;
    const flows = netGpm > 0 ? { fp: 1530, fs: 1530 - netGpm } : { fp: 1530 + netGpm, fs: 1530 };
    const values = { ...without(huntingValues(ahead, back), ...BARE), ...flows };
    const both = emptyBothWays();
    weighBothWays(readingOf(values, covariance), both);
    const steps = 500;
    let sum = 0;
    for (let i = 0; i < steps; i += 1) {
      for (let j = 0; j < steps; j += 1) {
        const at = [(i + 0.5) / (2 * steps), (j + 0.5) / (2 * steps)] as const;
        sum += Math.exp(logDensity(values, covariance, at[0], at[1]));
      }
    }
    // Both shares even on 0 to one half: a prior density of 4 over a square of one quarter.
    const expected = Math.log(sum / (steps * steps));
    expect(Math.abs(both.logEvidence - expected)).toBeLessThan(0.1);
  });

  test('does not beat one way where one way explains the readings', () => {
    for (const way of ['forward', 'reverse'] as const) {
      const reading = readingOf(without(balancedValues(way, 0.2), ...BARE));
      const both = emptyBothWays();
      weighBothWays(reading, both);
      expect(both.logEvidence).toBeLessThan(fitted(reading, way).logEvidence);
    }
  });

  test('gives a net whose doubt is less than that of meters or temperatures alone', () => {
    const both = emptyBothWays();
    weighBothWays(readingOf(without(huntingValues(0.2, 0.15), ...BARE)), both);
    expect(both.bypassSigma).toBeLessThan(Math.hypot(20, 25));
    expect(both.bypassGpm).toBeCloseTo(0.05 * 1500, 6);
    const verdict = verdictOn(without(huntingValues(0.2, 0.15), ...BARE));
    expect((verdict.bypassHiGpm - verdict.bypassLoGpm) / 2).toBeCloseTo(NINETY_PERCENT_Z * both.bypassSigma, 6);
  });
});
