import { largest, total } from './days';
import type { Cause, HourResult } from './types';

const HOUR_MS = 3_600_000;
/** One hour without the cause does not end an episode. */
const BRIDGED_GAP_MS = HOUR_MS;
/** An hour that is not low still counts as reverse flow when it ran backwards for this long. */
const REVERSE_MINUTES = 30;

/** A run of hours with one cause. */
export interface EpisodeResult {
  cause: Cause;
  startMs: number;
  /** End of its last hour. */
  endMs: number;
  /** Hours with the cause; a bridged hour between them is not counted. */
  hours: number;
  worstHourMs: number;
  largestReverseFlowGpm: number;
  warmestSupplyF: number;
  excessEnergyKwh: number;
  excessCost: number;
}

/** The cause that makes an hour part of an episode; `none` when it is part of none. */
function episodeCause(hour: HourResult): Cause {
  if (hour.low && hour.cause !== 'none') return hour.cause;
  return hour.reverseMinutes >= REVERSE_MINUTES ? 'reverse-flow' : 'none';
}

/** How much an hour weighs within its episode: flow run backwards for reverse flow, else flow in excess. */
function weight(cause: Cause, hour: HourResult): number {
  const flowGpm = cause === 'reverse-flow' ? hour.reverseFlowGpm * hour.reverseMinutes : hour.excessFlowGpm;
  return Number.isNaN(flowGpm) ? 0 : flowGpm;
}

function episodeOf(cause: Cause, hours: readonly HourResult[]): EpisodeResult {
  const first = hours[0] as HourResult;
  const last = hours[hours.length - 1] as HourResult;
  const worst = hours.reduce((most, hour) => (weight(cause, hour) > weight(cause, most) ? hour : most), first);
  return {
    cause,
    startMs: first.hourStartMs,
    endMs: last.hourStartMs + HOUR_MS,
    hours: hours.length,
    worstHourMs: worst.hourStartMs,
    largestReverseFlowGpm: largest(hours.map((hour) => hour.reverseFlowMaxGpm)),
    warmestSupplyF: largest(hours.map((hour) => hour.blendedSupplyMaxF)),
    excessEnergyKwh: total(hours.map((hour) => hour.excessEnergyKwh)),
    excessCost: total(hours.map((hour) => hour.excessCost)),
  };
}

/**
 * Runs of low or reverse hours with one cause; a gap of at most one hour (of another cause, or none) is bridged, so
 * episodes of two causes may overlap. Low hours with cause `none` start nothing. An hour that is not low counts as
 * reverse flow when it ran backwards for 30 minutes.
 *
 * Shapes  hours ascending by start. Episodes come out by start.
 * Gaps    figures that no hour knows are NaN.
 */
export function findEpisodes(hours: readonly HourResult[]): EpisodeResult[] {
  const open = new Map<Cause, HourResult[]>();
  const found: EpisodeResult[] = [];
  for (const hour of hours) {
    const cause = episodeCause(hour);
    if (cause === 'none') continue;
    const run = open.get(cause);
    const last = run?.at(-1);
    if (run && last && hour.hourStartMs - (last.hourStartMs + HOUR_MS) <= BRIDGED_GAP_MS) {
      run.push(hour);
    } else {
      if (run) found.push(episodeOf(cause, run));
      open.set(cause, [hour]);
    }
  }
  for (const [cause, run] of open) found.push(episodeOf(cause, run));
  return found.sort((a, b) => a.startMs - b.startMs);
}
