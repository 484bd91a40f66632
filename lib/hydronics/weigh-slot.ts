import { emptyBothWays, weighBothWays } from './both-ways';
import type { BothWays } from './both-ways';
import { SENSOR_ROLES } from './calibration-types';
import { FP, TEMPERATURES } from './loop-record';
import { copyReading, oddReading, setAside } from './set-aside';
import { emptySlotReading } from './slot-reading';
import type { SlotReading } from './slot-reading';
import type { Arrangement } from './types';
import { excessDisagreement, settle, stretchOf } from './verdict';
import type { Verdict } from './verdict';
import { emptyWayFit } from './contrasts';
import { fitWay, leastDisagreement, ruleOut } from './way-fit';
import type { WayFit } from './contrasts';
import { emptyWayState, stateOfWay } from './way-state';
import type { WayState } from './way-state';

/** Odds beyond which the less likely way is not worked out at all. */
const NEGLIGIBLE_LOG_ODDS = 14;

/** A way whose paired sensors disagree by this much more than all of the other's comparisons is out of the question. */
const HOPELESS_CHI_SQUARE = 80;
const HOPELESS_FACTOR = 2;

/** Squared disagreement with the closest way from which a swing within the interval is considered. */
const ASK_BOTH_CHI_SQUARE = 4;
/** The same in a record that swings often. */
const ASK_SWINGING_CHI_SQUARE = 1;

/** Prior probability that the pipe runs both ways within one interval, for a record that has not shown it (common practice). */
export const usualBothPrior = (stepMinutes: number): number => Math.min(0.2, 0.004 * stepMinutes);

/** Scratch of the weighing of one slot after another. */
export interface Weighing {
  forward: WayFit;
  reverse: WayFit;
  forwardState: WayState;
  reverseState: WayState;
  /** Mean share that crosses over in this record: the scale of the prior; Infinity for none. */
  shareScale: number;
  /** Prior probability that the pipe ran both ways within one interval. */
  bothPrior: number;
  both: BothWays;
  /** The reading without the odd one. */
  trial: SlotReading;
}

export const emptyWeighing = (shareScale: number, bothPrior: number): Weighing => ({
  forward: emptyWayFit('forward'),
  reverse: emptyWayFit('reverse'),
  forwardState: emptyWayState(),
  reverseState: emptyWayState(),
  shareScale,
  bothPrior,
  both: emptyBothWays(),
  trial: emptySlotReading(),
});

/**
 * Weighs one slot: both ways, their odds, and the verdict. False when nothing measured bears on the direction.
 *
 * Units   as SlotReading. A variable-primary plant's bypass runs forward or not at all.
 */
export function weighSlot(arrangement: Arrangement, reading: SlotReading, scratch: Weighing, out: Verdict): boolean {
  const { forward, reverse, forwardState, shareScale } = scratch;
  const oneWay = arrangement === 'variable-primary';
  if (oneWay) {
    fitWay(reading, forward, shareScale);
    if (!forward.informed) return false;
    stateOfWay(reading, forward, stretchOf(forward), shareScale, forwardState);
    settle(arrangement, reading, 0, forward, forward, forwardState, forwardState, null, out);
    return true;
  }
  if (!weighBoth(arrangement, reading, scratch, out)) return false;
  if (out.reason !== 'sensors contradict') return true;
  const closest = excessDisagreement(forward) < excessDisagreement(reverse) ? forward : reverse;
  const { chiSquare, redundancy } = closest;
  const odd = oddReading(reading, closest, shareScale);
  if (odd < 0) return true;
  copyReading(reading, scratch.trial);
  setAside(scratch.trial, odd);
  weighBoth(arrangement, scratch.trial, scratch, out);
  // The disagreement that was found stays on record, with the reading that made it.
  out.chiSquare = chiSquare;
  out.redundancy = redundancy;
  out.atOdds = odd === TEMPERATURES + FP && reading.rated ? RATED_FLOW : odd;
  return true;
}
const RATED_FLOW = SENSOR_ROLES.indexOf('ratedFlow');

/** Weighs both ways on one reading; false when nothing measured bears on the direction. */
function weighBoth(arrangement: Arrangement, reading: SlotReading, scratch: Weighing, out: Verdict): boolean {
  const { forward, reverse, forwardState, reverseState, shareScale } = scratch;
  fitBoth(reading, forward, reverse, shareScale);
  if (!forward.informed && !reverse.informed) return false;
  const closest = excessDisagreement(forward) < excessDisagreement(reverse) ? forward : reverse;
  const stretch = stretchOf(closest);
  // Disagreement weakens the odds as it widens the intervals.
  const logOdds = (reverse.logEvidence - forward.logEvidence) / stretch;
  const pReverse = 1 / (1 + Math.exp(-logOdds));
  if (logOdds < NEGLIGIBLE_LOG_ODDS) stateOfWay(reading, forward, stretch, shareScale, forwardState);
  if (logOdds > -NEGLIGIBLE_LOG_ODDS) stateOfWay(reading, reverse, stretch, shareScale, reverseState);
  const bothWays = bothProbability(reading, forward, reverse, scratch.bothPrior, scratch.both);
  const both = bothWays > 0.5 ? scratch.both : null;
  settle(arrangement, reading, pReverse, forward, reverse, forwardState, reverseState, both, out);
  return true;
}

/** Probability that the pipe ran both ways within the interval; asked only where one way alone does not explain it. */
export function bothProbability(
  reading: SlotReading,
  forward: WayFit,
  reverse: WayFit,
  prior: number,
  both: BothWays,
): number {
  if (!(Math.min(forward.chiSquare, reverse.chiSquare) > (prior > 0.1 ? ASK_SWINGING_CHI_SQUARE : ASK_BOTH_CHI_SQUARE)))
    return 0;
  weighBothWays(reading, both);
  const high = Math.max(forward.logEvidence, reverse.logEvidence);
  const low = Math.min(forward.logEvidence, reverse.logEvidence);
  const oneWay = high + Math.log1p(Math.exp(low - high)) + Math.log(0.5 * (1 - prior));
  return 1 / (1 + Math.exp(oneWay - both.logEvidence - Math.log(prior)));
}

/** Fits the way that the paired sensors favour, and the other unless those alone rule it out. */
function fitBoth(reading: SlotReading, forward: WayFit, reverse: WayFit, shareScale: number): void {
  const leastForward = leastDisagreement(reading, 'forward');
  const leastReverse = leastDisagreement(reading, 'reverse');
  const first = leastForward <= leastReverse ? forward : reverse;
  const other = first === forward ? reverse : forward;
  const least = first === forward ? leastReverse : leastForward;
  fitWay(reading, first, shareScale);
  if (first.informed && least > HOPELESS_FACTOR * first.chiSquare + HOPELESS_CHI_SQUARE) ruleOut(other, least);
  else fitWay(reading, other, shareScale);
}
