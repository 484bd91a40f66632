import type { SensorRole } from '@/lib/hydronics/calibration-types';
import { fromMixing, mixingScale, toMixing } from '@/lib/hydronics/mixing-scale';
import type { Measurements } from '@/lib/hydronics/types';
import { randomSource } from '../../support/simulation/random';
import { recordOf, WATER } from './plants';

/** The loop's own points with the role of each sensor. */
export const CHANNEL_ROLES = {
  primarySupplyF: 'primarySupplyTemp',
  primaryReturnF: 'primaryReturnTemp',
  secondarySupplyF: 'secondarySupplyTemp',
  secondaryReturnF: 'secondaryReturnTemp',
  primaryFlowGpm: 'primaryFlow',
  secondaryFlowGpm: 'secondaryFlow',
  bypassFlowGpm: 'bypassFlow',
} as const satisfies Partial<Record<keyof Measurements, SensorRole>>;
export type LoopChannel = keyof typeof CHANNEL_ROLES;
export const LOOP_TEMPERATURES = ['primarySupplyF', 'primaryReturnF', 'secondarySupplyF', 'secondaryReturnF'] as const;
export const BOTH_METERS = [...LOOP_TEMPERATURES, 'primaryFlowGpm', 'secondaryFlowGpm'] as const;

export interface ExactLoopOptions {
  seed?: number;
  days?: number;
  stepMinutes?: number;
  /** Points that exist; default: four temperatures and both meters. */
  channels?: readonly LoopChannel[];
  /** Lasting errors: deg F too high, or share of reading too high. */
  errors?: Partial<Record<LoopChannel, number>>;
  /** Noise of one reading, deg F and share of reading. */
  noiseF?: number;
  noiseShare?: number;
  /** Share of the larger main that crosses over, negative backward; default: wandering between -0.4 and 0.4. */
  share?: (slot: number) => number;
  /** The larger main flow; default: wandering between 900 and 1700 gpm. */
  mainGpm?: (slot: number) => number;
}

export interface ExactLoop {
  record: Measurements;
  /** By channel, without any error. */
  truth: Record<LoopChannel, number[]>;
}

/** A quantity that swings smoothly between two values, over a day and over a few hours. */
export function swing(low: number, high: number, perDay: number, phase = 0): (slot: number) => number {
  const middle = (low + high) / 2;
  const reach = (high - low) / 2;
  return (slot) => {
    const day = (2 * Math.PI * slot) / perDay;
    return middle + reach * (0.65 * Math.sin(day + phase) + 0.35 * Math.sin(4.3 * day + 2 * phase));
  };
}

/** A loop of two ideal tees on the kernel's own scale of temperature, read by sensors with planted lasting errors and noise. */
export function exactLoop(options: ExactLoopOptions = {}): ExactLoop {
  const { seed = 1, days = 4, stepMinutes = 15, channels = BOTH_METERS, errors = {} } = options;
  const { noiseF = 0.03, noiseShare = 0.002 } = options;
  const perDay = 1440 / stepMinutes;
  const n = Math.round(days * perDay);
  const scale = mixingScale(50, WATER);
  const random = randomSource(seed, 'exact loop');
  const phase = () => random.between(0, 6.28);
  const share = options.share ?? swing(-0.4, 0.4, perDay, phase());
  const mainGpm = options.mainGpm ?? swing(900, 1700, perDay, phase());
  const supply = swing(43, 45, perDay, phase());
  const span = swing(10, 14, perDay, phase());
  const truth = Object.fromEntries(
    Object.keys(CHANNEL_ROLES).map((name) => [name, []]),
  ) as unknown as ExactLoop['truth'];
  for (let slot = 0; slot < n; slot += 1) {
    const [crossing, main, cold] = [share(slot), mainGpm(slot), supply(slot)];
    const warm = cold + span(slot);
    const [u, v] = [toMixing(cold, scale), toMixing(warm, scale)];
    const [ahead, back] = [Math.max(0, crossing), Math.max(0, -crossing)];
    truth.primarySupplyF.push(cold);
    truth.secondaryReturnF.push(warm);
    truth.secondarySupplyF.push(fromMixing(u + back * (v - u), scale));
    truth.primaryReturnF.push(fromMixing(v - ahead * (v - u), scale));
    truth.primaryFlowGpm.push((1 - back) * main);
    truth.secondaryFlowGpm.push((1 - ahead) * main);
    truth.bypassFlowGpm.push(crossing * main);
  }
  const read = channels.map((name) => {
    const own = randomSource(seed, name);
    const error = errors[name] ?? 0;
    const values = truth[name].map((value) =>
      name.endsWith('Gpm')
        ? value * (1 + error) * (1 + noiseShare * own.normal())
        : value + error + noiseF * own.normal(),
    );
    return [name, values] as const;
  });
  return { record: recordOf(n, stepMinutes, Object.fromEntries(read)), truth };
}
