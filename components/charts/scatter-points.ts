import type { Direction } from '@/lib/client/words';
import type { Tide } from '@/lib/schemas/results';
import { directionOf } from './tide-marks';

/** One hour in the plane of load and flow. */
export interface ScatterPoint {
  /** Centre of the hour, epoch ms: where the page's cursor stands for it. */
  atMs: number;
  startMs: number;
  loadTons: number;
  flowGpm: number;
  direction: Direction;
}

/** The bars that have both load and distribution flow, by rising load. */
export function scatterPoints(tide: Tide): ScatterPoint[] {
  const half = tide.barMinutes * 30_000;
  return tide.bars
    .flatMap((bar) => {
      const direction = directionOf(bar);
      if (direction === null || bar.loadTons === null || bar.secondaryFlowGpm === null) return [];
      return [{ atMs: bar.t + half, startMs: bar.t, loadTons: bar.loadTons, flowGpm: bar.secondaryFlowGpm, direction }];
    })
    .sort((left, right) => left.loadTons - right.loadTons);
}

export interface PlaneLimits {
  load: [number, number];
  flow: [number, number];
}

/** Limits that hold every point and the highest line, with a margin; round enough to look chosen. */
export function planeLimits(points: readonly ScatterPoint[], unitFlowsGpm: readonly number[]): PlaneLimits {
  const loads = points.map((point) => point.loadTons);
  const flows = points.map((point) => point.flowGpm);
  if (points.length === 0) return { load: [0, 1000], flow: [0, Math.max(2000, ...unitFlowsGpm) * 1.1] };
  const within = unitFlowsGpm.filter((flow) => flow < Math.max(...flows) * 1.15);
  const span = (values: number[]): [number, number] => {
    const lo = Math.min(...values);
    const hi = Math.max(...values);
    const margin = (hi - lo || hi || 1) * 0.08;
    return [Math.max(0, lo - margin), hi + margin];
  };
  return { load: span(loads), flow: span([...flows, ...within]) };
}

/** The point nearest to a place in px, no farther than `reachPx`; null when none is so near. */
export function nearestPoint(
  points: readonly ScatterPoint[],
  place: (point: ScatterPoint) => readonly [number, number],
  at: readonly [number, number],
  reachPx = 14,
): ScatterPoint | null {
  let best: ScatterPoint | null = null;
  let least = reachPx;
  for (const point of points) {
    const [x, y] = place(point);
    const distance = Math.hypot(x - at[0], y - at[1]);
    if (distance <= least) {
      best = point;
      least = distance;
    }
  }
  return best;
}
