import type { Calibration } from './calibration-types';
import { medianOf } from './record-noise';
import type { Measurements } from './types';

type Header = Calibration['header'];

/** Below this probability a side is not told. */
const DECIDED = 0.9;
/** No record is worth more certainty than this about where a sensor sits (log odds). */
const MAX_LOG_ODDS = 7;
/** What one stretch may say at the most: a sensor that is off for an hour does not move it (log likelihood). */
const MAX_STRETCH = 8;
/** Difference of two sensors in one stream beyond their noise: imperfect mixing, transport (k = 1, common practice), F. */
const SAME_STREAM_SIGMA_F = 0.2;
/** No stretch is surer than this to have run forward: without the header the record may have missed it. */
const LEAST_REVERSE = 0.01;
/** A blend of this much hardly shows beside a second sensor, F. */
const HARDLY_F = 0.5;
/** Fewer stretches than this say nothing. */
const MIN_STRETCHES = 8;

/**
 * A steady stretch: its first slot and number of slots, how probably it ran backward by everything but the header,
 * the share of secondary flow that then came back, and its worth in hours.
 */
export interface HeaderStretch {
  slot: number;
  slots: number;
  reverse: number;
  share: number;
  worth: number;
}

/**
 * Where a supply header sensor of unknown place sits. Beside a supply sensor of known place it either stays at one distance
 * from it (same side of the tee), or departs from it by the blend whenever the pipe runs backward (other side); whether it
 * runs backward is taken from everything but the header.
 *
 * Units   deg F. Gaps: without a supply sensor of known place, without reverse flow that would show, or too few stretches:
 *         unknown.
 * Source  odds of the two hypotheses; the blend is as likely anywhere between supply and return.
 */
export function judgeHeader(measurements: Measurements, stretches: readonly HeaderStretch[]): Header {
  const { headerSupplyF, primarySupplyF, secondarySupplyF } = measurements;
  if (!headerSupplyF) return { side: 'absent', primaryProbability: Number.NaN };
  const beside = primarySupplyF ?? secondarySupplyF;
  if (!beside || stretches.length < MIN_STRETCHES) return { side: 'unknown', primaryProbability: 0.5 };
  const warm = measurements.secondaryReturnF ?? measurements.primaryReturnF;
  const apartAt = ({ slot, slots }: HeaderStretch): number => {
    let [sum, count] = [0, 0];
    for (let k = slot; k < slot + slots; k += 1) {
      const apartF = (headerSupplyF[k] as number) - (beside[k] as number);
      if (apartF === apartF) [sum, count] = [sum + apartF, count + 1];
    }
    return count > 0 ? sum / count : Number.NaN;
  };
  const forward = stretches.filter((each) => each.reverse < 0.5);
  const resting = (forward.length >= MIN_STRETCHES ? forward : stretches)
    .map(apartAt)
    .filter((apartF) => !Number.isNaN(apartF));
  const usualF = medianOf(Float64Array.from(resting), resting.length);
  let logOdds = 0;
  for (const stretch of stretches) {
    const { slot, reverse: told, share, worth } = stretch;
    const reverse = Math.max(LEAST_REVERSE, told - LEAST_REVERSE);
    const off = apartAt(stretch) - usualF;
    if (Number.isNaN(off)) continue;
    const spanF = Math.max(2, Math.abs((warm?.[slot] ?? Number.NaN) - (beside[slot] as number)) || 10);
    const same = Math.exp(-0.5 * (off / SAME_STREAM_SIGMA_F) ** 2) / (SAME_STREAM_SIGMA_F * Math.sqrt(2 * Math.PI));
    const floor = 1e-4 / spanF;
    const other = (1 - reverse) * same + (reverse * (Math.abs(off) < spanF ? 1 : 0)) / spanF;
    const says = Math.log((same + floor) / (other + floor));
    // Staying together says little where the blend would hardly show.
    const shows = Math.max(0, Math.min(1, (share * spanF - HARDLY_F) / HARDLY_F));
    logOdds += worth * Math.max(-MAX_STRETCH, Math.min(MAX_STRETCH, says > 0 ? says * shows : says));
  }
  const held = Math.max(-MAX_LOG_ODDS, Math.min(MAX_LOG_ODDS, logOdds));
  const sameSide = 1 / (1 + Math.exp(-held));
  const primaryProbability = primarySupplyF ? sameSide : 1 - sameSide;
  if (Math.max(sameSide, 1 - sameSide) < DECIDED) return { side: 'unknown', primaryProbability };
  return { side: primaryProbability > 0.5 ? 'primary' : 'secondary', primaryProbability };
}

/** A record as a calibration reads it: the header sensor where the record placed it, if no other sits there; else left out. */
export function placeHeader(measurements: Measurements, header: Header): Measurements {
  const { headerSupplyF, ...rest } = measurements;
  if (!headerSupplyF) return measurements;
  if (header.side === 'primary' && !rest.primarySupplyF) return { ...rest, primarySupplyF: headerSupplyF };
  if (header.side === 'secondary' && !rest.secondarySupplyF) return { ...rest, secondarySupplyF: headerSupplyF };
  return rest;
}
