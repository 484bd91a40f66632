/** One interval of a local day, as far as reverse flow is concerned. NaN where unknown. */
export interface DaySlot {
  startMs: number;
  /** Reverse flow while the plant ran; no other flow backwards is a fault. */
  reverse: boolean;
  bypassFlowGpm: number;
  bypassFlowLoGpm: number;
  bypassFlowHiGpm: number;
  blendedSupplyF: number;
  primarySupplyF: number;
  primaryFlowGpm: number;
  secondaryFlowGpm: number;
}

export interface ReverseStretch {
  startMs: number;
  endMs: number;
  /** Reverse intervals only: less than the span where a short gap was bridged. */
  reverseMinutes: number;
  /** Largest backward flow, a positive amount; NaN when no interval has one. */
  largestFlowGpm: number;
  /** Warmest supply to the buildings; NaN when no interval has one. */
  warmestSupplyF: number;
}

/** Reverse flow that stops for less than this reads as one stretch: a reader wants the afternoon, not its flickers. */
export const BRIDGE_MINUTES = 15;
/** Rows in the mail; the rest is one line with its minutes. */
export const MOST_STRETCHES = 6;

/**
 * The stretches of reverse flow of a day, in order of time.
 *
 * Shapes  slots in order of time, gaps allowed (an interval without data has no slot).
 * Units   minutes, gpm, deg F.
 * Gaps    NaN flows and temperatures count for nothing; a slot that is not reverse ends a stretch after BRIDGE_MINUTES.
 * Throws  RangeError when the step is not positive.
 */
export function reverseStretches(slots: readonly DaySlot[], stepMinutes: number): ReverseStretch[] {
  if (!(stepMinutes > 0)) throw new RangeError(`reverseStretches: the step must be positive (${stepMinutes})`);
  const stretches: ReverseStretch[] = [];
  for (const slot of slots) {
    if (!slot.reverse) continue;
    const endMs = slot.startMs + stepMinutes * 60_000;
    const before = stretches.at(-1);
    const open = before !== undefined && slot.startMs - before.endMs < BRIDGE_MINUTES * 60_000 ? before : null;
    const stretch = open ?? {
      startMs: slot.startMs,
      endMs,
      reverseMinutes: 0,
      largestFlowGpm: NaN,
      warmestSupplyF: NaN,
    };
    if (!open) stretches.push(stretch);
    stretch.endMs = endMs;
    stretch.reverseMinutes += stepMinutes;
    stretch.largestFlowGpm = larger(stretch.largestFlowGpm, -slot.bypassFlowGpm);
    stretch.warmestSupplyF = larger(stretch.warmestSupplyF, slot.blendedSupplyF);
  }
  return stretches;
}

/** True when some stretch spans a gap, so that its clock times hold more minutes than it ran backwards. */
export const isBridged = (stretches: readonly ReverseStretch[]): boolean =>
  stretches.some((each) => each.endMs - each.startMs > each.reverseMinutes * 60_000);

/**
 * The stretches worth a row, in order of time, and what is left of them in one line: those with the largest flow and the
 * warmest supply always, then the longest.
 */
export function shortlist(stretches: readonly ReverseStretch[]): {
  shown: ReverseStretch[];
  further: { count: number; minutes: number };
} {
  if (stretches.length <= MOST_STRETCHES) return { shown: [...stretches], further: { count: 0, minutes: 0 } };
  const top = (value: (each: ReverseStretch) => number) =>
    stretches.reduce((best, each) => (value(each) > value(best) || Number.isNaN(value(best)) ? each : best));
  const kept = new Set([top((each) => each.largestFlowGpm), top((each) => each.warmestSupplyF)]);
  for (const each of [...stretches].sort((left, right) => right.reverseMinutes - left.reverseMinutes)) {
    if (kept.size === MOST_STRETCHES) break;
    kept.add(each);
  }
  const rest = stretches.filter((each) => !kept.has(each));
  return {
    shown: stretches.filter((each) => kept.has(each)),
    further: { count: rest.length, minutes: rest.reduce((sum, each) => sum + each.reverseMinutes, 0) },
  };
}

/** The larger of two where NaN counts for nothing. */
function larger(left: number, right: number): number {
  if (Number.isNaN(left)) return right;
  return Number.isNaN(right) ? left : Math.max(left, right);
}
