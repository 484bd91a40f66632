import type { Measures } from './measures';
import type { Sensing } from './types';

/** A floor or a ceiling of the accuracy that the kernel must show. */
export interface Limit {
  measure: keyof Measures | 'worst5' | 'worstRatio';
  label: string;
  atLeast?: number;
  atMost?: number;
}

const DIRECTIONS_GIVEN: readonly Limit[] = [
  { measure: 'answered', label: 'answered', atLeast: 0.98 },
  { measure: 'directed', label: 'given a direction', atLeast: 0.95 },
];
const COVERAGE: readonly Limit[] = [
  { measure: 'bypassCoverage', label: 'coverage of b', atLeast: 0.85, atMost: 0.97 },
  { measure: 'blendCoverage', label: 'coverage of blended supply', atLeast: 0.85, atMost: 0.95 },
];

export const FLOORS_ALL: readonly Limit[] = [
  ...DIRECTIONS_GIVEN,
  { measure: 'directionRight', label: 'direction right', atLeast: 0.985 },
  { measure: 'directionRight5', label: 'direction right, |b| > 5 %', atLeast: 0.995 },
  { measure: 'worst5', label: '  worst plant', atLeast: 0.97 },
  { measure: 'directionRight10', label: 'direction right, |b| > 10 %', atLeast: 0.998 },
  { measure: 'falseReverse', label: 'false reverse', atMost: 0.005 },
  { measure: 'missedReverse', label: 'missed reverse', atMost: 0.03 },
  { measure: 'brier', label: 'Brier score', atMost: 0.015 },
  { measure: 'calibrationError', label: 'expected calibration error', atMost: 0.015 },
  { measure: 'rmseRatio', label: 'RMSE of b / textbook', atMost: 0.6 },
  { measure: 'worstRatio', label: '  worst plant', atMost: 1.25 },
  { measure: 'bypassRmseShare', label: 'RMSE of b, share of design' },
  { measure: 'blendRmseF', label: 'RMSE of blended supply, F', atMost: 0.38 },
  ...COVERAGE,
  { measure: 'halfWidthShare', label: 'half-width of b, share of design' },
  { measure: 'offsetRmsF', label: 'sensor offsets, F' },
  { measure: 'findingCoverage', label: 'coverage of sensor findings' },
  { measure: 'gainRatioPercent', label: 'ratio of meter gains, %', atMost: 1.5 },
  { measure: 'ratedRatioPercent', label: 'ratio of rated flow to meter, %' },
  { measure: 'signRight', label: 'sign right where forward or reverse' },
  { measure: 'stillNear', label: 'within 5 % where still' },
  { measure: 'directionRightStrict', label: 'right of all running (unknown wrong)' },
  { measure: 'directionRight5Strict', label: 'right of running, |b| > 5 %' },
  { measure: 'directionRight10Strict', label: 'right of running, |b| > 10 %' },
  { measure: 'missedReverseStrict', label: 'missed reverse (unknown missed)' },
  { measure: 'missedReverseAny', label: 'missed of every b < 0' },
];

/** What a group must reach where it differs from all plants together; `undefined` limits drop a floor. */
function withOverrides(overrides: Readonly<Partial<Record<Limit['measure'], Partial<Limit>>>>): Limit[] {
  return FLOORS_ALL.map((limit) => ({ ...limit, ...overrides[limit.measure] }));
}

export const FLOORS_NEAR_BALANCE = withOverrides({
  directionRight: { atLeast: undefined },
  directionRight5: { atLeast: 0.985 },
  directionRight10: { atLeast: undefined },
  falseReverse: { atMost: 0.02 },
  brier: { atMost: 0.06 },
});

export const FLOORS_BY_SENSING: Readonly<Record<Sensing, Limit[]>> = {
  'both-meters': withOverrides({
    rmseRatio: { atMost: 0.55 },
    bypassRmseShare: { atMost: 0.02 },
    offsetRmsF: { atMost: 0.12 },
  }),
  'pump-status': withOverrides({ rmseRatio: { atMost: 0.4 }, bypassRmseShare: { atMost: 0.022 } }),
  'one-meter': withOverrides({ bypassRmseShare: { atMost: 0.04 }, offsetRmsF: { atMost: 0.3 } }),
  temperatures: withOverrides({ bypassRmseShare: { atMost: 0.12 }, offsetRmsF: { atMost: 0.25 } }),
};

/** Whether a value keeps a limit; a measure that nothing entered keeps it not. */
export const keeps = (limit: Limit, value: number): boolean =>
  (limit.atLeast === undefined || value >= limit.atLeast) && (limit.atMost === undefined || value <= limit.atMost);
