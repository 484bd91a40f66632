import type { SlotReading } from './slot-reading';
import type { Arrangement } from './types';
import { excessDisagreement, settle, stretchOf } from './verdict';
import type { Verdict } from './verdict';
import { emptyWayFit, fitWay } from './way-fit';
import type { WayFit } from './way-fit';
import { emptyWayState, stateOfWay } from './way-state';
import type { WayState } from './way-state';

/** Odds beyond which the less likely way is not worked out at all. */
const NEGLIGIBLE_LOG_ODDS = 14;

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
}

export const emptyWeighing = (shareScale: number, stepMinutes: number): Weighing => ({
  forward: emptyWayFit('forward'),
  reverse: emptyWayFit('reverse'),
  forwardState: emptyWayState(),
  reverseState: emptyWayState(),
  shareScale,
  bothPrior: Math.min(0.2, 0.004 * stepMinutes),
});

/**
 * Weighs one slot: both ways, their odds, and the verdict. False when nothing measured bears on the direction.
 *
 * Units   as SlotReading. A variable-primary plant's bypass runs forward or not at all.
 */
export function weighSlot(arrangement: Arrangement, reading: SlotReading, scratch: Weighing, out: Verdict): boolean {
  const { forward, reverse, forwardState, reverseState, shareScale } = scratch;
  fitWay(reading, forward, shareScale);
  const oneWay = arrangement === 'variable-primary';
  if (oneWay) {
    if (!forward.informed) return false;
    stateOfWay(reading, forward, stretchOf(forward), shareScale, forwardState);
    settle(arrangement, reading, 0, forward, forward, forwardState, forwardState, 0, out);
    return true;
  }
  fitWay(reading, reverse, shareScale);
  if (!forward.informed && !reverse.informed) return false;
  const closest = excessDisagreement(forward) < excessDisagreement(reverse) ? forward : reverse;
  const stretch = stretchOf(closest);
  // Disagreement weakens the odds as it widens the intervals.
  const logOdds = (reverse.logEvidence - forward.logEvidence) / stretch;
  const pReverse = 1 / (1 + Math.exp(-logOdds));
  if (logOdds < NEGLIGIBLE_LOG_ODDS) stateOfWay(reading, forward, stretch, shareScale, forwardState);
  if (logOdds > -NEGLIGIBLE_LOG_ODDS) stateOfWay(reading, reverse, stretch, shareScale, reverseState);
  settle(arrangement, reading, pReverse, forward, reverse, forwardState, reverseState, 0, out);
  return true;
}
