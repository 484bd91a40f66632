import { DAY_SLOTS, GRID_MINUTES, stepsOf, type Steps, type Timed } from './clock-steps';

/** How far the clock of one source is ahead of another's, and how well that is borne out. */
export interface ClockOffset {
  /** By how much the first source stamps the same event later than the second; 0 when the clocks agree. */
  offsetMinutes: number;
  /** Share of steps that match at that offset, from 0 to 1. */
  correlation: number;
  /** The same with the clocks as they are. */
  atZero: number;
}

/** Clocks are off by a multiple of this: zones, changes of the clock and time servers know no other. */
export const OFFSET_STEP_MINUTES = 15;
const MOST_OFFSET_MINUTES = 1440;
/** Fewest steps on each side, and fewest that match. */
const FEWEST_STEPS = 8;
const FEWEST_MATCHES = 8;
/** A peak is believed from here on, when nothing else comes near it. */
const LEAST_CORRELATION = 0.55;
const SECOND_PEAK_SHARE = 0.7;
/** Offsets that lie this near to the peak belong to it. */
const PEAK_WIDTH_MINUTES = 30;

/**
 * Finds by how much two records of things that change together are apart in time, by matching their steps:
 *   score(L) = |sum over steps of a of the sign of a's step times that of b's step L earlier| / sqrt(steps a * steps b)
 * Steps that come at the same time of day on many days are left out first, because two schedules an hour apart look the
 * same as two clocks an hour apart. Of a record without other steps (a daily curve) nothing is said.
 *
 * Units   offsetMinutes is positive when the stamps of `a` are later than those of `b` for the same event.
 * Gaps    NaN values, and gaps over an hour, hold no steps.
 * Returns null when the evidence does not single out one offset. An offset of 0 is evidence that the clocks agree.
 * Throws  RangeError when times and values differ in length.
 * Source  cross-correlation of event trains, common practice; thresholds by trial on made-up pairs (see the tests).
 */
export function findClockOffset(a: Timed, b: Timed): ClockOffset | null {
  return offsetOfSteps(stepsOf(a), stepsOf(b));
}

/** The offset of two trains of steps; see findClockOffset. */
export function offsetOfSteps(a: Steps, b: Steps): ClockOffset | null {
  const [first, second] = overlapping(a, b);
  if (first.slots.length < FEWEST_STEPS || second.slots.length < FEWEST_STEPS) return null;
  const most = MOST_OFFSET_MINUTES / GRID_MINUTES;
  const scores = scoresByLag(first, second, most);
  const step = OFFSET_STEP_MINUTES / GRID_MINUTES;
  const all = Math.sqrt(first.slots.length * second.slots.length);
  const scoreAt = (lag: number) => {
    // Steps may stand one slot apart: times are rounded, and water takes its time.
    let sum = 0;
    for (let near = -1; near <= 1; near++) sum += scores[lag + near + most + 1] ?? 0;
    return Math.min(1, Math.abs(sum) / all);
  };
  let best = 0;
  for (let lag = -most; lag <= most; lag += step) {
    if (scoreAt(lag) > scoreAt(best) || (scoreAt(lag) === scoreAt(best) && Math.abs(lag) < Math.abs(best))) best = lag;
  }
  const correlation = scoreAt(best);
  if (correlation < LEAST_CORRELATION || correlation * all < FEWEST_MATCHES) return null;
  const width = PEAK_WIDTH_MINUTES / GRID_MINUTES;
  for (let lag = -most; lag <= most; lag += step) {
    if (Math.abs(lag - best) >= width && scoreAt(lag) > correlation * SECOND_PEAK_SHARE) return null;
  }
  return { offsetMinutes: best * GRID_MINUTES, correlation, atZero: scoreAt(0) };
}

/** The steps of each that lie within a day of the other's record. */
function overlapping(a: Steps, b: Steps): [Steps, Steps] {
  const within = ({ slots, signs }: Steps, other: Steps): Steps => {
    const [from, to] = [(other.slots[0] ?? 0) - DAY_SLOTS, (other.slots.at(-1) ?? -1) + DAY_SLOTS];
    const kept = Array.from(slots, (_, i) => i).filter((i) => slots[i]! >= from && slots[i]! <= to);
    return { slots: Int32Array.from(kept, (i) => slots[i]!), signs: Int8Array.from(kept, (i) => signs[i]!) };
  };
  return [within(a, b), within(b, a)];
}

/** Signed counts of pairs of steps by their distance in slots, from -most - 1 to most + 1. */
function scoresByLag(a: Steps, b: Steps, most: number): Float64Array {
  const scores = new Float64Array(2 * most + 3);
  let start = 0;
  for (let i = 0; i < a.slots.length; i++) {
    while (start < b.slots.length && a.slots[i]! - b.slots[start]! > most + 1) start++;
    for (let k = start; k < b.slots.length; k++) {
      const lag = a.slots[i]! - b.slots[k]!;
      if (lag < -most - 1) break;
      scores[lag + most + 1] = scores[lag + most + 1]! + a.signs[i]! * b.signs[k]!;
    }
  }
  return scores;
}
