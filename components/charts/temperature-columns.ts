import type { Tide } from '@/lib/schemas/results';

/** The four temperatures about the tees, one value a bar at the bar's centre; missing as null. */
export interface TemperatureColumns {
  centresMs: number[];
  distributionSupplyF: (number | null)[];
  productionSupplyF: (number | null)[];
  distributionReturnF: (number | null)[];
  productionReturnF: (number | null)[];
}

/**
 * Columns for the temperatures' chart. Where bars are absent a row of nulls stands in, so that no line crosses a gap.
 *
 * Shapes  all columns of one length.
 * Units   epoch ms, deg F.
 */
export function temperatureColumns(tide: Tide): TemperatureColumns {
  const barMs = tide.barMinutes * 60_000;
  const columns: TemperatureColumns = {
    centresMs: [],
    distributionSupplyF: [],
    productionSupplyF: [],
    distributionReturnF: [],
    productionReturnF: [],
  };
  let expectedMs: number | null = null;
  for (const bar of tide.bars) {
    if (expectedMs !== null && bar.t - expectedMs > barMs * 0.5) push(columns, expectedMs + barMs / 2, null);
    push(columns, bar.t + barMs / 2, bar);
    expectedMs = bar.t + barMs;
  }
  return columns;
}

function push(columns: TemperatureColumns, centreMs: number, bar: Tide['bars'][number] | null): void {
  columns.centresMs.push(centreMs);
  columns.distributionSupplyF.push(bar?.blendedSupplyF ?? null);
  columns.productionSupplyF.push(bar?.primarySupplyF ?? null);
  columns.distributionReturnF.push(bar?.secondaryReturnF ?? null);
  columns.productionReturnF.push(bar?.primaryReturnF ?? null);
}

/** Lowest and highest of the four with a margin of a twentieth; a default window where nothing was read. */
export function temperatureLimits(columns: TemperatureColumns): [number, number] {
  let lo = Number.POSITIVE_INFINITY;
  let hi = Number.NEGATIVE_INFINITY;
  for (const values of fourOf(columns)) {
    for (const value of values) {
      if (value === null) continue;
      lo = Math.min(lo, value);
      hi = Math.max(hi, value);
    }
  }
  if (!(hi >= lo)) return [42, 60];
  const margin = Math.max(1, (hi - lo) * 0.1);
  return [lo - margin, hi + margin];
}

export const fourOf = (columns: TemperatureColumns): (number | null)[][] => [
  columns.distributionSupplyF,
  columns.productionSupplyF,
  columns.distributionReturnF,
  columns.productionReturnF,
];

export interface Between {
  x: number;
  upper: number;
  lower: number;
}

/** Stretches where the upper line lies above the lower and both are known; each begins and ends where they meet. */
export function stretchesAbove(
  centresMs: readonly number[],
  upper: readonly (number | null)[],
  lower: readonly (number | null)[],
): Between[][] {
  const stretches: Between[][] = [];
  let open: Between[] | null = null;
  let before: Between | null = null;
  centresMs.forEach((x, index) => {
    const top = upper[index] ?? null;
    const bottom = lower[index] ?? null;
    const now = top === null || bottom === null ? null : { x, upper: top, lower: bottom };
    const above = now !== null && now.upper > now.lower;
    const crossing = before !== null && now !== null ? meeting(before, now) : null;
    if (above && open === null) {
      open = crossing === null ? [] : [crossing];
      stretches.push(open);
    }
    if (above) open?.push(now);
    else if (open !== null) {
      if (crossing !== null) open.push(crossing);
      open = null;
    }
    before = now;
  });
  return stretches.filter((stretch) => stretch.length > 1);
}

/** Where two lines meet between neighbours of unlike sign; null when they do not. */
function meeting(from: Between, to: Between): Between | null {
  const start = from.upper - from.lower;
  const end = to.upper - to.lower;
  if (start > 0 === end > 0 || start === end) return null;
  const share = start / (start - end);
  const at = (a: number, b: number) => a + share * (b - a);
  const value = at(from.upper, to.upper);
  return { x: at(from.x, to.x), upper: value, lower: value };
}
