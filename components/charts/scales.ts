import { formatNumber, toPrinted, type UnitSystem } from '@/lib/client/format';

/** Round steps of an axis: 1, 2, 4, 5 and their tenfolds. */
const STEPS = [1, 2, 4, 5, 10];

/**
 * Round numbers within [lo, hi], at most `most` of them; zero is one where it lies inside.
 *
 * Gaps    an empty or unbounded range has no ticks.
 */
export function niceTicks(lo: number, hi: number, most = 5): number[] {
  if (!(hi > lo) || !Number.isFinite(hi - lo)) return [];
  const count = (step: number) => Math.floor(hi / step + 1e-9) - Math.ceil(lo / step - 1e-9) + 1;
  const magnitude = 10 ** Math.floor(Math.log10((hi - lo) / most));
  const step = STEPS.map((part) => part * magnitude).find((size) => count(size) <= most) ?? magnitude * 20;
  const first = Math.ceil(lo / step - 1e-9);
  return Array.from({ length: Math.max(0, count(step)) }, (_, index) => {
    // Multiples of a whole number of steps, not a running sum: 0.1 + 0.2 must print 0.3.
    const tick = (first + index) * step;
    return Object.is(tick, -0) ? 0 : Number(tick.toPrecision(12));
  });
}

/** Moves labels apart to `gap` px while keeping their order and, as far as that allows, their places. */
export function nudgeApart(positions: readonly number[], gap: number): number[] {
  const order = positions.map((position, index) => ({ position, index })).sort((a, b) => a.position - b.position);
  for (let pass = 0; pass < order.length; pass += 1) {
    for (let index = 1; index < order.length; index += 1) {
      const above = order[index - 1];
      const below = order[index];
      if (above === undefined || below === undefined) continue;
      const lack = gap - (below.position - above.position);
      if (lack > 1e-6) {
        above.position -= lack / 2;
        below.position += lack / 2;
      }
    }
  }
  const placed = [...positions];
  for (const { position, index } of order) placed[index] = position;
  return placed;
}

/** A flow on an axis, signed, with no more decimals than the round number has. */
export function tickLabel(flowGpm: number, units: UnitSystem): string {
  const printed = Number(toPrinted(flowGpm, 'flow', units).toPrecision(10));
  return formatNumber(printed, { decimals: Number.isInteger(printed) ? 0 : 1, sign: 'always' });
}
