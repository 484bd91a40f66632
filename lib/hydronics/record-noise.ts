import { FLOWS, TEMPERATURES } from './loop-record';
import type { LoopRecord } from './loop-record';

/** Most triples of neighbours that one channel's noise is judged from. */
const MAX_TRIPLES = 4000;
/** Median of |x| over the standard deviation of a normal. */
const MEDIAN_TO_SIGMA = 1.4826;
/** Fewer triples than this and nothing is said. */
const MIN_TRIPLES = 20;
/** A channel that repeats its last reading in more than this share of steps is logged by change of value. */
const HELD_SHARE = 0.5;
/** The second difference of white noise has variance 6 sigma^2. */
const SECOND_DIFFERENCE = Math.sqrt(6);

export interface RecordNoise {
  /** k = 1 of one interval: F for the temperatures, share of reading for the flows; NaN where not seen. */
  noise: Float64Array;
  /** Least step between readings, F or gpm; 0 when none is seen. */
  increment: Float64Array;
}

/** Median of the first `count` numbers; sorts them. */
export function medianOf(values: Float64Array, count: number): number {
  if (count === 0) return Number.NaN;
  const sorted = values.subarray(0, count).sort();
  const middle = count >> 1;
  return count % 2 === 1
    ? (sorted[middle] as number)
    : ((sorted[middle - 1] as number) + (sorted[middle] as number)) / 2;
}

/** Least step between readings: the smallest change, when all of a sample of changes are multiples of it or most are none. */
function incrementOf(channel: Float64Array, stride: number): number {
  let least = Number.POSITIVE_INFINITY;
  let held = 0;
  let changes = 0;
  for (let slot = 1; slot < channel.length; slot += stride) {
    const change = Math.abs((channel[slot] as number) - (channel[slot - 1] as number));
    if (change !== change) continue;
    if (change < 1e-9) held += 1;
    else {
      changes += 1;
      if (change < least) least = change;
    }
  }
  if (changes < MIN_TRIPLES) return 0;
  if (held > HELD_SHARE * (held + changes)) return least;
  // A mixing scale bends a grid by parts in a thousand.
  let onGrid = 0;
  for (let slot = 1; slot < channel.length; slot += stride) {
    const steps = Math.abs((channel[slot] as number) - (channel[slot - 1] as number)) / least;
    if (Math.abs(steps - Math.round(steps)) < 0.1) onGrid += 1;
  }
  return held > 0.02 * (held + changes) && onGrid > 0.9 * (held + changes) ? least : 0;
}

/**
 * What one reading of each channel scatters by, from second differences of neighbours while `use` is 1: ramps drop out,
 * steps and spikes are outvoted by the median. Resolution and change-of-value increments count as increment / sqrt(12).
 *
 * Shapes  `use` has the record's length. Units as RecordNoise.
 * Gaps    NaN where fewer than 20 triples of neighbours exist.
 * Source  median absolute deviation (P. Rousseeuw, C. Croux, J. Am. Stat. Assoc. 88 (1993) 1273); uniform error of a step:
 *         JCGM 100:2008, 4.3.7.
 */
export function recordNoise(loop: LoopRecord, use: Float64Array): RecordNoise {
  const noise = new Float64Array(TEMPERATURES + FLOWS).fill(Number.NaN);
  const increment = new Float64Array(TEMPERATURES + FLOWS);
  const stride = Math.max(1, Math.floor(loop.n / MAX_TRIPLES));
  const differences = new Float64Array(Math.ceil(loop.n / stride) + 1);
  [...loop.temperatures, ...loop.flows].forEach((channel, index) => {
    if (!channel) return;
    let count = 0;
    for (let slot = 1; slot + 1 < loop.n; slot += stride) {
      if (use[slot] !== 1) continue;
      const here = channel[slot] as number;
      const second = (channel[slot - 1] as number) - 2 * here + (channel[slot + 1] as number);
      const value = index < TEMPERATURES ? Math.abs(second) : Math.abs(second / here);
      if (value < Number.POSITIVE_INFINITY) {
        differences[count] = value;
        count += 1;
      }
    }
    if (count < MIN_TRIPLES) return;
    increment[index] = incrementOf(channel, stride);
    const step = index < TEMPERATURES ? increment[index] : 0;
    const seen = (MEDIAN_TO_SIGMA * medianOf(differences, count)) / SECOND_DIFFERENCE;
    noise[index] = Math.max(seen, step / Math.sqrt(12));
  });
  return { noise, increment };
}
