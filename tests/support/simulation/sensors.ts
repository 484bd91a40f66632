import type { RandomSource } from './random';

/** How one point reads what is there. */
export interface SensorFaults {
  /** Reading = truth * (1 + gain) + offset, then noise, steps, gaps and spikes. */
  offset: number;
  gain: number;
  /** Noise of one reading (k = 1): a constant part and a share of reading. */
  noise: number;
  noiseShare: number;
  /** Step between readings; 0 for none. */
  resolution: number;
  /** First-order lag of the sensor. */
  lagMinutes: number;
  sampling: 'mean' | 'end';
  /** Readings below this are shown as 0; -Infinity for temperatures. */
  cutOff: number;
}

/** Mean over each interval of a fine channel, or its value at the end, after the sensor's lag. */
export function sampled(fine: Float64Array, perSlot: number, sampling: 'mean' | 'end', keep = 0): Float64Array {
  const n = Math.floor(fine.length / perSlot);
  const samples = new Float64Array(n);
  let followed = fine[0] ?? Number.NaN;
  for (let slot = 0; slot < n; slot += 1) {
    let sum = 0;
    for (let step = slot * perSlot; step < (slot + 1) * perSlot; step += 1) {
      followed = keep * followed + (1 - keep) * fine[step]!;
      sum += followed;
    }
    samples[slot] = sampling === 'mean' ? sum / perSlot : followed;
  }
  return samples;
}

/** Mean over each interval of a fine channel. */
export const intervalMeans = (fine: Float64Array, perSlot: number): Float64Array => sampled(fine, perSlot, 'mean');

/** What a sensor writes down, one reading an interval. */
export function readings(
  fine: Float64Array,
  perSlot: number,
  stepMinutes: number,
  faults: SensorFaults,
  random: RandomSource,
): Float64Array {
  const keep = faults.lagMinutes > 0 ? Math.exp(-stepMinutes / faults.lagMinutes) : 0;
  const read = sampled(fine, perSlot, faults.sampling, keep);
  for (let slot = 0; slot < read.length; slot += 1) {
    const truth = read[slot]!;
    const scatter = faults.noise * random.normal() + faults.noiseShare * truth * random.normal();
    let value = truth * (1 + faults.gain) + faults.offset + scatter;
    if (value < faults.cutOff) value = 0;
    if (faults.resolution > 0) value = Math.round(value / faults.resolution) * faults.resolution;
    read[slot] = value;
  }
  return read;
}

/** Stretches of one to six hours without readings. */
export function dropStretches(
  channel: Float64Array,
  slotMinutes: number,
  stretches: number,
  random: RandomSource,
): void {
  for (let stretch = 0; stretch < stretches; stretch += 1) {
    const from = Math.floor(random.uniform() * channel.length);
    channel.fill(Number.NaN, from, from + Math.round(random.between(60, 360) / slotMinutes));
  }
}

/** One reading in 300 is off by 5 to 30 degrees. */
export function addSpikes(channel: Float64Array, random: RandomSource): void {
  for (let slot = 0; slot < channel.length; slot += 1) {
    if (random.chance(1 / 300)) channel[slot]! += random.between(5, 30) * (random.chance(0.5) ? 1 : -1);
  }
}
