import type { ResultDay } from '../db/blocks';
import { DIRECTIONS, REASONS, type ResultChannel } from '../hydronics/types';
import type { TideBar } from '../schemas/results';
import { figure, RunningMean } from './figures';

/** What a bar is made of; nothing else is read for it. */
export const TIDE_CHANNELS = [
  'direction',
  'reason',
  'reverse_probability',
  'bypass_flow_gpm',
  'bypass_flow_lo_gpm',
  'bypass_flow_hi_gpm',
  'blended_supply_f',
  'primary_supply_f',
  'primary_return_f',
  'secondary_return_f',
  'primary_flow_gpm',
  'secondary_flow_gpm',
  'load_tons',
] as const satisfies readonly ResultChannel[];

const FORWARD = DIRECTIONS.indexOf('forward');
const REVERSE = DIRECTIONS.indexOf('reverse');
const STILL = DIRECTIONS.indexOf('still');
const NO_DATA = REASONS.indexOf('no data');
type Channels = ResultDay['channels'];

const at = (channels: Channels, name: ResultChannel, slot: number): number => channels[name]?.[slot] ?? Number.NaN;

/**
 * Gathers the intervals of one bar of the tide strip: means, minutes of each direction, and the widest interval any of them had,
 * laid around the mean bypass flow. Intervals without data count for nothing, so that a bar's minutes fall short of its length.
 */
export class TideBarSums {
  private readonly minutes = { forward: 0, reverse: 0, still: 0, unknown: 0 };
  private readonly forwardProbability = new RunningMean();
  private readonly reverseProbability = new RunningMean();
  private readonly bypass = new RunningMean();
  private readonly forwardFlow = new RunningMean();
  private readonly reverseFlow = new RunningMean();
  private readonly blended = new RunningMean();
  private readonly primarySupply = new RunningMean();
  private readonly primaryReturn = new RunningMean();
  private readonly secondaryReturn = new RunningMean();
  private readonly primaryFlow = new RunningMean();
  private readonly secondaryFlow = new RunningMean();
  private readonly load = new RunningMean();
  private blendedMaxF = Number.NaN;
  private belowGpm = Number.NaN;
  private aboveGpm = Number.NaN;

  add(channels: Channels, slot: number, stepMinutes: number): void {
    const bypassGpm = at(channels, 'bypass_flow_gpm', slot);
    this.bypass.add(bypassGpm);
    this.widen(bypassGpm, at(channels, 'bypass_flow_lo_gpm', slot), at(channels, 'bypass_flow_hi_gpm', slot));
    this.addDirection(channels, slot, stepMinutes, bypassGpm);
    const blendedF = at(channels, 'blended_supply_f', slot);
    this.blended.add(blendedF);
    if (!Number.isNaN(blendedF) && !(blendedF <= this.blendedMaxF)) this.blendedMaxF = blendedF;
    this.primarySupply.add(at(channels, 'primary_supply_f', slot));
    this.primaryReturn.add(at(channels, 'primary_return_f', slot));
    this.secondaryReturn.add(at(channels, 'secondary_return_f', slot));
    this.primaryFlow.add(at(channels, 'primary_flow_gpm', slot));
    this.secondaryFlow.add(at(channels, 'secondary_flow_gpm', slot));
    this.load.add(at(channels, 'load_tons', slot));
  }

  private addDirection(channels: Channels, slot: number, stepMinutes: number, bypassGpm: number): void {
    const direction = at(channels, 'direction', slot);
    const probability = at(channels, 'reverse_probability', slot);
    if (direction === FORWARD) {
      this.minutes.forward += stepMinutes;
      this.forwardProbability.add(1 - probability);
      this.forwardFlow.add(bypassGpm);
    } else if (direction === REVERSE) {
      this.minutes.reverse += stepMinutes;
      this.reverseProbability.add(probability);
      this.reverseFlow.add(-bypassGpm);
    } else if (direction === STILL) this.minutes.still += stepMinutes;
    else if (!Number.isNaN(direction) && at(channels, 'reason', slot) !== NO_DATA) this.minutes.unknown += stepMinutes;
  }

  private widen(bypassGpm: number, loGpm: number, hiGpm: number): void {
    const width = hiGpm - loGpm;
    if (Number.isNaN(width) || width <= this.belowGpm + this.aboveGpm) return;
    this.belowGpm = bypassGpm - loGpm;
    this.aboveGpm = hiGpm - bypassGpm;
  }

  bar(startMs: number): TideBar {
    const { forward, reverse, still, unknown } = this.minutes;
    const mean = this.bypass.value;
    const most = Math.max(forward, reverse, still, unknown);
    // Of a still or unknown bar no probability of a direction is told.
    const probability =
      most === 0
        ? Number.NaN
        : reverse === most
          ? this.reverseProbability.value
          : forward === most
            ? this.forwardProbability.value
            : Number.NaN;
    return {
      t: startMs,
      forwardMinutes: forward,
      reverseMinutes: reverse,
      stillMinutes: still,
      unknownMinutes: unknown,
      probability: figure(probability),
      bypassFlowGpm: figure(mean),
      bypassFlowLoGpm: figure(mean - this.belowGpm),
      bypassFlowHiGpm: figure(mean + this.aboveGpm),
      forwardFlowGpm: figure(this.forwardFlow.value),
      reverseFlowGpm: figure(this.reverseFlow.value),
      blendedSupplyF: figure(this.blended.value),
      blendedSupplyMaxF: figure(this.blendedMaxF),
      primarySupplyF: figure(this.primarySupply.value),
      primaryReturnF: figure(this.primaryReturn.value),
      secondaryReturnF: figure(this.secondaryReturn.value),
      primaryFlowGpm: figure(this.primaryFlow.value),
      secondaryFlowGpm: figure(this.secondaryFlow.value),
      loadTons: figure(this.load.value),
    };
  }
}
