import type { Quantity } from '../units';
import type { DayBuffer } from './day-buffer';
import { FEWEST_DISTANCES, heldForMs, NO_RHYTHM, rhythmOf, type Rhythm } from './hold-rhythm';
import { BLANK } from './values';

/** How far a column's readings of one day reach beyond their own time. */
export type Manner =
  /** Logged at a distance: the mean of a slot's readings, and a reading stands for `holdMs` at most. */
  | { kind: 'regular'; holdMs: number }
  /** Logged on change: a value stands until the next, `ageMs` at most, and counts by the time it stood. */
  | { kind: 'held'; ageMs: number };

/** How regularly the file's rows come, as known when a day is closed. */
export interface Pace {
  isRegular: boolean;
  /** How long a row may stand for; 0 when most distances are others. */
  holdMs: number;
}

/** What one day shows of one column. */
export interface Seen {
  /** Rows in which it is not blank, and rows in which it is. */
  cells: number;
  blanks: number;
  rhythm: Rhythm;
}

/** A day without rows. */
export const NOT_SEEN: Seen = { cells: 0, blanks: 0, rhythm: NO_RHYTHM };

/** Looks at one column of a day, in any order of rows. A column that every row of a regular file fills has its rhythm. */
export function seenOf(day: DayBuffer, column: number, pace: Pace): Seen {
  const { columns, values, count } = day;
  let cells = 0;
  for (let i = 0, at = column; i < count; i++, at += columns) if (values[at] !== BLANK) cells++;
  const blanks = count - cells;
  if (blanks === 0 && pace.isRegular)
    return { cells, blanks, rhythm: { distances: Math.max(0, cells - 1), usualMs: pace.holdMs, heartbeatMs: 0 } };
  const timesMs = new Float64Array(cells);
  const read = new Float64Array(cells);
  let rising = true;
  let n = 0;
  for (let i = 0, at = column; i < count; i++, at += columns) {
    if (values[at] === BLANK) continue;
    timesMs[n] = day.timesMs[i]!;
    read[n] = values[at]!;
    if (n > 0 && timesMs[n]! <= timesMs[n - 1]!) rising = false;
    n++;
  }
  return { cells, blanks, rhythm: rising ? rhythmOf(timesMs, read) : rhythmInOrder(timesMs, read) };
}

/** Of readings in any order; of several at one instant the last counts. */
function rhythmInOrder(timesMs: Float64Array, read: Float64Array): Rhythm {
  const order = Uint32Array.from(timesMs, (_, i) => i).sort((a, b) => timesMs[a]! - timesMs[b]! || a - b);
  const kept = order.filter((at, i) => timesMs[order[i + 1] ?? -1] !== timesMs[at]);
  const pick = (from: Float64Array) => Float64Array.from(kept, (at) => from[at]!);
  return rhythmOf(pick(timesMs), pick(read));
}

/**
 * Decides how a column's readings of a day are put into slots, from that day and the day before only, so that neither
 * the order of rows nor the moment at which days are closed changes the answer.
 *
 * A column that every row of a regular file fills is regular. Otherwise its own distances decide: half of them equal is
 * regular, else it is logged on change. With too few distances to say, a column that is blank in some rows, or that has
 * rows of its own (`ownRows`) and no regular ones, is taken for logged on change.
 */
export function mannerOf(
  own: Seen,
  before: Seen | undefined,
  pace: Pace,
  column: { quantity: Quantity; ownRows: boolean },
): Manner {
  if (own.cells > 0 && own.blanks === 0 && pace.isRegular) return { kind: 'regular', holdMs: pace.holdMs };
  const evidence = [own.rhythm, before?.rhythm ?? NO_RHYTHM].find(({ distances }) => distances >= FEWEST_DISTANCES);
  if (evidence?.usualMs) return { kind: 'regular', holdMs: evidence.usualMs };
  const { blanks } = own.cells > 0 ? own : (before ?? own);
  const onChange = evidence !== undefined || blanks > 0 || (column.ownRows && !pace.isRegular);
  if (!onChange) return { kind: 'regular', holdMs: pace.holdMs };
  const heartbeatMs = own.rhythm.heartbeatMs || (before?.rhythm.heartbeatMs ?? 0);
  return { kind: 'held', ageMs: heldForMs(column.quantity, heartbeatMs) };
}
