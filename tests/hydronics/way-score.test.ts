import { describe, expect, test } from 'vitest';
import { FB, FP, FS, PR, PS, SR, SS, TB } from '@/lib/hydronics/loop-record';
import {
  BYPASS_GAIN,
  BYPASS_ZERO,
  PRIMARY_GAIN,
  PRIMARY_ZERO,
  SECONDARY_GAIN,
  SECONDARY_ZERO,
} from '@/lib/hydronics/sensor-errors';
import type { SlotReading } from '@/lib/hydronics/slot-reading';
import { CONTRASTS, emptyWayFit } from '@/lib/hydronics/contrasts';
import { fitWay } from '@/lib/hydronics/way-fit';
import type { Way, WayFit } from '@/lib/hydronics/contrasts';
import { errorDerivatives, profileScore } from '@/lib/hydronics/way-score';
import { choleskyInPlace, inverseQuadraticForm } from '@/lib/hydronics/linear-algebra';
import { randomSource } from '../support/simulation/random';
import {
  balancedValues,
  comparisonsAt,
  correlated,
  covarianceOf,
  fitted,
  readingOf,
  without,
} from './support/readings';
import type { ReadingName, ReadingValues } from './support/readings';

const DESIGN_PRIMARY_GPM = 1800;
const DESIGN_SECONDARY_GPM = 2000;
/** Five offsets, then gain and zero of primary, secondary and bypass flow. */
const ERRORS = 11;
const PLACES = { supply: PS, gain: PRIMARY_GAIN, zero: PRIMARY_ZERO };
const random = randomSource(3, 'way-score');
const WIDE = correlated(random);

/** The flow that gains act on: as read, or as given. */
type FlowsGainedOn = readonly number[];

/** A reading whose sensors are corrected for lasting errors: an offset comes off, a gain takes its share, a zero of design. */
function corrected(reading: SlotReading, errors: ArrayLike<number>, gainedOn: FlowsGainedOn): SlotReading {
  const copy = structuredClone(reading);
  for (let i = 0; i < 5; i += 1) if (reading.measured[i]) copy.temperatures[i]! -= errors[i]!;
  for (let flow = 0; flow < 3; flow += 1) {
    const designGpm = flow === FP ? DESIGN_PRIMARY_GPM : DESIGN_SECONDARY_GPM;
    copy.flows[flow]! -= errors[5 + 2 * flow]! * gainedOn[flow]! + errors[6 + 2 * flow]! * designGpm;
  }
  return copy;
}

/** Comparisons at a share with errors, in the rows of `fit`. */
function comparisons(reading: SlotReading, fit: WayFit, share: number, errors: Float64Array, gainedOn: FlowsGainedOn) {
  return comparisonsAt(fitted(corrected(reading, errors, gainedOn), fit.way), share);
}

const unit = (index: number, step: number) =>
  Float64Array.from({ length: ERRORS }, (_, each) => (each === index ? step : 0));

const SHARE = 0.22;
/** What is missing, how many comparisons are left, and whether the bypass meter gives a magnitude. */
const CASES: [string, Way, ReadingName[], number, boolean][] = (['forward', 'reverse'] as const).flatMap((way) => {
  const [main, other] = way === 'forward' ? (['fp', 'fs'] as const) : (['fs', 'fp'] as const);
  return [
    [`${way}, all measured`, way, [], 5, false],
    [`${way}, without the pipe's own meter and sensor`, way, ['fb', 'tb'], 3, false],
    [`${way}, main flow missing`, way, [main], 4, false],
    [`${way}, smaller flow missing`, way, [other], 4, false],
    [`${way}, an unsigned bypass meter`, way, [], 5, true],
    // A vague value stands in for a supply; nothing does for the primary return.
    [
      `${way}, one sensor in the unmixed stream`,
      way,
      [way === 'forward' ? 'ss' : 'pr'],
      way === 'forward' ? 5 : 4,
      false,
    ],
  ] satisfies [string, Way, ReadingName[], number, boolean][];
});

describe('the derivatives of the comparisons by the lasting errors', () => {
  test.each(CASES)('are those of central differences: %s', (_, way, missing, count, unsigned) => {
    const reading = readingOf(without(balancedValues(way, SHARE), ...missing), WIDE);
    reading.bypassUnsigned = unsigned;
    if (unsigned) reading.flows[FB] = Math.abs(reading.flows[FB]!);
    const fit = fitted(reading, way);
    expect(fit.count).toBe(count);
    const derivatives = new Float64Array(CONTRASTS * ERRORS);
    errorDerivatives(reading, fit, SHARE, DESIGN_PRIMARY_GPM, DESIGN_SECONDARY_GPM, derivatives);
    // A balanced loop: flows as read are the flows as fitted.
    const flows = [...reading.flows];
    for (let error = 0; error < ERRORS; error += 1) {
      // A magnitude has no zero that goes one way: the pipe may run either.
      if (unsigned && error === 6 + 2 * FB) continue;
      const step = error < 5 ? 0.01 : 1e-4;
      const up = comparisons(reading, fit, SHARE, unit(error, step), flows);
      const down = comparisons(reading, fit, SHARE, unit(error, -step), flows);
      for (let row = 0; row < fit.count; row += 1) {
        const slope = (up[row]! - down[row]!) / (2 * step);
        expect(derivatives[row * ERRORS + error]! - slope).toBeCloseTo(0, 6);
      }
    }
  });

  test('leave a zero out of an unsigned meter, which may have read either way', () => {
    const reading = readingOf(balancedValues('reverse', SHARE), WIDE);
    reading.bypassUnsigned = true;
    const fit = fitted(reading, 'reverse');
    const derivatives = new Float64Array(CONTRASTS * ERRORS);
    errorDerivatives(reading, fit, SHARE, DESIGN_PRIMARY_GPM, DESIGN_SECONDARY_GPM, derivatives);
    expect(derivatives[fit.rows.bypass * ERRORS + 6 + 2 * FB]).toBe(0);
  });

  test('let the pipe’s own sensor say nothing of any offset while hardly anything flows in it', () => {
    const reading = readingOf(balancedValues('forward', 0.03), WIDE);
    const fit = fitted(reading, 'forward');
    const derivatives = new Float64Array(CONTRASTS * ERRORS);
    errorDerivatives(reading, fit, 0.03, DESIGN_PRIMARY_GPM, DESIGN_SECONDARY_GPM, derivatives);
    expect(fit.rows.pipe).toBeGreaterThanOrEqual(0);
    for (const error of [TB, PS]) expect(derivatives[fit.rows.pipe * ERRORS + error]).toBe(0);
  });
});

/** Half the squared disagreement with the share profiled within 0..1, the covariance held at that of `fit`. */
function profiled(reading: SlotReading, fit: WayFit, errors: Float64Array, gainedOn: FlowsGainedOn): number {
  const factor = covarianceOf(fit);
  if (!choleskyInPlace(factor, fit.count)) throw new Error('covariance is singular');
  const workspace = new Float64Array(CONTRASTS);
  const square = (x: Float64Array) => inverseQuadraticForm(factor, fit.count, x, workspace);
  const zero = comparisons(reading, fit, 0, errors, gainedOn);
  const one = comparisons(reading, fit, 1, errors, gainedOn);
  const slope = one.map((value, row) => value - zero[row]!);
  // zero + share * slope: the square is a parabola of the share.
  const [aa, ss] = [square(zero), square(slope)];
  const as = (square(one) - aa - ss) / 2;
  const share = ss > 0 ? Math.min(1, Math.max(0, -as / ss)) : 0;
  return 0.5 * (aa + 2 * share * as + share * share * ss);
}

/** Flows as a way's fit has them: the main as read, the rest by the share. */
function flowsAsFitted(reading: SlotReading, fit: WayFit): number[] {
  const [main, other] = fit.way === 'forward' ? [FP, FS] : [FS, FP];
  const share = Math.min(1, Math.max(0, fit.share));
  const flows = [Number.NaN, Number.NaN, Number.NaN];
  const mainGpm = Number.isNaN(reading.flows[main]!) ? reading.flows[other]! / (1 - share) : reading.flows[main]!;
  flows[main] = mainGpm;
  flows[other] = (1 - share) * mainGpm;
  flows[FB] = (fit.way === 'forward' ? 1 : -1) * share * mainGpm;
  return flows;
}

const PARAMETERS = [
  PS,
  PR,
  SS,
  SR,
  TB,
  PRIMARY_GAIN,
  PRIMARY_ZERO,
  SECONDARY_GAIN,
  SECONDARY_ZERO,
  BYPASS_GAIN,
  BYPASS_ZERO,
];

/** Gradient and both triangles of the normal matrix of one reading's score. */
function scored(reading: SlotReading, fit: WayFit, weight = 1) {
  const normal = new Float64Array(ERRORS * ERRORS);
  const gradient = new Float64Array(ERRORS);
  const cost = profileScore(reading, fit, PLACES, DESIGN_PRIMARY_GPM, DESIGN_SECONDARY_GPM, weight, normal, gradient);
  for (let i = 0; i < ERRORS; i += 1) for (let j = 0; j < i; j += 1) normal[j * ERRORS + i] = normal[i * ERRORS + j]!;
  return { cost, normal, gradient };
}

/** Readings a sigma or so off balance, and ones that pull the share across either end. */
const OFF: [string, Way, ReadingValues][] = [
  [
    'forward, a little off',
    'forward',
    { ...balancedValues('forward', 0.25), ss: 44.2, pr: 52.7, fs: 1090, fb: 390, tb: 44.4 },
  ],
  [
    'reverse, a little off',
    'reverse',
    { ...balancedValues('reverse', 0.25), ss: 47.3, pr: 56.3, fp: 1160, fb: -360, tb: 55.5 },
  ],
  ['reverse, main flow missing', 'reverse', { ...without(balancedValues('reverse', 0.25), 'fs'), ss: 47.4, fb: -390 }],
  [
    'forward, temperatures only',
    'forward',
    without({ ...balancedValues('forward', 0.3), ss: 44.3, pr: 52 }, 'fp', 'fs', 'fb'),
  ],
  ['forward, pulled across to reverse', 'forward', { ...balancedValues('reverse', 0.06), tb: Number.NaN }],
  ['reverse, pulled across to forward', 'reverse', { ...balancedValues('forward', 0.06), tb: Number.NaN }],
];

describe('the score of one reading', () => {
  test.each(OFF)('has the slope of its squared disagreement, the share profiled: %s', (_, way, values) => {
    const reading = readingOf(values, WIDE);
    const fit = emptyWayFit(way);
    fitWay(reading, fit, Number.POSITIVE_INFINITY);
    const flows = flowsAsFitted(reading, fit);
    const { gradient, cost } = scored(reading, fit);
    expect(cost).toBeCloseTo(profiled(reading, fit, unit(0, 0), flows), 9);
    expect(2 * cost).toBeCloseTo(fit.chiSquare, 9);
    for (const error of PARAMETERS) {
      const step = error < 5 ? 1e-4 : 1e-6;
      const up = profiled(reading, fit, unit(error, step), flows);
      const slope = (up - profiled(reading, fit, unit(error, -step), flows)) / (2 * step);
      if (error === TB && !(fit.share > 0.1)) continue;
      expect(Math.abs(gradient[error]! - slope)).toBeLessThan(1e-5 * (1 + Math.abs(slope)));
    }
  });

  // Off balance the matrix leaves out second derivatives times what is left over (Gauss-Newton).
  test.each<[string, Way, ReadingName[]]>([
    ['forward', 'forward', []],
    ['reverse', 'reverse', []],
    ['reverse, main flow missing', 'reverse', ['fs']],
    ['forward, temperatures only', 'forward', ['fp', 'fs', 'fb']],
  ])('has the curvature of its squared disagreement in a loop that balances: %s', (_, way, missing) => {
    const reading = readingOf(without(balancedValues(way, 0.3), ...missing), WIDE);
    const fit = fitted(reading, way);
    const flows = flowsAsFitted(reading, fit);
    const { normal } = scored(reading, fit);
    const at = (i: number, si: number, j: number, sj: number) => {
      const errors = unit(i, si);
      errors[j]! += sj;
      return profiled(reading, fit, errors, flows);
    };
    for (const i of PARAMETERS) {
      for (const j of PARAMETERS) {
        const [si, sj] = [i < 5 ? 1e-3 : 1e-5, j < 5 ? 1e-3 : 1e-5];
        const curvature =
          (at(i, si, j, sj) - at(i, si, j, -sj) - at(i, -si, j, sj) + at(i, -si, j, -sj)) / (4 * si * sj);
        const size = Math.sqrt(normal[i * ERRORS + i]! * normal[j * ERRORS + j]!);
        expect(Math.abs(normal[i * ERRORS + j]! - curvature)).toBeLessThan(1e-4 * (1 + size));
      }
    }
  });

  test('counts as often as its weight, and adds to what is there', () => {
    const reading = readingOf(OFF[0]![2], WIDE);
    const fit = fitted(reading, 'forward');
    const once = scored(reading, fit);
    const half = scored(reading, fit, 0.5);
    expect(half.cost).toBeCloseTo(0.5 * once.cost, 12);
    half.gradient.forEach((value, i) => expect(value).toBeCloseTo(0.5 * once.gradient[i]!, 9));
    const normal = new Float64Array(ERRORS * ERRORS);
    const gradient = new Float64Array(ERRORS);
    for (let time = 0; time < 2; time += 1) {
      profileScore(reading, fit, PLACES, DESIGN_PRIMARY_GPM, DESIGN_SECONDARY_GPM, 1, normal, gradient);
    }
    gradient.forEach((value, i) => expect(value).toBeCloseTo(2 * once.gradient[i]!, 9));
    expect(normal[0]).toBeCloseTo(2 * once.normal[0]!, 9);
  });

  test('goes to the running set’s own gain and supply offset where these stand in, and its zero to nobody', () => {
    const reading = readingOf(OFF[0]![2], WIDE);
    const fit = fitted(reading, 'forward');
    const own = scored(reading, fit).gradient;
    const gradient = new Float64Array(ERRORS + 2);
    const places = { supply: ERRORS + 1, gain: ERRORS, zero: -1 };
    const normal = new Float64Array((ERRORS + 2) ** 2);
    profileScore(reading, fit, places, DESIGN_PRIMARY_GPM, DESIGN_SECONDARY_GPM, 1, normal, gradient);
    expect(gradient[ERRORS]).toBeCloseTo(own[PRIMARY_GAIN]!, 9);
    expect(gradient[ERRORS + 1]).toBeCloseTo(own[PS]!, 9);
    for (const place of [PS, PRIMARY_GAIN, PRIMARY_ZERO]) expect(gradient[place]).toBe(0);
    expect(gradient[SS]).toBeCloseTo(own[SS]!, 9);
  });
});
