import { MINUTE_MS } from './timestamps';
import type { TimestampPlan } from './types';

/**
 * Added to the instant of every row: end stamps belong to the interval before, and a source's clock may be known to be off.
 *
 * It is added to the instant, after the wall time was turned to UTC: the end of an interval across a clock change is one
 * step from its start in time, not on the wall.
 * Units   ms; `stepMs` is the usual distance between rows, 0 when there is none (then end stamps are not moved).
 */
export function shiftOf(plan: TimestampPlan, stepMs: number): number {
  return (plan.stamps === 'end' ? -stepMs : 0) + (plan.shiftMinutes ?? 0) * MINUTE_MS;
}

const END_WORDS = [
  /\b(interval|period|hour|slot|block|step|time|date) ?end(s|ed|ing)?\b/i,
  /\bend(ing)?( of)?( the)? ?(interval|period|hour|slot|block|step|time|date|stamp|timestamp|datetime)\b/i,
  /\b(interval|period|time) to\b/i,
  /\b(intervallende|periodenende|zeit bis|endzeit)\b/i,
  // "HE" is the trade's short word for the hour ending; "he" is a word.
  /\bHE\b/,
];
const START_WORDS = /\b(begin|begins|beginning|start|starts|starting|HB|von)\b/i;

/** A heading as words: `IntervalEnd`, `interval_end` and `Interval-End` alike. */
const wordsOf = (name: string): string => name.replace(/(\p{Ll})(\p{Lu})/gu, '$1 $2').replace(/[\s_.\-/()[\]]+/g, ' ');

/** What the rows of a time column show of how they are stamped. */
export interface StampSigns {
  /** Midnight is written as hour 24 somewhere. */
  hour24: boolean;
  /** Midnight is written as 00:00 somewhere. */
  hour0: boolean;
}

/**
 * Why the times are the ends of their intervals, as the beginning of a sentence, or null when nothing says so: the
 * heading's words, or days that end with hour 24 and never begin with 00:00.
 */
export function whyEndStamps(names: readonly string[], signs: StampSigns): string | null {
  const ending = names.find((name) => END_WORDS.some((words) => words.test(wordsOf(name))));
  if (ending !== undefined) return `The heading "${ending}" names the end of an interval`;
  if (names.some((name) => START_WORDS.test(wordsOf(name)))) return null;
  return signs.hour24 && !signs.hour0 ? 'Days end with hour 24 and none begins with 00:00' : null;
}
