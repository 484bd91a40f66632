import { describe, expect, test } from 'vitest';
import { choleskyInPlace, choleskyLogDeterminant, inverseQuadraticForm } from '@/lib/hydronics/linear-algebra';
import { normalCdf } from '@/lib/hydronics/normal';
import type { SlotReading } from '@/lib/hydronics/slot-reading';
import { leastDisagreement } from '@/lib/hydronics/way-fit';
import type { Way, WayFit } from '@/lib/hydronics/contrasts';
import { randomSource } from '../support/simulation/random';
import {
  COUNT,
  READINGS,
  VAGUE_SIGMA_F,
  balancedValues,
  comparisonsAt,
  correlated,
  covarianceOf,
  fitted,
  independent,
  leansOf,
  only,
  propagated,
  readingOf,
  without,
} from './support/readings';
import type { ReadingName, ReadingValues } from './support/readings';

const WAYS = ['forward', 'reverse'] as const;
const random = randomSource(11, 'way-fit');
const reverseProbability = (reading: SlotReading, shareScale?: number) =>
  1 /
  (1 +
    Math.exp(fitted(reading, 'forward', shareScale).logEvidence - fitted(reading, 'reverse', shareScale).logEvidence));

describe('with flow meters alone', () => {
  test.each([
    [1500, 1500, 20, 25],
    [1500, 1505, 20, 25],
    [1530, 1500, 20, 25],
    [1470, 1500, 10, 15],
    [600, 570, 12, 12],
    [1500, 1440, 30, 45],
  ])('of %d and %d gpm, P(reverse) is cdf(-b / u(b))', (fp, fs, sigmaP, sigmaS) => {
    const reading = readingOf({ fp, fs }, independent({ fp: sigmaP, fs: sigmaS }));
    const expected = normalCdf((fs - fp) / Math.hypot(sigmaP, sigmaS));
    // The doubt of the difference is taken at the likeliest share, a few percent of the main flow.
    expect(reverseProbability(reading)).toBeCloseTo(expected, 2);
  });

  test('an error that both share moves the probability as it should: the doubt of the difference is what counts', () => {
    const covariance = independent({ fp: 40, fs: 40 });
    covariance[5 * 8 + 6] = covariance[6 * 8 + 5] = 0.95 * 1600;
    const apart = reverseProbability(readingOf({ fp: 1480, fs: 1500 }, covariance));
    expect(apart).toBeCloseTo(normalCdf(20 / Math.sqrt(2 * 1600 * 0.05)), 2);
  });

  test('of one flow, or none, nothing is said of the direction', () => {
    for (const values of [{ fp: 900 }, { fs: 900 }, { fb: 100 }, {}]) {
      for (const way of WAYS) expect(fitted(readingOf(values), way).informed).toBe(false);
    }
  });
});

describe('what all temperatures share', () => {
  test.each(WAYS)('as an offset moves nothing in %s flow', (way) => {
    const values = { ...balancedValues('reverse', 0.2), ss: 46.7, pr: 55.8 };
    const moved = {
      ...values,
      ps: values.ps + 1.5,
      pr: values.pr + 1.5,
      ss: values.ss + 1.5,
      sr: values.sr + 1.5,
      tb: values.tb + 1.5,
    };
    const [fit, again] = [fitted(readingOf(values), way), fitted(readingOf(moved), way)];
    expect(again.logEvidence).toBeCloseTo(fit.logEvidence, 8);
    expect(again.share).toBeCloseTo(fit.share, 10);
    expect(again.chiSquare).toBeCloseTo(fit.chiSquare, 8);
  });

  test.each(WAYS)('as a doubt of 3 F costs nothing in %s flow', (way) => {
    const values = { ...balancedValues('reverse', 0.2), ss: 46.7, pr: 55.8 };
    const common = independent();
    for (let i = 0; i < 5; i += 1) for (let j = 0; j < 5; j += 1) common[i * 8 + j]! += 9;
    const [fit, again] = [fitted(readingOf(values), way), fitted(readingOf(values, common), way)];
    expect(again.logEvidence).toBeCloseTo(fit.logEvidence, 6);
    expect(again.shareVariance / fit.shareVariance).toBeCloseTo(1, 8);
  });
});

/** Readings in many states: clear, near balance, hardly any span, few sensors, contradictory. */
const STATES: [string, ReadingValues][] = [
  ['clear forward flow', { ...balancedValues('forward', 0.3), ss: 44.2, fs: 1080 }],
  ['clear reverse flow', { ...balancedValues('reverse', 0.3), ss: 47.9, fp: 1030 }],
  ['a share of 1 %', without(balancedValues('forward', 0.01), 'fb', 'tb')],
  ['balance', { ...without(balancedValues('forward', 0), 'fb', 'tb'), ss: 44.15, pr: 55.8 }],
  ['balance with a meter in the pipe', { ...without(balancedValues('reverse', 0.01), 'tb'), fb: 6 }],
  ['a span of 1 F', { ...without(balancedValues('reverse', 0.25, 1500, 1), 'tb', 'fb'), ss: 44.4 }],
  ['a span of 0.2 F', without(balancedValues('forward', 0.4, 1500, 0.2), 'tb', 'fb')],
  ['temperatures alone', only({ ...balancedValues('reverse', 0.1), ss: 45.3 }, 'ps', 'pr', 'ss', 'sr')],
  ['temperatures and the primary meter', without(balancedValues('reverse', 0.15), 'fs', 'fb', 'tb')],
  ['temperatures and the secondary meter', without(balancedValues('forward', 0.15), 'fp', 'fb', 'tb')],
  ['a pipe’s meter beside the smaller flow', without(balancedValues('reverse', 0.2), 'fs', 'tb')],
  ['nearly all of the flow crossing over', without(balancedValues('forward', 0.95), 'tb')],
  ['no secondary supply sensor', without(balancedValues('forward', 0.2), 'ss', 'tb')],
  ['flows against temperatures', { ...without(balancedValues('reverse', 0.1), 'fb', 'tb'), fp: 1560 }],
];

/** Log of the comparisons' normal density at a share, with their covariance as the fit holds it. */
function logDensity(fit: WayFit, factor: Float64Array, share: number): number {
  const square = inverseQuadraticForm(factor, fit.count, comparisonsAt(fit, share), new Float64Array(5));
  return -0.5 * (square + choleskyLogDeterminant(factor, fit.count) + fit.count * Math.log(2 * Math.PI));
}

/** The integral of prior times density over the share, by Simpson's rule: its logarithm. */
function integrated(fit: WayFit, shareScale: number): number {
  const factor = covarianceOf(fit);
  if (!choleskyInPlace(factor, fit.count)) throw new Error('covariance is singular');
  const steps = 20_000;
  const mass = shareScale < Infinity ? shareScale * (1 - Math.exp(-1 / shareScale)) : 1;
  const top = logDensity(fit, factor, Math.min(1, Math.max(0, fit.share)));
  let sum = 0;
  for (let step = 0; step <= steps; step += 1) {
    const share = step / steps;
    const weight = step === 0 || step === steps ? 1 : step % 2 === 1 ? 4 : 2;
    sum += weight * Math.exp(logDensity(fit, factor, share) - top - share / shareScale);
  }
  return top + Math.log(sum / (3 * steps * mass));
}

/** With both mains the prior is flat in gpm: a share of the mean of both flows. */
const flowTerm = ({ fp, fs }: ReadingValues, way: Way) =>
  fp === undefined || fs === undefined ? 0 : (way === 'forward' ? 0.5 : -0.5) * Math.log(fp / fs);

describe.each(WAYS)('the log evidence of %s flow', (way) => {
  test.each(STATES)('is the integral over the share, by brute force: %s', (_, values) => {
    for (const covariance of [independent(), correlated(random)]) {
      for (const shareScale of [Number.POSITIVE_INFINITY, 0.08]) {
        const reading = readingOf(values, covariance);
        const fit = fitted(reading, way, shareScale);
        const expected = integrated(fit, shareScale) + flowTerm(values, way);
        // Ruled out beyond 1 in 10,000 it is known to a twentieth; elsewhere to the last digits.
        const tolerance = Math.max(0, -fit.share) / Math.sqrt(fit.shareVariance) > 3 ? 0.06 : 1e-4;
        expect(Math.abs(fit.logEvidence - expected)).toBeLessThan(tolerance);
      }
    }
  });
});

/** P(reverse) where the covariance follows the share through the integral, as it does in truth. */
function followedProbability(values: ReadingValues, covariance: Float64Array): number {
  const given = READINGS.map((name) => values[name] !== undefined);
  const known = covariance.map((value, cell) => {
    const [i, j] = [Math.floor(cell / COUNT), cell % COUNT];
    if (given[i] && given[j]) return value;
    return i === j ? VAGUE_SIGMA_F ** 2 : 0;
  });
  const [forward, reverse] = WAYS.map((way) => {
    const fit = fitted(readingOf(values, covariance), way);
    const mainMeasured = values[way === 'forward' ? 'fp' : 'fs'] !== undefined;
    const steps = 1000;
    let sum = 0;
    for (let step = 0; step <= steps; step += 1) {
      const factor = propagated(leansOf(fit, step / steps, mainMeasured), known);
      choleskyInPlace(factor, fit.count);
      const weight = step === 0 || step === steps ? 1 : step % 2 === 1 ? 4 : 2;
      sum += weight * Math.exp(logDensity(fit, factor, step / steps));
    }
    return sum * Math.exp(flowTerm(values, way));
  });
  return reverse! / (forward! + reverse!);
}

describe('P(reverse)', () => {
  const meters = (share: number) => without(balancedValues('forward', share), 'fb', 'tb');
  const temperatures = (share: number, spanF: number) =>
    only(balancedValues('forward', share, 1500, spanF), 'ps', 'pr', 'ss', 'sr');
  test.each<[string, ReadingValues, number]>([
    ['1 % forward', meters(0.01), 0.005],
    ['4 % forward', meters(0.04), 0.005],
    ['balance', { ...meters(0), ss: 44.15, pr: 55.8 }, 0.005],
    ['a meter in the pipe', { ...without(balancedValues('reverse', 0.01), 'tb'), fb: 6 }, 0.005],
    ['temperatures alone', temperatures(0.04, 12), 0.005],
    ['one meter', without(balancedValues('reverse', 0.05), 'fs', 'fb', 'tb'), 0.005],
    ['flows alone', { fp: 1500, fs: 1480 }, 0.005],
    // The further the doubt of the span reaches into the span itself, the less a covariance held at one share is worth.
    ['temperatures alone 1 F apart', temperatures(0.4, 1), 0.1],
    ['temperatures alone 0.2 F apart', temperatures(0.4, 0.2), 0.1],
  ])('is that of a covariance which follows the share: %s', (_, values, tolerance) => {
    for (const covariance of [independent(), correlated(random)]) {
      const found = reverseProbability(readingOf(values, covariance));
      expect(Math.abs(found - followedProbability(values, covariance))).toBeLessThan(tolerance);
    }
  });
});

describe('the covariance of the comparisons', () => {
  const SUBSETS: [string, ReadingName[]][] = [
    ['everything', []],
    ['no pipe sensor', ['tb']],
    ['no bypass meter', ['fb']],
    ['no primary flow', ['fp']],
    ['no secondary flow', ['fs']],
    ['no primary return', ['pr']],
    ['flows alone', ['ps', 'pr', 'ss', 'sr', 'tb']],
  ];
  for (const way of WAYS) {
    test.each(SUBSETS)(`in ${way} flow is that of the readings, carried through the tees: %s`, (_, missing) => {
      const values = without({ ...balancedValues(way, 0.2), ss: 46.1, pr: 54.2, fb: 280 }, ...missing);
      const covariance = correlated(random);
      const fit = fitted(readingOf(values, covariance), way);
      const mainMeasured = values[way === 'forward' ? 'fp' : 'fs'] !== undefined;
      const expected = propagated(leansOf(fit, fit.formedAt, mainMeasured), covariance);
      const found = covarianceOf(fit);
      const { pipe } = fit.rows;
      found.forEach((value, cell) => {
        const [row, column] = [Math.floor(cell / fit.count), cell % fit.count];
        const size = Math.sqrt(expected[row * fit.count + row]! * expected[column * fit.count + column]!);
        // The pipe's own sensor misses a little of its stream: that alone is added.
        if (row === pipe && column === pipe) expect(value).toBeGreaterThan(expected[cell]!);
        else expect(Math.abs(value - expected[cell]!)).toBeLessThan(1e-9 * size);
      });
    });
  }

  test('is factored as Cholesky factors it', () => {
    for (let draw = 0; draw < 20; draw += 1) {
      const values = { ...balancedValues('reverse', 0.2), ss: 46.1 + 0.1 * draw, fb: -280 };
      const fit = fitted(readingOf(values, correlated(random)), 'forward');
      const factor = covarianceOf(fit);
      expect(choleskyInPlace(factor, fit.count)).toBe(true);
      for (let row = 0; row < fit.count; row += 1) {
        for (let column = 0; column <= row; column += 1) {
          const unit = column === row ? 1 : fit.lower[row * 5 + column]!;
          const root = factor[row * fit.count + column]!;
          expect(unit * Math.sqrt(fit.pivots[column]!) - root).toBeCloseTo(
            0,
            9 - Math.ceil(Math.log10(1 + Math.abs(root))),
          );
        }
      }
    }
  });

  test('gives an unsure place to the pipe’s own temperature while hardly anything flows in it', () => {
    const pipeVariance = (share: number) => {
      const fit = fitted(readingOf(without(balancedValues('forward', share), 'fb')), 'forward');
      return covarianceOf(fit)[fit.rows.pipe * (fit.count + 1)]!;
    };
    expect(Math.sqrt(pipeVariance(0))).toBeGreaterThan(5);
    expect(pipeVariance(0.04)).toBeLessThan(pipeVariance(0));
    expect(Math.sqrt(pipeVariance(0.2))).toBeLessThan(1);
  });
});

describe('the fitted share', () => {
  test.each(WAYS)('of a loop that balances in %s flow is the true one, without disagreement', (way) => {
    for (const share of [0.02, 0.2, 0.6]) {
      const fit = fitted(readingOf(balancedValues(way, share), correlated(random)), way);
      expect(fit.share).toBeCloseTo(share, 9);
      expect(fit.chiSquare).toBeLessThan(1e-9);
      expect(fit.redundancy).toBe(4);
    }
  });

  test('is where the squared disagreement is least, and its variance the curvature there', () => {
    const fit = fitted(
      readingOf({ ...balancedValues('reverse', 0.3), ss: 47.9, fp: 1030 }, correlated(random)),
      'reverse',
    );
    const factor = covarianceOf(fit);
    choleskyInPlace(factor, fit.count);
    const square = (share: number) =>
      inverseQuadraticForm(factor, fit.count, comparisonsAt(fit, share), new Float64Array(5));
    expect(square(fit.share)).toBeCloseTo(fit.chiSquare, 9);
    const [up, down] = [square(fit.share + 0.01), square(fit.share - 0.01)];
    expect(up - down).toBeCloseTo(0, 6);
    expect((up - 2 * square(fit.share) + down) / 1e-4).toBeCloseTo(2 / fit.shareVariance, 3);
  });

  test('counts a measurement more as one comparison more than the unknowns', () => {
    const redundancy = (...missing: ReadingName[]) =>
      fitted(readingOf(without(balancedValues('forward', 0.2), ...missing)), 'forward').redundancy;
    expect([redundancy(), redundancy('tb'), redundancy('tb', 'fb'), redundancy('tb', 'fb', 'fs')]).toEqual([
      4, 3, 2, 1,
    ]);
    expect(redundancy('tb', 'fb', 'fs', 'ss')).toBe(0);
  });

  test('never disagrees less than the two sensors of its unmixed stream do', () => {
    for (let draw = 0; draw < 200; draw += 1) {
      const values = {
        ...balancedValues('reverse', 0.3 * random.uniform()),
        ss: 45 + random.normal(),
        pr: 55 + random.normal(),
      };
      const reading = readingOf(values, correlated(random));
      for (const way of WAYS) {
        expect(fitted(reading, way).chiSquare).toBeGreaterThan(leastDisagreement(reading, way) * (1 - 1e-9) - 1e-9);
      }
    }
  });
});
