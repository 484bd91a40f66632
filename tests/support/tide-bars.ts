import type { Direction } from '@/lib/client/words';
import type { HourRow, Tide, TideBar } from '@/lib/schemas/results';

const HOUR_MS = 3_600_000;

/** A bar in which nothing was read. */
export const emptyBar = (t: number): TideBar => ({
  t,
  forwardMinutes: 0,
  reverseMinutes: 0,
  stillMinutes: 0,
  unknownMinutes: 0,
  probability: null,
  bypassFlowGpm: null,
  bypassFlowLoGpm: null,
  bypassFlowHiGpm: null,
  forwardFlowGpm: null,
  reverseFlowGpm: null,
  blendedSupplyF: null,
  blendedSupplyMaxF: null,
  primarySupplyF: null,
  primaryReturnF: null,
  secondaryReturnF: null,
  primaryFlowGpm: null,
  secondaryFlowGpm: null,
  loadTons: null,
});

/** An hour that flowed one way throughout, 50 gpm either side of its mean. */
export function steadyBar(t: number, direction: Direction, flowGpm: number): TideBar {
  return {
    ...emptyBar(t),
    [`${direction}Minutes`]: 60,
    probability: direction === 'unknown' ? null : 0.97,
    bypassFlowGpm: direction === 'unknown' ? null : flowGpm,
    bypassFlowLoGpm: flowGpm - 50,
    bypassFlowHiGpm: flowGpm + 50,
    forwardFlowGpm: direction === 'forward' ? flowGpm : null,
    reverseFlowGpm: direction === 'reverse' ? flowGpm : null,
    blendedSupplyF: 44 + Math.max(0, -flowGpm) / 200,
    blendedSupplyMaxF: 44.2 + Math.max(0, -flowGpm) / 200,
    primarySupplyF: 44,
    primaryReturnF: 54,
    secondaryReturnF: 56,
    primaryFlowGpm: 1720,
    secondaryFlowGpm: 1720 - flowGpm,
    loadTons: 700,
  };
}

/** Hourly bars from `fromMs` on: a flow is forward or reverse by its sign, 0 is still, null holds nothing, 'unknown' is. */
export function hourlyTide(fromMs: number, flowsGpm: readonly (number | null | 'unknown')[]): Tide {
  const bars = flowsGpm.map((flow, index) => {
    const t = fromMs + index * HOUR_MS;
    if (flow === null) return emptyBar(t);
    if (flow === 'unknown') return steadyBar(t, 'unknown', 0);
    return steadyBar(t, flow > 0 ? 'forward' : flow < 0 ? 'reverse' : 'still', flow);
  });
  return {
    from: new Date(fromMs).toISOString(),
    to: new Date(fromMs + flowsGpm.length * HOUR_MS).toISOString(),
    barMinutes: 60,
    stepMinutes: 5,
    bars,
  };
}

export const hourRow = (hourStart: string, given: Partial<HourRow> = {}): HourRow => ({
  hourStart,
  low: 1,
  loadTons: 700,
  deltaTF: 9,
  expectedDeltaTF: 13,
  productionDeltaTF: 9,
  reverseMinutes: 0,
  reverseFlowGpm: null,
  blendedSupplyF: 44,
  blendedSupplyMaxF: 44,
  excessFlowGpm: 550,
  avoidableFlowGpm: 300,
  cause: 'surplus-production',
  causeConfidence: 0.8,
  excessEnergyKwh: 40,
  excessCost: 5.6,
  strandedTons: 0,
  unknownMinutes: 0,
  quality: 1,
  ...given,
});
