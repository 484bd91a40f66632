import { FB, FLOWS, FP, PR, PS, SR, SS, TB, TEMPERATURES } from './loop-record';
import type { LoopRecord } from './loop-record';
import type { SensorErrors, SlotErrors } from './sensor-errors';
import type { SlotReading } from './slot-reading';

/**
 * How long water takes between the sensors of one plant room, in minutes: a ramp of r F/min is worth r times this in
 * temperature doubt (common practice, no source; a 5-minute lag in a 0.2 F/min ramp is a false difference of 1 F).
 */
const TRANSPORT_LAG_MINUTES = 2;
/** Slopes are taken over this long to either side: noise of one reading is no ramp. */
const SLOPE_MINUTES = 5;
/** A supply of which nothing is measured is taken at its set-point within this; a return is as good as unknown (k = 1, F). */
const GUESSED_SUPPLY_SIGMA_F = 3;
const GUESSED_RETURN_SIGMA_F = 60;
const UNMEASURED_SIGMA_F = 60;

/** A bypass valve less open than this is shut, and then leaks this share of the main flow (k = 1; common practice). */
const SHUT_PERCENT = 2;
const SHUT_SIGMA = 0.01;

/** Values of one slot that may be means over neighbours: order PS PR SS SR TB, FP FS FB, and how many readings each holds. */
export interface SlotValues {
  values: Float64Array;
  counts: Float64Array;
  /** Reading that one leans on (its proportion to it is a mean over more neighbours); -1 for none. */
  leanOn: Int8Array;
  /** Variance of what it stands away from that one, F^2 or gpm^2. */
  leanVariance: Float64Array;
  /** Doubt of a moving temperature, F^2. */
  moving: Float64Array;
}
export const emptySlotValues = (): SlotValues => ({
  values: new Float64Array(TEMPERATURES + FLOWS).fill(Number.NaN),
  counts: new Float64Array(TEMPERATURES + FLOWS).fill(1),
  leanOn: new Int8Array(TEMPERATURES + FLOWS).fill(-1),
  leanVariance: new Float64Array(TEMPERATURES + FLOWS),
  moving: new Float64Array(TEMPERATURES),
});

/** Slots to either side over which a slope is taken. */
const slopeReach = (stepMinutes: number): number =>
  stepMinutes >= SLOPE_MINUTES ? 1 : Math.round(SLOPE_MINUTES / stepMinutes);

/** Squared doubt of a temperature that moves past sensors at different places. A missing neighbour says nothing. */
export function movingVariance(channel: Float64Array, slot: number, stepMinutes: number): number {
  const reach = slopeReach(stepMinutes);
  if (slot < reach || slot + reach >= channel.length) return 0;
  const rise = (channel[slot + reach] as number) - (channel[slot - reach] as number);
  if (rise !== rise) return 0;
  const doubtF = (TRANSPORT_LAG_MINUTES * rise) / (2 * reach * stepMinutes);
  return doubtF * doubtF;
}

/** Reads the bare values of one slot. */
export function readValues(loop: LoopRecord, slot: number, out: SlotValues): void {
  for (let i = 0; i < TEMPERATURES + FLOWS; i += 1) out.leanOn[i] = -1;
  const reach = slopeReach(loop.stepMinutes);
  const perRise = TRANSPORT_LAG_MINUTES / (2 * reach * loop.stepMinutes);
  const inside = slot >= reach && slot + reach < loop.n;
  for (let i = 0; i < TEMPERATURES; i += 1) {
    const channel = loop.temperatures[i];
    out.values[i] = channel ? (channel[slot] as number) : Number.NaN;
    out.counts[i] = 1;
    let moving = 0;
    if (channel && inside) {
      const doubtF = perRise * ((channel[slot + reach] as number) - (channel[slot - reach] as number));
      if (doubtF === doubtF) moving = doubtF * doubtF;
    }
    out.moving[i] = moving;
  }
  for (let i = 0; i < FLOWS; i += 1) {
    const channel = loop.flows[i];
    out.values[TEMPERATURES + i] = channel ? (channel[slot] as number) : Number.NaN;
    out.counts[TEMPERATURES + i] = 1;
  }
}

function readTemperatures(
  slot: SlotValues,
  errors: SlotErrors,
  all: SensorErrors,
  setpoint: number,
  rise: number,
  out: SlotReading,
): void {
  const { temperatures, measured, temperatureCovariance } = out;
  const lasting = errors.offsetOffset;
  const misfit = all.misfitF * all.misfitF;
  // A plain loop: set() on so few numbers costs more than the numbers.
  for (let k = 0; k < TEMPERATURES * TEMPERATURES; k += 1) temperatureCovariance[k] = lasting[k] as number;
  for (let i = 0; i < TEMPERATURES; i += 1) {
    const corrected = (slot.values[i] as number) - (errors.offset[i] as number);
    const there = corrected === corrected;
    temperatures[i] = corrected;
    measured[i] = there ? 1 : 0;
    if (!there) continue;
    const noise = all.noise[i] as number;
    const k = i * TEMPERATURES + i;
    const base = slot.leanOn[i] as number;
    let variance = (noise * noise) / (slot.counts[i] as number);
    if (base >= 0) {
      const baseNoise = all.noise[base] as number;
      const shared = (baseNoise * baseNoise) / (slot.counts[base] as number);
      variance = shared + (slot.leanVariance[i] as number);
      share(temperatureCovariance, i, base, shared);
      // Two that lean on one base share its noise with each other too.
      for (let j = 0; j < i; j += 1) if (slot.leanOn[j] === base) share(temperatureCovariance, i, j, shared);
    }
    temperatureCovariance[k] = (temperatureCovariance[k] as number) + variance + (slot.moving[i] as number) + misfit;
  }
  if (!measured[PS]) guess(out, PS, setpoint, all.trustSetpoint ? GUESSED_SUPPLY_SIGMA_F : UNMEASURED_SIGMA_F);
  if (!measured[SR])
    guess(out, SR, measured[PR] ? (temperatures[PR] as number) : setpoint + rise, GUESSED_RETURN_SIGMA_F);
  if (!measured[SS]) guess(out, SS, temperatures[PS] as number, UNMEASURED_SIGMA_F);
}

/** Adds noise that two readings have in common. */
function share(covariance: Float64Array, i: number, j: number, variance: number): void {
  const value = (covariance[i * TEMPERATURES + j] as number) + variance;
  covariance[i * TEMPERATURES + j] = value;
  covariance[j * TEMPERATURES + i] = value;
}

/** Puts a vague value where nothing was measured: independent of every sensor. */
function guess(out: SlotReading, i: number, value: number, sigmaF: number): void {
  out.temperatures[i] = value;
  for (let j = 0; j < TEMPERATURES; j += 1) {
    out.temperatureCovariance[i * TEMPERATURES + j] = 0;
    out.temperatureCovariance[j * TEMPERATURES + i] = 0;
  }
  out.temperatureCovariance[i * TEMPERATURES + i] = sigmaF * sigmaF;
}

function readFlows(
  slot: SlotValues,
  flowErrors: SlotErrors,
  misfit: number,
  designPrimary: number,
  designSecondary: number,
  out: SlotReading,
): void {
  const { flows, flowCovariance: w } = out;
  const { gain, zero, gainGain, gainZero, zeroZero, noise } = flowErrors;
  for (let i = 0; i < FLOWS; i += 1) {
    const design = i === FP ? designPrimary : designSecondary;
    const corrected =
      ((slot.values[TEMPERATURES + i] as number) - (zero[i] as number) * design) / (1 + (gain[i] as number));
    flows[i] = i === FB || corrected > 0 || corrected !== corrected ? corrected : 0;
  }
  // A secondary flow that leans on the primary one shares its noise.
  const ofPrimary = noise[FP] as number;
  const shared = (ofPrimary * ofPrimary) / (slot.counts[TEMPERATURES + FP] as number);
  for (let i = 0; i < FLOWS; i += 1) {
    const fi = flows[i] as number;
    if (fi !== fi) continue;
    const di = i === FP ? designPrimary : designSecondary;
    for (let j = 0; j <= i; j += 1) {
      const fj = flows[j] as number;
      if (fj !== fj) continue;
      const dj = j === FP ? designPrimary : designSecondary;
      const ij = i * FLOWS + j;
      const ji = j * FLOWS + i;
      let value =
        fi * fj * (gainGain[ij] as number) +
        fi * dj * (gainZero[ij] as number) +
        fj * di * (gainZero[ji] as number) +
        di * dj * (zeroZero[ij] as number);
      const leans = (slot.leanOn[TEMPERATURES + i] as number) >= 0;
      if (i === j) {
        const own = (noise[i] as number) * (noise[i] as number);
        value += fi * fi * (misfit * misfit + (leans ? shared : own / (slot.counts[TEMPERATURES + i] as number)));
        if (leans) value += slot.leanVariance[TEMPERATURES + i] as number;
      } else if (leans && j === FP) value += fi * fj * shared;
      w[ij] = value;
      w[ji] = value;
    }
  }
}

function readCross(flowErrors: SlotErrors, designPrimary: number, designSecondary: number, out: SlotReading): void {
  const { offsetGain, offsetZero } = flowErrors;
  const { flows, measured, crossCovariance } = out;
  for (let j = 0; j < FLOWS; j += 1) {
    const flow = flows[j] as number;
    if (flow !== flow) continue;
    const design = j === FP ? designPrimary : designSecondary;
    for (let i = 0; i < TEMPERATURES; i += 1) {
      const k = i * FLOWS + j;
      crossCovariance[k] = measured[i] ? flow * (offsetGain[k] as number) + design * (offsetZero[k] as number) : 0;
    }
  }
}

/**
 * Fills `out` with slot `index`'s corrected readings and the covariance of their errors.
 *
 * Units   mixing scale, gpm; `setpoint` and `rise` stand in, vaguely, for a supply or return that nothing measures.
 * Gaps    NaN flows stay NaN with whatever covariance; a missing PS, SS or SR gets a vague value, PR and TB stay NaN.
 */
export function fillReading(
  loop: LoopRecord,
  index: number,
  slot: SlotValues,
  errors: SlotErrors,
  all: SensorErrors,
  calibrated: boolean,
  setpoint: number,
  rise: number,
  out: SlotReading,
): void {
  readTemperatures(slot, errors, all, setpoint, rise, out);
  readFlows(slot, errors, all.misfitShare, loop.designPrimaryGpm, loop.designSecondaryGpm, out);
  // Without a calibration no offset is tied to any meter.
  if (calibrated) readCross(errors, loop.designPrimaryGpm, loop.designSecondaryGpm, out);
  out.bypassUnsigned = loop.bypassUnsigned;
  out.rated = loop.rated[index] === 1;
  const valve = loop.valve ? (loop.valve[index] as number) : Number.NaN;
  out.shutSigma = valve < SHUT_PERCENT ? SHUT_SIGMA : Number.NaN;
  // The pipe's own sensor only ever adds a comparison: its readings outside the loop's range are no temperature of it.
  if (!measuredInRange(out)) {
    out.temperatures[TB] = Number.NaN;
    out.measured[TB] = 0;
  }
}

/** A pipe that stands drifts to the room: warmer than the return by more than its doubt, it says nothing of either stream. */
function measuredInRange(reading: SlotReading): boolean {
  const pipe = reading.temperatures[TB] as number;
  const sigma = Math.sqrt(reading.temperatureCovariance[TB * TEMPERATURES + TB] as number);
  const warm = Math.max(
    reading.temperatures[SR] as number,
    reading.temperatures[PR] === reading.temperatures[PR] ? (reading.temperatures[PR] as number) : -Infinity,
  );
  return !(pipe > warm + 4 * sigma + 2);
}
