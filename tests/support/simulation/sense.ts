import type { SensorRole } from '@/lib/hydronics/calibration-types';
import type { Measurements } from '@/lib/hydronics/types';
import type { SimulatedDesign } from './design';
import type { FineRun } from './physics';
import { randomSource } from './random';
import { addSpikes, dropStretches, readings, sampled } from './sensors';
import type { LoopTemperature, SimulationOptions, TrueError } from './types';

const ROLE_OF: Readonly<Record<LoopTemperature | 'bypassF', SensorRole>> = {
  primarySupplyF: 'primarySupplyTemp',
  primaryReturnF: 'primaryReturnTemp',
  secondarySupplyF: 'secondarySupplyTemp',
  secondaryReturnF: 'secondaryReturnTemp',
  bypassF: 'bypassTemp',
};
const LOOP_TEMPERATURES: readonly LoopTemperature[] = [
  'primarySupplyF',
  'primaryReturnF',
  'secondarySupplyF',
  'secondaryReturnF',
];
const NEVER_CUT = Number.NEGATIVE_INFINITY;

export interface Sensed {
  measurements: Measurements;
  errors: TrueError[];
}

/** Water at the middle of the common pipe: what flows in it; a slow pipe follows slowly, so it lags by its own content. */
function bypassTemperature(run: FineRun, designGpm: number): Float64Array {
  const content = Math.max(1, 0.15 * designGpm);
  const fine = new Float64Array(run.steps);
  let valueF = run.primarySupplyF[0]!;
  for (let step = 0; step < run.steps; step += 1) {
    const flow = run.bypassGpm[step]!;
    const inflowF = flow >= 0 ? run.primarySupplyF[step]! : run.secondaryReturnF[step]!;
    valueF += (1 - Math.exp((-Math.abs(flow) * run.stepMinutes) / content)) * (inflowF - valueF);
    fine[step] = valueF;
  }
  return fine;
}

/** Lasting error of the rated flows that stand in for a meter: percent too high, over the intervals with a pump on. */
function ratedFlowError(run: FineRun, design: SimulatedDesign): number {
  let rated = 0;
  let real = 0;
  for (let step = 0; step < run.steps; step += 1) {
    for (let unit = 0; unit < design.units.length; unit += 1) {
      if (run.unitOn[unit]![step] === 0) continue;
      rated += design.units[unit]!.ratedGpm;
      real += run.unitGpm[unit]![step]!;
    }
  }
  return 100 * (rated / real - 1);
}

/** Puts a plant's sensors on what ran, and keeps the lasting errors put into them. */
export function sensePlant(run: FineRun, design: SimulatedDesign, options: SimulationOptions, perSlot: number): Sensed {
  const random = randomSource(options.seed, 'sensors');
  const slotMinutes = perSlot * run.stepMinutes;
  const errors: TrueError[] = [];
  const limitF = options.offsetF ?? 1;
  const limitGain = (options.gainPercent ?? 5) / 100;
  const resolution = options.resolutionF ?? random.pick([0, 0, 0.1]);
  const missing = options.missing ?? random.chance(0.35);
  const spikes = options.spikes ?? random.chance(0.15);
  const lagged = options.sensorLag ?? true;
  const sampling = options.sampling ?? 'mean';

  function temperature(name: string, fine: Float64Array, role?: SensorRole): Float64Array {
    const own = randomSource(options.seed, `sensor ${name}`);
    const offset = own.within(0.4 * limitF, limitF);
    const faults = {
      offset,
      gain: 0,
      noise: options.noiseF ?? own.between(0.05, 0.3),
      noiseShare: 0,
      resolution,
      lagMinutes: lagged ? own.between(0.5, 1.5) : 0,
      sampling,
      cutOff: NEVER_CUT,
    };
    const read = readings(fine, perSlot, run.stepMinutes, faults, own);
    if (role) errors.push({ role, kind: 'offset', value: offset });
    if (spikes) addSpikes(read, own);
    if (missing && own.chance(0.5)) dropStretches(read, slotMinutes, 2, own);
    return read;
  }

  function meter(name: string, fine: Float64Array, designGpm: number, role: SensorRole): Float64Array {
    const own = randomSource(options.seed, `meter ${name}`);
    const gain = own.within(limitGain / 2, limitGain);
    const zero = (options.flowZeroPercent ?? 0.5) / 100;
    const faults = {
      offset: own.chance(1 / 3) ? own.between(-zero, zero) * designGpm : 0,
      gain,
      noise: 0.001 * designGpm,
      noiseShare: (options.flowNoisePercent ?? own.between(0.5, 1)) / 100,
      resolution: own.chance(0.3) ? 1 : 0,
      lagMinutes: 0,
      sampling,
      cutOff: role === 'bypassFlow' ? NEVER_CUT : 0.01 * designGpm,
    };
    const read = readings(fine, perSlot, run.stepMinutes, faults, own);
    errors.push({ role, kind: 'gain', value: 100 * gain });
    if (missing && own.chance(0.3)) dropStretches(read, slotMinutes, 1, own);
    return read;
  }

  const measurements: Measurements = {
    n: Math.floor(run.steps / perSlot),
    stepMinutes: slotMinutes,
    unitStatus: [],
    unitFlowGpm: [],
    unitLeavingF: [],
    unitEnteringF: [],
    unitPowerKw: [],
    primaryPumpStatus: [],
  };

  const leaving = options.unitLeaving ?? (options.sensing === 'temperatures' && random.chance(0.2));
  const drawnLack = random.chance(0.3) ? random.pick(['primaryReturnF', 'secondaryReturnF'] as const) : 'none';
  const lacking = options.lacking ?? (options.sensing === 'both-meters' ? drawnLack : 'none');
  for (const name of LOOP_TEMPERATURES) {
    if (name === lacking || (leaving && name === 'primarySupplyF')) continue;
    measurements[name] = temperature(name, run[name], ROLE_OF[name]);
  }
  if (leaving) {
    measurements.unitLeavingF = run.unitLeavingF.map((fine, unit) => temperature(`leaving ${unit}`, fine));
  }
  if (options.bypassTemp ?? random.chance(0.3)) {
    measurements.bypassF = temperature('bypass', bypassTemperature(run, design.secondaryDesignGpm), 'bypassTemp');
  }

  const designPrimaryGpm = design.units.reduce((sum, unit) => sum + unit.ratedGpm, 0);
  const { sensing } = options;
  const oneMeter = sensing === 'one-meter' ? (options.meter ?? (random.chance(0.3) ? 'primary' : 'secondary')) : null;
  if (sensing === 'both-meters' || oneMeter === 'primary') {
    measurements.primaryFlowGpm = meter('primary', run.primaryGpm, designPrimaryGpm, 'primaryFlow');
  }
  if (sensing === 'both-meters' || sensing === 'pump-status' || oneMeter === 'secondary') {
    measurements.secondaryFlowGpm = meter('secondary', run.secondaryGpm, design.secondaryDesignGpm, 'secondaryFlow');
  }

  const bypassMeter = options.bypassMeter && meter('bypass', run.bypassGpm, design.secondaryDesignGpm, 'bypassFlow');
  if (options.bypassMeter === 'signed') measurements.bypassFlowGpm = bypassMeter;
  if (options.bypassMeter === 'unsigned') measurements.bypassFlowUnsignedGpm = bypassMeter?.map(Math.abs);

  const averaged = options.averagedStatus ?? random.chance(0.4);
  const status = () => run.unitOn.map((fine) => sampled(fine, perSlot, averaged ? 'mean' : 'end'));
  const pumpStatus = sensing === 'pump-status';
  if (pumpStatus) measurements.primaryPumpStatus = status();
  const shown = { 'both-meters': 0.7, 'pump-status': 0.6, 'one-meter': 0, temperatures: 1 }[sensing];
  if (options.unitStatus ?? random.chance(shown)) measurements.unitStatus = status();
  // A variable pump's rated flow says little about what it moves.
  const unmetered =
    !measurements.primaryFlowGpm && measurements.unitStatus.length + measurements.primaryPumpStatus.length > 0;
  if (unmetered && design.primarySpeed === 'constant') {
    errors.push({ role: 'ratedFlow', kind: 'gain', value: ratedFlowError(run, design) });
  }
  return { measurements, errors };
}
