import type { SensorRole } from '@/lib/hydronics/calibration-types';
import type { Measurements, PlantModel } from '@/lib/hydronics/types';

/** What measures the flows: two meters; a secondary meter and running pumps; one meter; none. */
export type Sensing = 'both-meters' | 'pump-status' | 'one-meter' | 'temperatures';
export type Balance = 'varied' | 'near-balance' | 'mostly-forward' | 'mostly-reverse';
export type LoopTemperature = 'primarySupplyF' | 'primaryReturnF' | 'secondarySupplyF' | 'secondaryReturnF';

export interface Group {
  sensing: Sensing;
  balance: Balance;
}

/** A true lasting error: reading = truth + value (offset, deg F), or truth * (1 + value / 100) (gain, percent). */
export interface TrueError {
  role: SensorRole;
  kind: 'offset' | 'gain';
  value: number;
}

/** What was really so, mean over each interval, before any sensor. All of length n. */
export interface SimulatedTruth {
  /** Positive from supply to return. */
  bypassGpm: Float64Array;
  /** At the supply tee. While nothing flows out: the standing water. */
  blendedSupplyF: Float64Array;
  primarySupplyF: Float64Array;
  primaryReturnF: Float64Array;
  secondaryReturnF: Float64Array;
  primaryFlowGpm: Float64Array;
  secondaryFlowGpm: Float64Array;
  /** Heat taken in by the coils. */
  loadTons: Float64Array;
  /** 1 where both sides were pumped and units ran for the whole interval. */
  running: Float64Array;
  /** 1 where no unit came or went in the interval or the ten minutes before and no temperature moved by over 0.5 F. */
  steady: Float64Array;
  /** Share of the interval during which the common pipe ran backwards. */
  reverseShare: Float64Array;
}

export interface SimulatedPlant {
  name: string;
  group: Group;
  /** Design numbers as a person enters them; sensors by their class: the true errors are not in it. */
  plant: PlantModel;
  measurements: Measurements;
  truth: SimulatedTruth;
  errors: TrueError[];
}

/** What to simulate. Whatever is left out is drawn from the seed. */
export interface SimulationOptions {
  seed: number;
  sensing: Sensing;
  balance: Balance;
  name?: string;
  /** Default 7. */
  days?: number;
  /** Default 5. */
  stepMinutes?: number;
  /** White noise of one reading (k = 1), every temperature; default 0.05 to 0.3 F, drawn for each sensor. */
  noiseF?: number;
  /** Largest offset of a temperature (normal, sd 0.4 of it); default 1. */
  offsetF?: number;
  /** Largest gain error of a meter (normal, sd half of it); default 5. */
  gainPercent?: number;
  /** Noise of one flow reading (k = 1), percent of reading; default 0.5 to 1. */
  flowNoisePercent?: number;
  /** Largest zero error of a meter, percent of design flow; default 0.5, in one meter of three. */
  flowZeroPercent?: number;
  /** Spread of one pump's true flow about its rated flow (k = 1), percent; default 5, plus 3 common to all. */
  ratedFlowPercent?: number;
  primarySpeed?: 'constant' | 'variable';
  units?: number;
  nightOff?: boolean;
  /** Primary flow swings about balance every few minutes. */
  hunting?: boolean;
  /** The meter that a one-meter plant has. */
  meter?: 'primary' | 'secondary';
  /** A loop temperature that nobody measures. */
  lacking?: LoopTemperature | 'none';
  bypassTemp?: boolean;
  /** Units' leaving temperatures in place of the primary supply sensor. */
  unitLeaving?: boolean;
  /** Status as the share of the interval, in place of the state at its end. */
  averagedStatus?: boolean;
  /** Step of a temperature reading, deg F; 0 for none. */
  resolutionF?: number;
  missing?: boolean;
  spikes?: boolean;
  /** A meter in the common pipe; default none. */
  bypassMeter?: 'signed' | 'unsigned';
  /** Unit status in a one-meter plant; default false there. */
  unitStatus?: boolean;
  /** False: sensors that follow at once. Default: lags of half a minute to a minute and a half. */
  sensorLag?: boolean;
  /** What a reading is: the interval's mean (default), or the value at its end. */
  sampling?: 'mean' | 'end';
}
