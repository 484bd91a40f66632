/** The standard normal distribution, accurate in the tails: probabilities there are ratios of small numbers. */

const SQRT_TWO_PI = Math.sqrt(2 * Math.PI);
const LOG_SQRT_TWO_PI = Math.log(SQRT_TWO_PI);
/** 0.95 point of the standard normal: b +/- this many sigmas is the central 90 % interval. */
export const NINETY_PERCENT_Z = 1.6448536269514722;
/** Beyond this the continued fraction converges faster than the series. */
const SERIES_LIMIT = 3;
/** Beyond this the upper tail is below 1e-15 and nothing is left of it in double precision. */
const CERTAIN = 8;

/** Density of the standard normal at z. */
export const normalDensity = (z: number): number => Math.exp(-0.5 * z * z) / SQRT_TWO_PI;

/** (Upper-tail probability) / density at z >= 3. Source: Abramowitz & Stegun, Handbook of Mathematical Functions, 26.2.14. */
function tailRatio(z: number): number {
  const depth = z > 8 ? 12 : z > 5 ? 24 : 40;
  let fraction = z;
  for (let term = depth; term >= 1; term -= 1) fraction = z + term / fraction;
  return 1 / fraction;
}

/** (cdf(z) - 1/2) / density at |z| < 3: z + z^3/3 + z^5/15 + ... Source: Abramowitz & Stegun, 26.2.11. */
function centreRatio(z: number): number {
  let term = z;
  let sum = z;
  for (let odd = 3; Math.abs(term) > 1e-17 * Math.abs(sum); odd += 2) {
    term *= (z * z) / odd;
    sum += term;
  }
  return sum;
}

/**
 * Probability that a standard normal is below z.
 *
 * Gaps    NaN in, NaN out. Relative error below 1e-10 down to the smallest double.
 * Source  Abramowitz & Stegun, Handbook of Mathematical Functions (1964), 26.2.11 and 26.2.14.
 */
export function normalCdf(z: number): number {
  if (z <= -SERIES_LIMIT) return normalDensity(z) * tailRatio(-z);
  if (z > CERTAIN) return 1;
  if (z >= SERIES_LIMIT) return 1 - normalDensity(z) * tailRatio(z);
  return 0.5 + normalDensity(z) * centreRatio(z);
}

/** Logarithm of normalCdf, finite far below where the probability itself underflows. Gaps, Source as normalCdf. */
export function logNormalCdf(z: number): number {
  if (z <= -SERIES_LIMIT) return -0.5 * z * z - LOG_SQRT_TWO_PI + Math.log(tailRatio(-z));
  return Math.log(normalCdf(z));
}

/**
 * density(z) / cdf(z): how far, in sigmas, cutting a normal off below zero moves its mean when the uncut mean is z sigmas.
 *
 * Gaps    NaN in, NaN out. Source  mean of the truncated normal; Abramowitz & Stegun 26.2.14 in the tail.
 */
export function truncationShift(z: number): number {
  if (z <= -SERIES_LIMIT) return 1 / tailRatio(-z);
  if (z > CERTAIN) return 0;
  return normalDensity(z) / normalCdf(z);
}

/**
 * The point below which a standard normal lies with a given probability; the inverse of normalCdf.
 *
 * Gaps    NaN in, NaN out; 0 and 1: -Infinity and Infinity. Relative error of the probability below 1e-12.
 * Source  start: Abramowitz & Stegun, Handbook of Mathematical Functions (1964), 26.2.23; then Halley's method on normalCdf.
 */
export function normalQuantile(probability: number): number {
  if (!(probability > 0 && probability < 1)) {
    return probability === 0 ? -Infinity : probability === 1 ? Infinity : Number.NaN;
  }
  const tail = probability < 0.5 ? probability : 1 - probability;
  const t = Math.sqrt(-2 * Math.log(tail));
  const start = t - (2.515517 + t * (0.802853 + t * 0.010328)) / (1 + t * (1.432788 + t * (0.189269 + t * 0.001308)));
  let z = -start;
  for (let step = 0; step < 2; step += 1) {
    const miss = (normalCdf(z) - tail) / normalDensity(z);
    z -= miss / (1 + 0.5 * z * miss);
  }
  return probability < 0.5 ? z : -z;
}
