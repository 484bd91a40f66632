import type { HourDetail, HourRow } from '../schemas/results';

export type Direction = HourDetail['direction'];
export type Cause = HourRow['cause'];

/** A cause as pages write it: `reverse-flow` is "reverse flow"; in a low hour `none` means that no cure would save enough. */
export const causeWords = (cause: Cause): string =>
  cause === 'none' ? 'none that counts' : cause.replaceAll('-', ' ');

/** What a direction is, in the few words that stand beside its name. */
export const DIRECTION_MEANS: Readonly<Record<Direction, string>> = {
  forward: 'surplus: supply water crosses over',
  reverse: 'deficit: return water comes back',
  still: 'balance: nothing flows either way',
  unknown: 'not enough evidence, drawn as its interval',
};

/** The general caution; it stands in the foot of every page and closes every section that could be acted on. */
export const CAUTION =
  'An estimate with uncertainty, for review by the plant’s operator and a licensed engineer. The maker’s limits, warranty and local code govern. Slackwater reads; it writes to no control system.';
