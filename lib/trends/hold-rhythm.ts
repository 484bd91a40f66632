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
/** A heartbeat wrote the same value again at least this often. */
const FEWEST_REPEATS = 2;
/** A log on a timer: this share of its distances is equal, or this share of its readings repeats the one before. */
const TIMER_SHARE = 0.9;
const REPEATED_SHARE = 0.05;
/** Of all distances, at least this share is the heartbeat's own, and at most that share (outages) is longer. */
const HEARTBEAT_SHARE = 0.1;
const OUTAGE_SHARE = 0.02;
/** A timer's distances are at most this much longer than its usual one, but for outages. */
const LATE_SHARE = 1.5;
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

/**
 * The rhythm of one column's readings; `timesMs` rise. A log on a timer writes at nearly every tick, or writes the same value
 * twice in a row; one on change that looks every five minutes never does the second, however often its distances are equal.
 */
export function rhythmOf(timesMs: Float64Array, values: Float64Array): Rhythm {
  const count = timesMs.length;
  const counts = new Map<number, number>();
  const repeats = new Map<number, number>();
  let repeated = 0;
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
    if (values[i] !== values[i - 1]) continue;
    repeated++;
    repeats.set(distance, (repeats.get(distance) ?? 0) + 1);
  }
  const distances = Math.max(0, count - 1);
  const onTimer = most >= distances * TIMER_SHARE || repeated >= distances * REPEATED_SHARE;
  const isRegular = most >= 2 && most * 2 >= distances && onTimer;
  const heartbeatMs = distances < FEWEST_FOR_HEARTBEAT ? 0 : heartbeatOf(counts, repeats, distances);
  return { distances, usualMs: isRegular ? usual : 0, heartbeatMs };
}

function heartbeatOf(
  counts: ReadonlyMap<number, number>,
  repeats: ReadonlyMap<number, number>,
  distances: number,
): number {
  const longestFirst = [...counts].sort(([a], [b]) => b - a);
  // On a timer that is early or late by a little: hardly a distance is much longer than the usual one.
  const longest = distanceAt(longestFirst, distances * OUTAGE_SHARE);
  if (longest <= SLOWEST_HEARTBEAT_MS && longest <= distanceAt(longestFirst, distances / 2) * LATE_SHARE)
    return longest;
  const outages = Math.max(1, distances * OUTAGE_SHARE);
  let longer = 0;
  for (const [distance, count] of longestFirst) {
    if (distance <= SLOWEST_HEARTBEAT_MS) {
      let own = 0;
      let same = 0;
      for (const [other, times] of counts) {
        if (other > distance || other * HEARTBEAT_SLACK < distance) continue;
        own += times;
        same += repeats.get(other) ?? 0;
      }
      // Written although nothing changed: that is what makes it a heartbeat.
      const beats = own >= Math.max(FEWEST_DISTANCES, distances * HEARTBEAT_SHARE);
      if (beats && same >= FEWEST_REPEATS) return distance;
    }
    longer += count;
    if (longer > outages) break;
  }
  return distances < FEWEST_FOR_UNSTEADY ? 0 : unsteadyPace(longestFirst, distances);
}

/** 10 s give or take: nearly the longest distance of a logger that has no steady one. */
function unsteadyPace(longestFirst: readonly (readonly [number, number])[], distances: number): number {
  const nearlyLongest = distanceAt(longestFirst, distances * 0.01);
  const median = distanceAt(longestFirst, distances / 2);
  return nearlyLongest <= MINUTE_MS && nearlyLongest <= median * UNSTEADY_MEDIANS ? nearlyLongest : 0;
}

/** The longest distance that more than so many are not longer than. */
function distanceAt(longestFirst: readonly (readonly [number, number])[], passedOver: number): number {
  let seen = 0;
  for (const [distance, count] of longestFirst) {
    seen += count;
    if (seen > passedOver) return distance;
  }
  return 0;
}

/** How long a value of a column stands: the table's age, or less where the column shows a heartbeat. */
export function heldForMs(quantity: Quantity, heartbeatMs: number): number {
  const longest = LONGEST_HELD_MS[quantity];
  return heartbeatMs > 0 ? Math.min(longest, heartbeatMs * HEARTBEATS_HELD) : longest;
}
