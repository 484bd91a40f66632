/** Ten equal bins of P(reverse) for the expected calibration error. */
export const CALIBRATION_BINS = 10;

/** Sums over running intervals, so that plants pool by addition. Squared flow errors are shares of design flow, squared. */
export interface Tally {
  running: number;
  answered: number;
  directed: number;
  /** Of the intervals given a direction: how many, and how many rightly; all, |b| > 5 % and > 10 % of secondary flow. */
  judged: number;
  right: number;
  judged5: number;
  right5: number;
  judged10: number;
  right10: number;
  /** Called forward or reverse, and with the true sign; called still, and within 5 % of secondary flow of it. */
  signed: number;
  signedRight: number;
  still: number;
  stillNear: number;
  /** Running intervals by size, whether or not a direction was given: the stricter denominators. */
  running5: number;
  running10: number;
  /** Truly not reverse (b >= 0), and called reverse. */
  notReverse: number;
  falseReverse: number;
  /** Truly reverse beyond the still band; called forward or still; left unknown. */
  reverse: number;
  missedReverse: number;
  unknownReverse: number;
  /** Truly reverse at all (b < 0), and not called reverse, for the strictest reading. */
  anyReverse: number;
  anyReverseMissed: number;
  probabilities: number;
  brier: number;
  binCount: number[];
  binProbability: number[];
  binReverse: number[];
  bypass: number;
  bypassSquares: number;
  bypassBias: number;
  /** Only where both the estimate and the textbook answer. */
  compared: number;
  comparedSquares: number;
  textbookSquares: number;
  blend: number;
  blendSquares: number;
  bypassIntervals: number;
  bypassCovered: number;
  blendIntervals: number;
  blendCovered: number;
  /** Half-widths of the 90 % interval of b as share of design flow. */
  halfWidths: number;
  offsets: number;
  offsetSquares: number;
  /** Lasting errors whose true value lies in the finding's 90 % interval. */
  findings: number;
  findingsCovered: number;
  gainRatios: number;
  gainRatioSquares: number;
  /** As gainRatio, rated flow against the secondary meter. */
  ratedRatios: number;
  ratedRatioSquares: number;
}

export function emptyTally(): Tally {
  const bins = () => new Array<number>(CALIBRATION_BINS).fill(0);
  return {
    running: 0,
    answered: 0,
    directed: 0,
    judged: 0,
    right: 0,
    judged5: 0,
    right5: 0,
    judged10: 0,
    right10: 0,
    signed: 0,
    signedRight: 0,
    still: 0,
    stillNear: 0,
    running5: 0,
    running10: 0,
    notReverse: 0,
    falseReverse: 0,
    reverse: 0,
    missedReverse: 0,
    unknownReverse: 0,
    anyReverse: 0,
    anyReverseMissed: 0,
    probabilities: 0,
    brier: 0,
    binCount: bins(),
    binProbability: bins(),
    binReverse: bins(),
    bypass: 0,
    bypassSquares: 0,
    bypassBias: 0,
    compared: 0,
    comparedSquares: 0,
    textbookSquares: 0,
    blend: 0,
    blendSquares: 0,
    bypassIntervals: 0,
    bypassCovered: 0,
    blendIntervals: 0,
    blendCovered: 0,
    halfWidths: 0,
    offsets: 0,
    offsetSquares: 0,
    findings: 0,
    findingsCovered: 0,
    gainRatios: 0,
    gainRatioSquares: 0,
    ratedRatios: 0,
    ratedRatioSquares: 0,
  };
}

/** The sum of tallies. */
export function addTallies(tallies: readonly Tally[]): Tally {
  const sum = emptyTally();
  for (const tally of tallies) {
    for (const key of Object.keys(sum) as (keyof Tally)[]) {
      const to = sum[key];
      const from = tally[key];
      if (Array.isArray(to) && Array.isArray(from)) from.forEach((value, bin) => (to[bin]! += value));
      else if (typeof to === 'number' && typeof from === 'number') Object.assign(sum, { [key]: to + from });
    }
  }
  return sum;
}
