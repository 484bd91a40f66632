import { emptyWayFit } from './contrasts';
import type { WayFit } from './contrasts';
import { FLOWS, TEMPERATURES } from './loop-record';
import { emptySlotReading } from './slot-reading';
import type { SlotReading } from './slot-reading';
import { excessDisagreement } from './verdict';
import { fitWay } from './way-fit';

/** Doubt of a reading that is set aside: it no longer says anything. */
const ASIDE_SIGMA_F = 40;
const ASIDE_SHARE = 3;
/** Log odds from which a trial counts as saying a way. */
const SAYS_LOG_ODDS = 3;
/** Beyond this squared disagreement more than one reading is off, and none is set aside. */
const ONE_OFF_CHI_SQUARE = 60;

const trial = emptySlotReading();
const forward = emptyWayFit('forward');
const reverse = emptyWayFit('reverse');

/** Copies a reading, so that a trial leaves it as it was. */
export function copyReading(from: SlotReading, to: SlotReading): void {
  to.temperatures.set(from.temperatures);
  to.measured.set(from.measured);
  to.temperatureCovariance.set(from.temperatureCovariance);
  to.flows.set(from.flows);
  to.flowCovariance.set(from.flowCovariance);
  to.crossCovariance.set(from.crossCovariance);
  to.bypassUnsigned = from.bypassUnsigned;
  to.rated = from.rated;
  to.shutSigma = from.shutSigma;
}

/** Takes the word from one reading: index in the order PS PR SS SR TB FP FS FB. */
export function setAside(reading: SlotReading, index: number): void {
  if (index < TEMPERATURES) {
    const k = index * TEMPERATURES + index;
    reading.temperatureCovariance[k] = (reading.temperatureCovariance[k] as number) + ASIDE_SIGMA_F * ASIDE_SIGMA_F;
    return;
  }
  const flow = index - TEMPERATURES;
  const k = flow * FLOWS + flow;
  const doubt = ASIDE_SHARE * Math.abs(reading.flows[flow] as number);
  reading.flowCovariance[k] = (reading.flowCovariance[k] as number) + doubt * doubt;
}

/**
 * The one reading that, set aside, leaves the others in agreement, where measurements contradict each other: its index, or -1.
 * Only where every reading that could be the odd one leaves the same way behind, and the rest still checks itself; so one
 * wild reading does not hide a direction that all others tell, and a contradiction between two camps stays one.
 *
 * Source  serial elimination of the gross error (R. Serth, W. Heenan, AIChE J. 32 (1986) 733), one reading at the most.
 */
export function oddReading(reading: SlotReading, closest: WayFit, shareScale: number): number {
  if (!(closest.chiSquare <= ONE_OFF_CHI_SQUARE)) return -1;
  let [found, least, way] = [-1, Number.POSITIVE_INFINITY, 0];
  for (let index = 0; index < TEMPERATURES + FLOWS; index += 1) {
    const there =
      index < TEMPERATURES ? reading.measured[index] === 1 : !Number.isNaN(reading.flows[index - TEMPERATURES]);
    if (!there) continue;
    copyReading(reading, trial);
    setAside(trial, index);
    fitWay(trial, forward, shareScale);
    fitWay(trial, reverse, shareScale);
    const fit = excessDisagreement(forward) < excessDisagreement(reverse) ? forward : reverse;
    // Setting aside leaves one comparison less than the count says.
    if (excessDisagreement(fit) > 0 || fit.redundancy < 2) continue;
    const logOdds = reverse.logEvidence - forward.logEvidence;
    if (!(Math.abs(logOdds) > SAYS_LOG_ODDS)) return -1;
    if (way !== 0 && Math.sign(logOdds) !== way) return -1;
    way = Math.sign(logOdds);
    if (fit.chiSquare < least) [found, least] = [index, fit.chiSquare];
  }
  return found;
}
