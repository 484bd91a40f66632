import { CALIBRATION_BINS } from './tally';
import type { Tally } from './tally';

/** The measures of the accuracy table. Shares are fractions; NaN where nothing entered. */
export interface Measures {
  answered: number;
  directed: number;
  directionRight: number;
  directionRight5: number;
  directionRight10: number;
  /** Of the intervals called forward or reverse: the sign is the true one. */
  signRight: number;
  /** Of the intervals called still: the truth is within 5 % of secondary flow of zero. */
  stillNear: number;
  /** As the three directions above with `unknown` counted wrong; the first over all running intervals. */
  directionRightStrict: number;
  directionRight5Strict: number;
  directionRight10Strict: number;
  falseReverse: number;
  missedReverse: number;
  /** `unknown` counted as missed. */
  missedReverseStrict: number;
  /** Every b < 0 counted, however small, and `unknown` counted as missed. */
  missedReverseAny: number;
  brier: number;
  calibrationError: number;
  bypassRmseShare: number;
  bypassBiasShare: number;
  textbookRmseShare: number;
  rmseRatio: number;
  blendRmseF: number;
  bypassCoverage: number;
  blendCoverage: number;
  halfWidthShare: number;
  offsetRmsF: number;
  findingCoverage: number;
  gainRatioPercent: number;
  ratedRatioPercent: number;
}

function calibrationError(tally: Tally): number {
  let sum = 0;
  for (let bin = 0; bin < CALIBRATION_BINS; bin += 1) {
    sum += Math.abs(tally.binProbability[bin]! - tally.binReverse[bin]!);
  }
  return sum / tally.probabilities;
}

/** The measures that sums amount to. */
export function measuresOf(tally: Tally): Measures {
  const rms = (squares: number, count: number) => Math.sqrt(squares / count);
  return {
    answered: tally.answered / tally.running,
    directed: tally.directed / tally.running,
    directionRight: tally.right / tally.judged,
    directionRight5: tally.right5 / tally.judged5,
    directionRight10: tally.right10 / tally.judged10,
    signRight: tally.signedRight / tally.signed,
    stillNear: tally.stillNear / tally.still,
    directionRightStrict: tally.right / tally.running,
    directionRight5Strict: tally.right5 / tally.running5,
    directionRight10Strict: tally.right10 / tally.running10,
    falseReverse: tally.falseReverse / tally.notReverse,
    missedReverse: tally.missedReverse / tally.reverse,
    missedReverseStrict: (tally.missedReverse + tally.unknownReverse) / tally.reverse,
    missedReverseAny: tally.anyReverseMissed / tally.anyReverse,
    brier: tally.brier / tally.probabilities,
    calibrationError: calibrationError(tally),
    bypassRmseShare: rms(tally.bypassSquares, tally.bypass),
    bypassBiasShare: tally.bypassBias / tally.bypass,
    textbookRmseShare: rms(tally.textbookSquares, tally.compared),
    rmseRatio: Math.sqrt(tally.comparedSquares / tally.textbookSquares),
    blendRmseF: rms(tally.blendSquares, tally.blend),
    bypassCoverage: tally.bypassCovered / tally.bypassIntervals,
    blendCoverage: tally.blendCovered / tally.blendIntervals,
    halfWidthShare: tally.halfWidths / tally.bypassIntervals,
    offsetRmsF: rms(tally.offsetSquares, tally.offsets),
    findingCoverage: tally.findingsCovered / tally.findings,
    gainRatioPercent: rms(tally.gainRatioSquares, tally.gainRatios),
    ratedRatioPercent: rms(tally.ratedRatioSquares, tally.ratedRatios),
  };
}
