export interface Bands {
  lo: Float32Array;
  mean: Float32Array;
  hi: Float32Array;
}

/**
 * Least, mean and greatest value of each UTC hour of a day block, NaN where the hour holds nothing.
 *
 * Shapes  values: 1440 / stepMinutes; result: three arrays of 24.
 * Units   those of the values.
 * Throws  RangeError when the length does not make a day at that step.
 */
export function hourlyBands(values: Float32Array, stepMinutes: number): Bands {
  if (values.length * stepMinutes !== 1440) {
    throw new RangeError(`hourlyBands: ${values.length} values at ${stepMinutes} min do not make a day`);
  }
  const bands: Bands = {
    lo: new Float32Array(24).fill(NaN),
    mean: new Float32Array(24).fill(NaN),
    hi: new Float32Array(24).fill(NaN),
  };
  for (let hour = 0; hour < 24; hour++) {
    const first = Math.ceil((hour * 60) / stepMinutes);
    const end = Math.ceil(((hour + 1) * 60) / stepMinutes);
    let sum = 0;
    let count = 0;
    let lo = Infinity;
    let hi = -Infinity;
    for (let slot = first; slot < end; slot++) {
      const value = values[slot] ?? NaN;
      if (Number.isNaN(value)) continue;
      sum += value;
      count++;
      if (value < lo) lo = value;
      if (value > hi) hi = value;
    }
    if (count === 0) continue;
    bands.lo[hour] = lo;
    bands.mean[hour] = sum / count;
    bands.hi[hour] = hi;
  }
  return bands;
}
