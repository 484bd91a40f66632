import { FP, FS, PR, PS, SR, SS, TB, TEMPERATURES } from './loop-record';
import type { LoopRecord } from './loop-record';
import { readValues } from './read-slot';
import type { SlotValues } from './read-slot';
import type { SensorErrors } from './sensor-errors';

/** Farthest neighbour that may be averaged in: readings, and proportions between them. */
const REACH_MINUTES = 20;
const PROPORTION_REACH_MINUTES = 45;
/** Up to here neighbours join one by one. */
const FINE_MINUTES = 20;
/** Slots this close share one window. */
const GROUP_MINUTES = 4;
/** A ring of neighbours joins while no channel's mean departs from the inner one by more than this many sigmas of both. */
const JOIN_SIGMAS = 2;
/** The same for proportions, whose rings are many. */
const PROPORTION_JOIN_SIGMAS = 1.7;
/** And for the first ring about one slot of a finer record, which only tells whether anything happens just there. */
const FIRST_JOIN_SIGMAS = 3;
/** Proportions between temperatures are formed where supply and return are this many sigmas apart. */
const LEAST_SPAN_SIGMAS = 8;

/**
 * Reads one slot's values, averaged with neighbours where the record shows that nothing moves. Returns the slot whose values
 * they are: its own, or that of the few minutes it shares them with. `held` is the slot whose values `out` holds already: they
 * are left as they are.
 */
export type SlotAverager = (slot: number, out: SlotValues, held?: number) => number;

/** Running sums of one series: values, and how many there were (null: one a slot). */
interface Sums {
  channel: Float64Array;
  value: Float64Array;
  count: Int32Array | null;
  /** Variance of one value: constant, a share of its square, or `spread` over the square of the span to another channel. */
  constant: number;
  share: number;
  spread: number;
  from: Float64Array | null;
  to: Float64Array | null;
}

function runningSums(channel: Float64Array, noise: Partial<Omit<Sums, 'channel' | 'value' | 'count'>>): Sums {
  const n = channel.length;
  const value = new Float64Array(n + 1);
  let [sum, gaps] = [0, 0];
  for (let slot = 0; slot < n; slot += 1) {
    const reading = channel[slot] as number;
    if (reading === reading) sum += reading;
    else gaps += 1;
    value[slot + 1] = sum;
  }
  let count: Int32Array | null = null;
  if (gaps > 0) {
    count = new Int32Array(n + 1);
    for (let slot = 0; slot < n; slot += 1) {
      count[slot + 1] = (count[slot] as number) + (channel[slot] === channel[slot] ? 1 : 0);
    }
  }
  return { channel, value, count, constant: 0, share: 0, spread: 0, from: null, to: null, ...noise };
}

/** Readings from a slot (counted in) to another (counted out). */
function countOf(sums: Sums, start: number, end: number): number {
  return sums.count ? (sums.count[end] as number) - (sums.count[start] as number) : end - start;
}

/** Variance of one value at a slot. */
function varianceAt(sums: Sums, slot: number): number {
  if (sums.from && sums.to) {
    const span = (sums.to[slot] as number) - (sums.from[slot] as number);
    return sums.spread / (span * span);
  }
  const value = sums.channel[slot] as number;
  return sums.constant + sums.share * value * value;
}

/** Running count of slots at which the plant's state or its source of primary flow changes. */
function runningChanges(loop: LoopRecord, state: Float64Array): Int32Array {
  const changes = new Int32Array(loop.n + 1);
  for (let slot = 0; slot < loop.n; slot += 1) {
    const changed = slot > 0 && (state[slot] !== state[slot - 1] || loop.set[slot] !== loop.set[slot - 1]);
    changes[slot + 1] = (changes[slot] as number) + (changed ? 1 : 0);
  }
  return changes;
}

/** Half-widths tried one after another: single neighbours first, then rings about as wide as what they join. */
function halfWidths(stepMinutes: number, reachMinutes: number): number[] {
  const reach = Math.floor(reachMinutes / stepMinutes);
  const single = FINE_MINUTES / stepMinutes;
  const widths: number[] = [];
  let width = Math.max(1, Math.round(single / 4));
  while (width <= reach) {
    widths.push(width);
    width = width < single && stepMinutes >= 2 ? width + 1 : 2 * width;
  }
  return widths;
}

/** Widest half-width about a slot whose rings all join, over the series that have a value there; 0 for none. */
function joinedWidth(
  series: readonly Sums[],
  widths: readonly number[],
  changes: Int32Array,
  sigmas: number,
  single: number,
  slot: number,
): number {
  const n = changes.length - 1;
  let joined = 0;
  for (let index = 0; index < widths.length; index += 1) {
    const width = widths[index] as number;
    if (slot < width || slot + width >= n) break;
    if (changes[slot + width + 1] !== changes[slot - width + 1]) break;
    for (let i = 0; i < series.length; i += 1) {
      const sums = series[i] as Sums;
      if (!((sums.channel[slot] as number) < Infinity)) continue;
      const most = joined === 0 && single > 1 ? FIRST_JOIN_SIGMAS : sigmas;
      if (!ringJoins(sums, slot, joined, width, most * most * varianceAt(sums, slot))) return joined;
    }
    joined = width;
  }
  return joined;
}

/** True when the ring from `inner` to `outer` agrees with what is inside, each value of the given variance. */
function ringJoins(sums: Sums, slot: number, inner: number, outer: number, variance: number): boolean {
  const { value } = sums;
  const insideCount = countOf(sums, slot - inner, slot + inner + 1);
  const insideSum = (value[slot + inner + 1] as number) - (value[slot - inner] as number);
  const ringCount = countOf(sums, slot - outer, slot + outer + 1) - insideCount;
  if (ringCount === 0) return true;
  const ringSum = (value[slot + outer + 1] as number) - (value[slot - outer] as number) - insideSum;
  const away = ringSum / ringCount - insideSum / insideCount;
  return away * away <= variance * (1 / insideCount + 1 / ringCount);
}

/** A temperature's place between the streams, or a flow's share of the primary flow: what moves only with the bypass. */
interface Proportion {
  /** Index into the values: which reading it gives, and the one it leans on. */
  target: number;
  base: number;
  sums: Sums;
  /** Noise variance of target and base together: F^2, or share of reading squared. */
  both: number;
}

/** Place of `target` between `base` and `far`, from base to far, and secondary flow as a share of primary flow. */
function proportions(loop: LoopRecord, noise: Float64Array, flowNoise: Float64Array): Proportion[] {
  const [ps, pr, ss, sr, tb] = loop.temperatures;
  const found: Proportion[] = [];
  const place = (target: number, base: number, far: number) => {
    const own = loop.temperatures[target];
    const from = loop.temperatures[base];
    const to = loop.temperatures[far];
    if (!own || !from || !to) return;
    const both = (noise[target] as number) ** 2 + (noise[base] as number) ** 2;
    const least = LEAST_SPAN_SIGMAS * Math.hypot(noise[base] as number, noise[far] as number);
    const series = new Float64Array(loop.n);
    for (let slot = 0; slot < loop.n; slot += 1) {
      const span = (to[slot] as number) - (from[slot] as number);
      series[slot] = Math.abs(span) > least ? ((own[slot] as number) - (from[slot] as number)) / span : Number.NaN;
    }
    found.push({ target, base, both, sums: runningSums(series, { spread: both, from, to }) });
  };
  const warm = sr ? SR : PR;
  const cold = ps ? PS : SS;
  if (ps && ss && (sr || pr)) place(SS, PS, warm);
  if (pr && sr && (ps || ss)) place(PR, SR, cold);
  if (tb && (ps || ss) && (sr || pr)) place(TB, cold, warm);
  const primary = loop.flows[FP];
  const share = (flow: number) => {
    const own = loop.flows[flow];
    if (!own || !primary) return;
    const series = new Float64Array(loop.n);
    const both = (flowNoise[flow] as number) ** 2 + (flowNoise[FP] as number) ** 2;
    for (let slot = 0; slot < loop.n; slot += 1) {
      const ratio = (own[slot] as number) / (primary[slot] as number);
      series[slot] = Math.abs(ratio) < 100 ? ratio : Number.NaN;
    }
    found.push({
      target: TEMPERATURES + flow,
      base: TEMPERATURES + FP,
      both,
      sums: runningSums(series, { share: both }),
    });
  };
  share(FS);
  return found;
}

/**
 * Averages each slot with its neighbours as far as the record shows that nothing moves. Rings of neighbours join as long as
 * no series differs from what is inside by more than its noise explains; they are the same to both sides, so that a steady
 * ramp is not shifted, and the same for all series, or flows of one moment would be weighed against temperatures of another.
 *
 * Two windows: the readings themselves, which move with load and set-point, and, wider, what moves only with the bypass: the
 * place of each mixed temperature between supply and return, and secondary flow as a share of primary flow. A reading
 * that is given by its mean proportion leans on its base and shares the base's noise (read-slot.ts).
 *
 * Shapes  `state` has the record's length. Gaps: a missing reading stays missing; neighbours' gaps are left out of the mean.
 *         Without noise seen in the record nothing is averaged.
 * Source  the largest window whose means agree (A. Goldenshluger, A. Nemirovski, Math. Methods Stat. 6 (1997) 135).
 */
export function slotAverager(loop: LoopRecord, errors: SensorErrors, state: Float64Array): SlotAverager {
  const widths = halfWidths(loop.stepMinutes, REACH_MINUTES);
  const seen = errors.noise.some((sigma) => sigma > 0);
  if (!seen) {
    return (slot, out) => {
      readValues(loop, slot, out);
      return slot;
    };
  }
  const { flowNoise } = errors;
  const changes = runningChanges(loop, state);
  const leaning = proportions(loop, errors.noise, flowNoise);
  const leaningSums = leaning.map((each) => each.sums);
  // What leans on another reading has its own, wider window.
  const own: { index: number; sums: Sums }[] = [];
  [...loop.temperatures, ...loop.flows].forEach((channel, index) => {
    if (!channel || leaning.some((each) => each.target === index)) return;
    const sigma = index < TEMPERATURES ? (errors.noise[index] as number) : (flowNoise[index - TEMPERATURES] as number);
    const variance = sigma * sigma;
    const sums = runningSums(channel, index < TEMPERATURES ? { constant: variance } : { share: variance });
    own.push({ index, sums });
  });
  const ownSums = own.map((each) => each.sums);
  const wide = halfWidths(loop.stepMinutes, PROPORTION_REACH_MINUTES);
  // Neighbours a few minutes apart have nearly the same window: it is sought once for all slots of such a group.
  const group = Math.max(1, Math.round(GROUP_MINUTES / loop.stepMinutes));
  const sought = { slot: -1, joined: 0, leant: 0 };
  const seek = (slot: number): void => {
    const middle = Math.min(loop.n - 1, slot - (slot % group) + (group >> 1));
    if (middle === sought.slot) return;
    sought.slot = middle;
    sought.joined = joinedWidth(ownSums, widths, changes, JOIN_SIGMAS, group, middle);
    sought.leant = joinedWidth(leaningSums, wide, changes, PROPORTION_JOIN_SIGMAS, group, middle);
  };
  const channels = [...loop.temperatures, ...loop.flows].filter((channel) => channel !== null);
  const average = (slot: number, out: SlotValues): void => {
    readValues(loop, slot, out);
    const joined = within(sought.joined, changes, slot);
    if (joined > 0) {
      for (let i = 0; i < own.length; i += 1) {
        const { index, sums } = own[i] as (typeof own)[number];
        if (!((sums.channel[slot] as number) < Infinity)) continue;
        const count = countOf(sums, slot - joined, slot + joined + 1);
        out.values[index] = ((sums.value[slot + joined + 1] as number) - (sums.value[slot - joined] as number)) / count;
        out.counts[index] = count;
      }
    }
    const leant = within(sought.leant, changes, slot);
    if (leant > 0) lean(leaning, slot, leant, out);
  };
  return (slot, out, held) => {
    seek(slot);
    const { slot: middle, joined, leant } = sought;
    // Wide windows of neighbours are nearly the same mean: the group is read once, where the same sensors speak.
    const shares =
      group > 1 &&
      Math.min(joined, leaningSums.length > 0 ? leant : joined) >= group &&
      changes[slot + 1] === changes[middle + 1] &&
      within(joined, changes, middle) > 0 &&
      sameGaps(channels, slot, middle);
    const from = shares ? middle : slot;
    if (from !== held) average(from, out);
    return from;
  };
}

/** True when the same channels have a reading at both slots. */
function sameGaps(channels: readonly Float64Array[], slot: number, other: number): boolean {
  for (let i = 0; i < channels.length; i += 1) {
    const channel = channels[i] as Float64Array;
    const [here, there] = [channel[slot] as number, channel[other] as number];
    if ((here === here) !== (there === there)) return false;
  }
  return true;
}

/** A window about its own slot: none where it would reach over the record's end or a change of the running set. */
function within(width: number, changes: Int32Array, slot: number): number {
  if (width === 0 || slot < width || slot + width >= changes.length - 1) return 0;
  return changes[slot + width + 1] === changes[slot - width + 1] ? width : 0;
}

/** Puts the readings that lean on another at their mean proportion over the wider window. */
function lean(leaning: readonly Proportion[], slot: number, width: number, out: SlotValues): void {
  const { values } = out;
  const cold = values[PS] === values[PS] ? (values[PS] as number) : (values[SS] as number);
  const warm = values[SR] === values[SR] ? (values[SR] as number) : (values[PR] as number);
  for (let index = 0; index < leaning.length; index += 1) {
    const { target, base, sums, both } = leaning[index] as Proportion;
    if (!((sums.channel[slot] as number) < Infinity)) continue;
    const count = countOf(sums, slot - width, slot + width + 1);
    const mean = ((sums.value[slot + width + 1] as number) - (sums.value[slot - width] as number)) / count;
    const from = values[base] as number;
    const flow = target >= TEMPERATURES;
    const value = flow ? mean * from : from + mean * (target === PR ? cold - from : warm - from);
    values[target] = value;
    out.leanOn[target] = base;
    out.leanVariance[target] = (flow ? both * value * value : both) / count;
  }
}
