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
/** A ring of neighbours joins while no channel's mean departs from the inner one by more than this many sigmas of both. */
const JOIN_SIGMAS = 2;
/** The same for proportions, whose rings are many. */
const PROPORTION_JOIN_SIGMAS = 1.7;
/** Proportions between temperatures are formed where supply and return are this many sigmas apart. */
const LEAST_SPAN_SIGMAS = 8;

/** Reads one slot's values, averaged with neighbours where the record shows that nothing moves. */
export type SlotAverager = (slot: number, out: SlotValues) => void;

/** Running sums of one series: values and how many there were. */
interface Sums {
  channel: Float64Array;
  value: Float64Array;
  count: Int32Array;
  /** Noise of one value: constant, a share of the value, or a variance for each slot. */
  sigma: number;
  share: number;
  variance: Float64Array | null;
}

function runningSums(channel: Float64Array, sigma: number, share: number, variance: Float64Array | null): Sums {
  const n = channel.length;
  const value = new Float64Array(n + 1);
  const count = new Int32Array(n + 1);
  for (let slot = 0; slot < n; slot += 1) {
    const reading = channel[slot] as number;
    const there = reading === reading;
    value[slot + 1] = (value[slot] as number) + (there ? reading : 0);
    count[slot + 1] = (count[slot] as number) + (there ? 1 : 0);
  }
  return { channel, value, count, sigma, share, variance };
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
      if (!ringJoins(sums, slot, joined, width, sigmas)) return joined;
    }
    joined = width;
  }
  return joined;
}

/** True when the ring from `inner` to `outer` agrees with what is inside. */
function ringJoins(sums: Sums, slot: number, inner: number, outer: number, sigmas: number): boolean {
  const { value, count } = sums;
  const insideCount = (count[slot + inner + 1] as number) - (count[slot - inner] as number);
  const insideSum = (value[slot + inner + 1] as number) - (value[slot - inner] as number);
  const ringCount = (count[slot + outer + 1] as number) - (count[slot - outer] as number) - insideCount;
  if (ringCount === 0) return true;
  const ringSum = (value[slot + outer + 1] as number) - (value[slot - outer] as number) - insideSum;
  const inside = insideSum / insideCount;
  const away = ringSum / ringCount - inside;
  const shared = sums.share * inside;
  const variance = sums.variance ? (sums.variance[slot] as number) : sums.sigma * sums.sigma + shared * shared;
  return away * away <= sigmas * sigmas * variance * (1 / insideCount + 1 / ringCount);
}

/** A temperature's place between the streams, or a flow's share of the primary flow: what moves only with the bypass. */
interface Proportion {
  /** Index into the values: which reading it gives, and the one it leans on. */
  target: number;
  base: number;
  sums: Sums;
  /** Variance of one proportion. */
  variance: Float64Array;
}

/** Place of `target` between `base` and `far`, from base to far, and secondary flow as a share of primary flow. */
function proportions(loop: LoopRecord, noise: Float64Array, flowNoise: Float64Array): Proportion[] {
  const [ps, pr, ss, sr, tb] = loop.temperatures;
  const found: Proportion[] = [];
  const keep = (target: number, base: number, series: Float64Array, variance: Float64Array) =>
    found.push({ target, base, variance, sums: runningSums(series, 0, 0, variance) });
  const place = (target: number, base: number, far: number) => {
    const own = loop.temperatures[target];
    const from = loop.temperatures[base];
    const to = loop.temperatures[far];
    if (!own || !from || !to) return;
    const both = (noise[target] as number) ** 2 + (noise[base] as number) ** 2;
    const least = LEAST_SPAN_SIGMAS * Math.hypot(noise[base] as number, noise[far] as number);
    const series = new Float64Array(loop.n);
    const variance = new Float64Array(loop.n);
    for (let slot = 0; slot < loop.n; slot += 1) {
      const span = (to[slot] as number) - (from[slot] as number);
      series[slot] = Math.abs(span) > least ? ((own[slot] as number) - (from[slot] as number)) / span : Number.NaN;
      variance[slot] = both / (span * span);
    }
    keep(target, base, series, variance);
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
    const variance = new Float64Array(loop.n);
    const both = (flowNoise[flow] as number) ** 2 + (flowNoise[FP] as number) ** 2;
    for (let slot = 0; slot < loop.n; slot += 1) {
      const ratio = (own[slot] as number) / (primary[slot] as number);
      series[slot] = Math.abs(ratio) < 100 ? ratio : Number.NaN;
      variance[slot] = both * ratio * ratio;
    }
    keep(TEMPERATURES + flow, TEMPERATURES + FP, series, variance);
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
  if (!seen) return (slot, out) => readValues(loop, slot, out);
  const { flowNoise } = errors;
  const changes = runningChanges(loop, state);
  const leaning = proportions(loop, errors.noise, flowNoise);
  const leaningSums = leaning.map((each) => each.sums);
  // What leans on another reading has its own, wider window.
  const own: { index: number; sums: Sums }[] = [];
  [...loop.temperatures, ...loop.flows].forEach((channel, index) => {
    if (!channel || leaning.some((each) => each.target === index)) return;
    const sigma = index < TEMPERATURES ? (errors.noise[index] as number) : (flowNoise[index - TEMPERATURES] as number);
    const sums = index < TEMPERATURES ? runningSums(channel, sigma, 0, null) : runningSums(channel, 0, sigma, null);
    own.push({ index, sums });
  });
  const ownSums = own.map((each) => each.sums);
  const wide = halfWidths(loop.stepMinutes, PROPORTION_REACH_MINUTES);
  return (slot, out) => {
    readValues(loop, slot, out);
    const joined = joinedWidth(ownSums, widths, changes, JOIN_SIGMAS, slot);
    if (joined > 0) {
      for (let i = 0; i < own.length; i += 1) {
        const { index, sums } = own[i] as (typeof own)[number];
        if (!((sums.channel[slot] as number) < Infinity)) continue;
        const count = (sums.count[slot + joined + 1] as number) - (sums.count[slot - joined] as number);
        out.values[index] = ((sums.value[slot + joined + 1] as number) - (sums.value[slot - joined] as number)) / count;
        out.counts[index] = count;
      }
    }
    const leant = joinedWidth(leaningSums, wide, changes, PROPORTION_JOIN_SIGMAS, slot);
    if (leant > 0) lean(leaning, slot, leant, out);
  };
}

/** Puts the readings that lean on another at their mean proportion over the wider window. */
function lean(leaning: readonly Proportion[], slot: number, width: number, out: SlotValues): void {
  const { values } = out;
  const cold = values[PS] === values[PS] ? (values[PS] as number) : (values[SS] as number);
  const warm = values[SR] === values[SR] ? (values[SR] as number) : (values[PR] as number);
  for (let index = 0; index < leaning.length; index += 1) {
    const { target, base, sums, variance } = leaning[index] as Proportion;
    if (!((sums.channel[slot] as number) < Infinity)) continue;
    const count = (sums.count[slot + width + 1] as number) - (sums.count[slot - width] as number);
    const mean = ((sums.value[slot + width + 1] as number) - (sums.value[slot - width] as number)) / count;
    const from = values[base] as number;
    const scale = target >= TEMPERATURES ? from : target === PR ? cold - from : warm - from;
    values[target] = target >= TEMPERATURES ? mean * from : from + mean * scale;
    out.leanOn[target] = base;
    out.leanVariance[target] = ((variance[slot] as number) * scale * scale) / count;
  }
}
