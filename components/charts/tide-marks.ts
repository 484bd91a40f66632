import type { Direction } from '@/lib/client/words';
import type { Tide, TideBar } from '@/lib/schemas/results';

/** How sure the direction is, in three steps of ink: 95 % and up, 85 to 95, below. */
export type Density = 1 | 2 | 3;

/** A bar of the strip, ready to draw: in epoch ms across and gpm up (forward) and down (reverse). */
export interface TideMark {
  index: number;
  startMs: number;
  endMs: number;
  /** The direction that held most minutes; null: no data in this bar. */
  direction: Direction | null;
  density: Density;
  /** Height above the still line, 0 or more. */
  forwardGpm: number;
  /** Depth below it, 0 or less. */
  reverseGpm: number;
  /** The bar holds both directions, each drawn at its share of the minutes. */
  split: boolean;
  loGpm: number | null;
  hiGpm: number | null;
}

const MINUTE_MS = 60_000;

export const densityOf = (probability: number | null): Density =>
  probability === null ? 1 : probability >= 0.95 ? 3 : probability >= 0.85 ? 2 : 1;

/** The direction that held most of the bar's minutes; null when no minute was read. A tie goes to the firmer word. */
export function directionOf(bar: Pick<TideBar, `${Direction}Minutes`>): Direction | null {
  const order = ['reverse', 'forward', 'still', 'unknown'] as const;
  let held: Direction | null = null;
  let most = 0;
  for (const direction of order) {
    const minutes = bar[`${direction}Minutes`];
    if (minutes > most) {
      held = direction;
      most = minutes;
    }
  }
  return held;
}

/**
 * Bars as marks. A bar with both directions stands above and below the line, each part the mean flow of its minutes
 * times its share of them, so that the two together are the bar's mean bypass flow and ink stays proportional to water.
 *
 * Shapes  one mark a bar, in the order of the bars.
 * Units   epoch ms, gpm.
 * Gaps    a bar without minutes has direction null; bars that are absent leave a gap between marks.
 */
export function tideMarks(tide: Tide): TideMark[] {
  const barMs = tide.barMinutes * MINUTE_MS;
  return tide.bars.map((bar, index) => {
    const next = tide.bars[index + 1];
    // Local days are 23 to 25 hours long: a bar ends where its neighbour begins, unless bars are missing between.
    const endMs = next !== undefined && next.t - bar.t <= barMs * 1.5 ? next.t : bar.t + barMs;
    const direction = directionOf(bar);
    return {
      index,
      startMs: bar.t,
      endMs,
      direction,
      density: densityOf(bar.probability),
      ...heights(bar, direction),
      loGpm: bar.bypassFlowLoGpm,
      hiGpm: bar.bypassFlowHiGpm,
    };
  });
}

function heights(bar: TideBar, direction: Direction | null): Pick<TideMark, 'forwardGpm' | 'reverseGpm' | 'split'> {
  const none = { forwardGpm: 0, reverseGpm: 0, split: false };
  if (direction !== 'forward' && direction !== 'reverse') return none;
  if (bar.forwardMinutes > 0 && bar.reverseMinutes > 0) {
    const minutes = bar.forwardMinutes + bar.reverseMinutes + bar.stillMinutes;
    const forward = Math.max(0, bar.forwardFlowGpm ?? 0) * (bar.forwardMinutes / minutes);
    // The wire says reverse flow as a magnitude in some places and signed in others; here it is always below the line.
    const reverse = -Math.abs(bar.reverseFlowGpm ?? 0) * (bar.reverseMinutes / minutes);
    return { forwardGpm: forward, reverseGpm: reverse, split: true };
  }
  const flow = bar.bypassFlowGpm ?? 0;
  return direction === 'forward'
    ? { forwardGpm: Math.max(0, flow), reverseGpm: 0, split: false }
    : { forwardGpm: 0, reverseGpm: Math.min(0, flow), split: false };
}

export interface Span {
  startMs: number;
  endMs: number;
}

/** Unbroken stretches of marks for which `keep` holds. */
export function runsOf(
  marks: readonly TideMark[],
  keep: (mark: TideMark) => boolean,
): (Span & { first: number; last: number })[] {
  const runs: (Span & { first: number; last: number })[] = [];
  for (const mark of marks) {
    if (!keep(mark)) continue;
    const open = runs.at(-1);
    if (open !== undefined && open.last === mark.index - 1 && open.endMs === mark.startMs) {
      open.endMs = mark.endMs;
      open.last = mark.index;
    } else {
      runs.push({ startMs: mark.startMs, endMs: mark.endMs, first: mark.index, last: mark.index });
    }
  }
  return runs;
}

/** Where the still line is drawn: stretches with data of any kind. */
export const dataRuns = (marks: readonly TideMark[]): Span[] => runsOf(marks, (mark) => mark.direction !== null);

/** Stretches of [fromMs, toMs) without data. */
export function dataGaps(marks: readonly TideMark[], fromMs: number, toMs: number): Span[] {
  const gaps: Span[] = [];
  let at = fromMs;
  for (const run of dataRuns(marks)) {
    if (run.startMs > at) gaps.push({ startMs: at, endMs: Math.min(run.startMs, toMs) });
    at = Math.max(at, run.endMs);
  }
  if (at < toMs) gaps.push({ startMs: at, endMs: toMs });
  return gaps.filter((gap) => gap.endMs > gap.startMs);
}

/** The marks where a reverse stretch begins, for the keys n and p. */
export const reverseStarts = (marks: readonly TideMark[]): TideMark[] =>
  runsOf(marks, (mark) => mark.direction === 'reverse')
    .map((run) => marks[run.first])
    .filter((mark) => mark !== undefined);

/** The mark that holds an instant, by halving. */
export function markAt(marks: readonly TideMark[], epochMs: number): TideMark | null {
  let low = 0;
  let high = marks.length - 1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    const mark = marks[middle];
    if (mark === undefined) return null;
    if (epochMs < mark.startMs) high = middle - 1;
    else if (epochMs >= mark.endMs) low = middle + 1;
    else return mark;
  }
  return null;
}

export interface Extent {
  loGpm: number;
  hiGpm: number;
}

/**
 * How far the strip reaches above and below the line. Bars decide; the fringe may add half as much again; a bar far
 * beyond the others (over 2.5 times the 98th percentile of all) and beyond 20 times the floor is left to be cut flat: a
 * meter's spike, not the one deep hour of a calm week. Zero is always inside, and a side with nothing on it keeps a
 * seventh of the other, so that its emptiness is seen.
 *
 * Units   gpm. `floorGpm`: the least that either side of a drawing is worth, a twentieth of design flow where it is
 *         known, so that noise near zero stays small.
 */
export function tideExtent(marks: readonly TideMark[], floorGpm = 60): Extent {
  const all = marks.flatMap((mark) => [mark.forwardGpm, -mark.reverseGpm]);
  const cap = Math.max(quantile(all, 0.98) * 2.5, floorGpm * 20);
  const side = (bars: number[], fringes: number[], unknowns: number[]): number => {
    const bar = Math.max(0, ...bars.filter((height) => height <= cap));
    const fringe = Math.min(quantile(fringes, 0.98), bar * 1.5);
    const unknown = quantile(unknowns, 0.9);
    return Math.max(bar * 1.06, fringe, Math.min(unknown, Math.max(bar, floorGpm) * 1.5));
  };
  const known = marks.filter((mark) => mark.direction === 'forward' || mark.direction === 'reverse');
  const unknown = marks.filter((mark) => mark.direction === 'unknown');
  const up = side(
    known.map((mark) => mark.forwardGpm),
    known.map((mark) => Math.max(0, mark.hiGpm ?? 0)),
    unknown.map((mark) => Math.max(0, mark.hiGpm ?? 0)),
  );
  const down = side(
    known.map((mark) => -mark.reverseGpm),
    known.map((mark) => Math.max(0, -(mark.loGpm ?? 0))),
    unknown.map((mark) => Math.max(0, -(mark.loGpm ?? 0))),
  );
  const least = Math.max(floorGpm, Math.max(up, down) / 7);
  return { loGpm: -Math.max(down, least), hiGpm: Math.max(up, least) };
}

function quantile(values: readonly number[], share: number): number {
  const sorted = values.filter((value) => value > 0).sort((left, right) => left - right);
  return sorted[Math.floor(share * (sorted.length - 1))] ?? 0;
}
