import type { Quantity } from '../units';
import { roundedDistance } from './step';
import { DAY_MS, HOUR_MS, MINUTE_MS } from './timestamps';

/**
 * How long the last value of a column that is logged on change stands at most. Common practice, no source.
 * No age may be over a day: a day is filled from its own rows and those of the day before.
 */
export const LONGEST_HELD_MS: Readonly<Record<Quantity, number>> = {
  status: DAY_MS,
  temperature: 12 * HOUR_MS,
  flow: 12 * HOUR_MS,
  power: 12 * HOUR_MS,
  percent: 12 * HOUR_MS,
  pressure: 12 * HOUR_MS,
};

/** A column has a distance of its own from this many distances on. */
export const FEWEST_DISTANCES = 3;
/** A heartbeat is looked for in at least this many distances. */
const FEWEST_FOR_HEARTBEAT = 8;
/** A logger that is alive writes at least this often. */
const SLOWEST_HEARTBEAT_MS = 60 * MINUTE_MS;
/** Of all distances, at least this share is the heartbeat's own, and at most that share (outages) is longer. */
const HEARTBEAT_SHARE = 0.1;
const OUTAGE_SHARE = 0.02;
/** Distances up to this much longer than the heartbeat belong to it. */
const HEARTBEAT_SLACK = 1.05;
/** Missed heartbeats after which a value is not believed any more. */
const HEARTBEATS_HELD = 2.5;
/** Loggers under a minute that are merely unsteady: nearly all distances within this many medians. */
const FEWEST_FOR_UNSTEADY = 100;
const UNSTEADY_MEDIANS = 4;

/** What the distances between one column's readings show. */
export interface Rhythm {
  distances: number;
  /** The distance that at least half of them have; 0 when there is none. */
  usualMs: number;
  /** The longest distance the logger lets pass when nothing changes; 0 when it has none. */
  heartbeatMs: number;
}

export const NO_RHYTHM: Rhythm = { distances: 0, usualMs: 0, heartbeatMs: 0 };

/** The rhythm of times that rise. */
export function rhythmOf(timesMs: Float64Array): Rhythm {
  const count = timesMs.length;
  const counts = new Map<number, number>();
  let usual = 0;
  let most = 0;
  for (let i = 1; i < count; i++) {
    const distance = roundedDistance(timesMs[i]! - timesMs[i - 1]!);
    const seen = (counts.get(distance) ?? 0) + 1;
    counts.set(distance, seen);
    if (seen > most) {
      most = seen;
      usual = distance;
    }
  }
  const distances = Math.max(0, count - 1);
  const isRegular = most >= 2 && most * 2 >= distances;
  const heartbeatMs = distances < FEWEST_FOR_HEARTBEAT ? 0 : heartbeatOf(counts, distances);
  return { distances, usualMs: isRegular ? usual : 0, heartbeatMs };
}

function heartbeatOf(counts: ReadonlyMap<number, number>, distances: number): number {
  const longestFirst = [...counts].sort(([a], [b]) => b - a);
  const outages = Math.max(1, distances * OUTAGE_SHARE);
  let longer = 0;
  for (const [distance, count] of longestFirst) {
    if (distance <= SLOWEST_HEARTBEAT_MS) {
      let own = 0;
      for (const [other, times] of counts) if (other <= distance && other * HEARTBEAT_SLACK >= distance) own += times;
      if (own >= Math.max(FEWEST_DISTANCES, distances * HEARTBEAT_SHARE)) return distance;
    }
    longer += count;
    if (longer > outages) break;
  }
  return distances < FEWEST_FOR_UNSTEADY ? 0 : unsteadyPace(longestFirst, distances);
}

/** 10 s give or take: nearly the longest distance of a logger that has no steady one. */
function unsteadyPace(longestFirst: readonly (readonly [number, number])[], distances: number): number {
  const at = (share: number): number => {
    let seen = 0;
    for (const [distance, count] of longestFirst) {
      seen += count;
      if (seen > distances * share) return distance;
    }
    return 0;
  };
  const nearlyLongest = at(0.01);
  return nearlyLongest <= MINUTE_MS && nearlyLongest <= at(0.5) * UNSTEADY_MEDIANS ? nearlyLongest : 0;
}

/** How long a value of a column stands: the table's age, or less where the column shows a heartbeat. */
export function heldForMs(quantity: Quantity, heartbeatMs: number): number {
  const longest = LONGEST_HELD_MS[quantity];
  return heartbeatMs > 0 ? Math.min(longest, heartbeatMs * HEARTBEATS_HELD) : longest;
}
