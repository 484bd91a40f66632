import { SENSOR_ROLES, type SensorFinding, type SensorRole } from '../hydronics/calibration-types';
import { chiSquareQuantile } from '../hydronics/distributions';
import type { ResultChannel } from '../hydronics/types';
import { DIRECTIONS, REASONS, STATES, type Arrangement, type Direction, type Reason } from '../hydronics/types';
import type { HourRow } from '../schemas/results';
import { RunningMean } from './figures';

/** A mean with the ends of its central 90 % interval; NaN where not known. */
export interface Banded {
  mean: number;
  lo: number;
  hi: number;
}

/** What the sensors said over the hour, means over the intervals that are told of; NaN where nothing was trended. */
export interface MeasuredHour {
  primarySupplyF: number;
  primaryReturnF: number;
  secondarySupplyF: number;
  secondaryReturnF: number;
  bypassF: number;
  primaryFlowGpm: number;
  secondaryFlowGpm: number;
  /** Signed where the meter knows the direction, else as the meter gives it. */
  bypassFlowGpm: number;
  bypassMeterSigned: boolean;
}

/** What was worked out over the same intervals. */
export interface WorkedOutHour {
  direction: Direction;
  minutes: Readonly<Record<Direction, number>>;
  /** Why the direction is not known, most frequent first; only of intervals where it is not. */
  reasons: readonly { reason: Reason; minutes: number }[];
  reverseProbability: number;
  bypassFlowGpm: Banded;
  blendedSupplyF: Banded;
  primaryFlowGpm: number;
  secondaryFlowGpm: number;
  primarySupplyF: number;
  primaryReturnF: number;
  secondaryReturnF: number;
  steadyIntervals: number;
  intervals: number;
  fit: HourFit;
}

/** Whether the measurements of an hour can be reconciled. */
export interface HourFit {
  /** Intervals with more measurements than unknowns. */
  told: number;
  /** Those whose chi-square lies beyond its 95 % limit. */
  beyond: number;
  /** The sensor most at odds in most of the latter; null: none stands out. */
  atOdds: SensorRole | null;
}

/** All that the evidence of an hour is told from. Units as named, whatever units it is told in. */
export interface HourFacts {
  row: HourRow;
  measured: MeasuredHour;
  workedOut: WorkedOutHour;
  unitsRunning: number | null;
  /** Sensors whose lasting error the hour's calibration took out: zero lies outside its interval. */
  corrected: readonly Pick<SensorFinding, 'role' | 'kind' | 'value'>[];
  plant: {
    arrangement: Arrangement;
    unitCount: number;
    loadTons: number;
    blendedSupplyF: number | null;
    currency: string | null;
    /** Standard uncertainties of the sensors (k = 1). */
    sigma: {
      primarySupplyF: number;
      primaryReturnF: number;
      secondarySupplyF: number;
      secondaryReturnF: number;
      bypassF: number;
      primaryFlowPercent: number;
      secondaryFlowPercent: number;
    };
  };
}

/** Half the width of a central 90 % interval in standard deviations of a normal distribution. */
export const NINETY_PERCENT = 1.6449;

/** 90 % half width of a difference of two independent readings. */
export const differenceReach = (sigma1: number, sigma2: number): number => NINETY_PERCENT * Math.hypot(sigma1, sigma2);

/** One interval in twenty lies beyond by chance. */
const CHI_SQUARE_LEVEL = 0.95;

type Channel = (name: ResultChannel, slot: number) => number;

/**
 * The intervals of an hour that are told of: those in which the plant ran, or all when it never did.
 *
 * Shapes  slots count from the start of the hour.
 */
export function slotsToldOf(slotCount: number, value: Channel): number[] {
  const slots = Array.from({ length: slotCount }, (_, slot) => slot);
  const running = slots.filter((slot) => STATES[value('state', slot)] === 'running');
  return running.length > 0 ? running : slots.filter((slot) => !Number.isNaN(value('direction', slot)));
}

export const meanOver = (slots: readonly number[], value: (slot: number) => number): number => {
  const mean = new RunningMean();
  for (const slot of slots) mean.add(value(slot));
  return mean.value;
};

/** Sums up the estimates of an hour over the intervals told of. */
export function workOutHour(slots: readonly number[], stepMinutes: number, value: Channel): WorkedOutHour {
  const minutes: Record<Direction, number> = { forward: 0, reverse: 0, still: 0, unknown: 0 };
  const reasons = new Map<Reason, number>();
  for (const slot of slots) {
    const direction = DIRECTIONS[value('direction', slot)] ?? 'unknown';
    minutes[direction] += stepMinutes;
    const reason = REASONS[value('reason', slot)] ?? '';
    if (direction === 'unknown' && reason !== '') reasons.set(reason, (reasons.get(reason) ?? 0) + stepMinutes);
  }
  const mean = (name: ResultChannel) => meanOver(slots, (slot) => value(name, slot));
  const banded = (name: ResultChannel, lo: ResultChannel, hi: ResultChannel): Banded => ({
    mean: mean(name),
    lo: mean(lo),
    hi: mean(hi),
  });
  return {
    direction: mostMinutes(minutes),
    minutes,
    reasons: [...reasons]
      .map(([reason, count]) => ({ reason, minutes: count }))
      .sort((left, right) => right.minutes - left.minutes),
    reverseProbability: mean('reverse_probability'),
    bypassFlowGpm: banded('bypass_flow_gpm', 'bypass_flow_lo_gpm', 'bypass_flow_hi_gpm'),
    blendedSupplyF: banded('blended_supply_f', 'blended_supply_lo_f', 'blended_supply_hi_f'),
    primaryFlowGpm: mean('primary_flow_gpm'),
    secondaryFlowGpm: mean('secondary_flow_gpm'),
    primarySupplyF: mean('primary_supply_f'),
    primaryReturnF: mean('primary_return_f'),
    secondaryReturnF: mean('secondary_return_f'),
    steadyIntervals: slots.filter((slot) => value('steady', slot) === 1).length,
    intervals: slots.length,
    fit: fitOver(slots, value),
  };
}

/** How often the measurements disagree by more than chance, and which sensor then stands out. */
function fitOver(slots: readonly number[], value: Channel): HourFit {
  const told = slots.filter((slot) => value('redundancy', slot) >= 1 && !Number.isNaN(value('chi_square', slot)));
  const beyond = told.filter(
    (slot) => value('chi_square', slot) > chiSquareQuantile(CHI_SQUARE_LEVEL, Math.round(value('redundancy', slot))),
  );
  const counts = new Map<SensorRole, number>();
  for (const slot of beyond) {
    const role = SENSOR_ROLES[value('at_odds', slot)];
    if (role) counts.set(role, (counts.get(role) ?? 0) + 1);
  }
  const [most] = [...counts].sort((left, right) => right[1] - left[1]);
  return { told: told.length, beyond: beyond.length, atOdds: most?.[0] ?? null };
}

/** The direction of most minutes; on a tie the more cautious word, and `unknown` of no minutes at all. */
function mostMinutes(minutes: Readonly<Record<Direction, number>>): Direction {
  const order: readonly Direction[] = ['unknown', 'reverse', 'forward', 'still'];
  return order.reduce((most, each) => (minutes[each] > minutes[most] ? each : most));
}
