import { FLOWS, PR, TB, TEMPERATURES } from '@/lib/hydronics/loop-record';
import { emptySlotReading } from '@/lib/hydronics/slot-reading';
import type { SlotReading } from '@/lib/hydronics/slot-reading';
import { CONTRASTS, emptyWayFit, partsOf } from '@/lib/hydronics/contrasts';
import { fitWay } from '@/lib/hydronics/way-fit';
import type { Way, WayFit } from '@/lib/hydronics/contrasts';
import { emptyVerdict } from '@/lib/hydronics/verdict';
import type { Verdict } from '@/lib/hydronics/verdict';
import { emptyWeighing, usualBothPrior, weighSlot } from '@/lib/hydronics/weigh-slot';
import type { Weighing } from '@/lib/hydronics/weigh-slot';
import type { RandomSource } from '../../support/simulation/random';

/** Order of everything one interval can measure: PS PR SS SR TB, FP FS FB. */
export const READINGS = ['ps', 'pr', 'ss', 'sr', 'tb', 'fp', 'fs', 'fb'] as const;
export type ReadingName = (typeof READINGS)[number];
export type ReadingValues = Partial<Record<ReadingName, number>>;
export const COUNT = READINGS.length;

/** Standard uncertainties where a test names none: 0.25 F, 0.5 F in the common pipe, 20 gpm. */
const SIGMAS: Required<ReadingValues> = { ps: 0.25, pr: 0.25, ss: 0.25, sr: 0.25, tb: 0.5, fp: 20, fs: 25, fb: 10 };
/** Doubt of what stands in for a supply or return that nobody measures, F. */
export const VAGUE_SIGMA_F = 30;

/** Covariance of independent readings, 8 x 8. */
export function independent(sigmas: ReadingValues = {}): Float64Array {
  const covariance = new Float64Array(COUNT * COUNT);
  READINGS.forEach((name, i) => (covariance[i * COUNT + i] = { ...SIGMAS, ...sigmas }[name] ** 2));
  return covariance;
}

/** Covariance whose errors all lean on each other: three errors common to all, of random sizes, beside their own. */
export function correlated(random: RandomSource, sigmas: ReadingValues = {}): Float64Array {
  const covariance = independent(sigmas);
  const own = READINGS.map((_, i) => Math.sqrt(covariance[i * COUNT + i]!));
  for (let common = 0; common < 3; common += 1) {
    const lean = own.map((sigma) => 0.5 * sigma * random.normal());
    for (let i = 0; i < COUNT; i += 1) {
      for (let j = 0; j < COUNT; j += 1) covariance[i * COUNT + j]! += lean[i]! * lean[j]!;
    }
  }
  return covariance;
}

/** One interval's reading on the mixing scale: what is given is measured, with the given 8 x 8 covariance. */
export function readingOf(values: ReadingValues, covariance: Float64Array = independent()): SlotReading {
  const reading = emptySlotReading();
  const value = READINGS.map((name) => values[name] ?? Number.NaN);
  const given = (i: number) => value[i] === value[i];
  for (let i = 0; i < TEMPERATURES; i += 1) {
    reading.temperatures[i] = value[i]!;
    reading.measured[i] = given(i) ? 1 : 0;
    const standsIn = i !== TB && i !== PR && !given(i);
    if (standsIn) reading.temperatures[i] = i === 3 ? 55 : 44;
    for (let j = 0; j < TEMPERATURES; j += 1) {
      const both = given(i) && given(j);
      reading.temperatureCovariance[i * TEMPERATURES + j] = both ? covariance[i * COUNT + j]! : 0;
    }
    if (standsIn) reading.temperatureCovariance[i * TEMPERATURES + i] = VAGUE_SIGMA_F ** 2;
    for (let j = 0; j < FLOWS; j += 1) {
      const both = given(i) && given(TEMPERATURES + j);
      reading.crossCovariance[i * FLOWS + j] = both ? covariance[i * COUNT + TEMPERATURES + j]! : 0;
    }
  }
  for (let i = 0; i < FLOWS; i += 1) {
    reading.flows[i] = value[TEMPERATURES + i]!;
    for (let j = 0; j < FLOWS; j += 1) {
      reading.flowCovariance[i * FLOWS + j] = covariance[(TEMPERATURES + i) * COUNT + TEMPERATURES + j]!;
    }
  }
  return reading;
}

/** What a loop of two ideal tees shows: share of the main flow that crosses over, either way, at 44 and 56 F. */
export function balancedValues(way: Way, share: number, mainGpm = 1500, spanF = 12): Required<ReadingValues> {
  const cold = 44;
  const warm = cold + spanF;
  const forward = way === 'forward';
  return {
    ps: cold,
    pr: forward ? warm - share * spanF : warm,
    ss: forward ? cold : cold + share * spanF,
    sr: warm,
    tb: forward ? cold : warm,
    fp: forward ? mainGpm : (1 - share) * mainGpm,
    fs: forward ? (1 - share) * mainGpm : mainGpm,
    fb: (forward ? share : -share) * mainGpm,
  };
}

/** The values without some of them. */
export function without(values: ReadingValues, ...names: ReadingName[]): ReadingValues {
  return Object.fromEntries(Object.entries(values).filter(([name]) => !names.includes(name as ReadingName)));
}

/** Only some of the values. */
export function only(values: ReadingValues, ...names: ReadingName[]): ReadingValues {
  return Object.fromEntries(Object.entries(values).filter(([name]) => names.includes(name as ReadingName)));
}

/** Fits one way to a reading. */
export function fitted(reading: SlotReading, way: Way, shareScale = Number.POSITIVE_INFINITY): WayFit {
  const fit = emptyWayFit(way);
  fitWay(reading, fit, shareScale);
  return fit;
}

/** What weighs one interval of five minutes, without a record's own spread of shares. */
export const weighing = (shareScale = Number.POSITIVE_INFINITY, bothPrior = usualBothPrior(5)): Weighing =>
  emptyWeighing(shareScale, bothPrior);

/** The verdict on one reading of an ordinary decoupler. */
export function verdictOf(reading: SlotReading, scratch: Weighing = weighing()): Verdict {
  const verdict = emptyVerdict();
  if (!weighSlot('primary-secondary', reading, scratch, verdict)) throw new Error('nothing bears on the direction');
  return verdict;
}

/** Comparisons of a fit at a share. */
export const comparisonsAt = (fit: WayFit, share: number): Float64Array =>
  Float64Array.from({ length: fit.count }, (_, row) => fit.at[row]! + share * fit.slope[row]!);

/** Covariance of the comparisons that a fit holds, put together again from its factors. */
export function covarianceOf({ count, lower, pivots }: WayFit): Float64Array {
  const factor = (row: number, k: number) => (k === row ? 1 : k < row ? lower[row * CONTRASTS + k]! : 0);
  return Float64Array.from({ length: count * count }, (_, cell) => {
    const [row, column] = [Math.floor(cell / count), cell % count];
    let sum = 0;
    for (let k = 0; k < count; k += 1) sum += factor(row, k) * pivots[k]! * factor(column, k);
    return sum;
  });
}

/**
 * How each comparison of a fit at a share leans on each reading, count x 8: written down from the tees, for checking what the
 * fit forms from them. The pipe's own misfit is not in it.
 */
export function leansOf(fit: WayFit, share: number, mainMeasured: boolean): Float64Array {
  const { pure, mate, far, mix, main, other, sign } = partsOf(fit.way);
  const { rows, count } = fit;
  const leans = new Float64Array(count * COUNT);
  const put = (row: number, entries: readonly (readonly [number, number])[]) => {
    if (row >= 0) for (const [reading, lean] of entries) leans[row * COUNT + reading] = lean;
  };
  put(rows.mate, [
    [mate, 1],
    [pure, -1],
  ]);
  put(rows.mix, [
    [mix, 1],
    [far, share - 1],
    [pure, -share],
  ]);
  put(rows.pipe, [
    [TB, 1],
    [pure, -1],
  ]);
  put(rows.other, [
    [TEMPERATURES + other, 1],
    [TEMPERATURES + main, share - 1],
  ]);
  put(rows.bypass, [
    [TEMPERATURES + 2, mainMeasured ? sign : sign * (1 - share)],
    [TEMPERATURES + (mainMeasured ? main : other), -share],
  ]);
  return leans;
}

/** J V J' of leans (count x 8) and a covariance (8 x 8). */
export function propagated(leans: Float64Array, covariance: Float64Array): Float64Array {
  const count = leans.length / COUNT;
  return Float64Array.from({ length: count * count }, (_, cell) => {
    const [a, b] = [Math.floor(cell / count), cell % count];
    let sum = 0;
    for (let i = 0; i < COUNT; i += 1) {
      for (let j = 0; j < COUNT; j += 1)
        sum += leans[a * COUNT + i]! * covariance[i * COUNT + j]! * leans[b * COUNT + j]!;
    }
    return sum;
  });
}

/** Draws readings about true values with errors of a covariance, from its Cholesky factor (8 x 8, lower). */
export function drawn(
  values: Required<ReadingValues>,
  factor: Float64Array,
  random: RandomSource,
): Required<ReadingValues> {
  const white = READINGS.map(() => random.normal());
  const entries = READINGS.map((name, i) => {
    let sum = values[name];
    for (let k = 0; k <= i; k += 1) sum += factor[i * COUNT + k]! * white[k]!;
    return [name, sum];
  });
  return Object.fromEntries(entries) as Required<ReadingValues>;
}
