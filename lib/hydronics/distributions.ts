import { normalQuantile } from './normal';

/** Relative accuracy at which the expansions stop. */
const ENOUGH = 1e-16;
const MOST_TERMS = 500;
/** Keeps a continued fraction from dividing by zero. */
const TINY = 1e-300;
/** Above this many degrees of freedom Student's t is the normal to better than 1e-9. */
const NORMAL_FROM = 1e9;

/** Lanczos' coefficients for g = 7, nine terms (relative error of the gamma function below 2e-15). */
const LANCZOS_G = 7;
const LANCZOS = [
  0.99999999999980993, 676.5203681218851, -1259.1392167224028, 771.32342877765313, -176.61502916214059,
  12.507343278686905, -0.13857109526572012, 9.9843695780195716e-6, 1.5056327351493116e-7,
] as const;

/**
 * Natural logarithm of the gamma function for x > 0.
 *
 * Gaps    NaN in, NaN out. Source: C. Lanczos, SIAM J. Numer. Anal. B 1 (1964) 86, g = 7.
 */
export function logGamma(x: number): number {
  if (x < 0.5) return Math.log(Math.PI / Math.sin(Math.PI * x)) - logGamma(1 - x);
  const below = x - 1;
  const t = below + LANCZOS_G + 0.5;
  let sum = LANCZOS[0] as number;
  for (let i = 1; i < LANCZOS.length; i += 1) sum += (LANCZOS[i] as number) / (below + i);
  return 0.5 * Math.log(2 * Math.PI) + (below + 0.5) * Math.log(t) - t + Math.log(sum);
}

/** Continued fraction b0 + a1/(b1 + a2/(b2 + ...)) by W. J. Lentz's method; `term` gives [a, b] from 1 on. */
function continuedFraction(b0: number, term: (index: number) => readonly [number, number]): number {
  let value = b0 || TINY;
  let c = value;
  let d = 0;
  for (let index = 1; index <= MOST_TERMS; index += 1) {
    const [a, b] = term(index);
    d = 1 / (b + a * d || TINY);
    c = b + a / c || TINY;
    const factor = c * d;
    value *= factor;
    if (Math.abs(factor - 1) < ENOUGH) break;
  }
  return value;
}

/**
 * Upper regularised incomplete gamma function Q(a, x) and its complement, whichever is small computed without cancellation.
 *
 * Source  Abramowitz & Stegun, Handbook of Mathematical Functions (1964), 6.5.29 (series), 6.5.31 (continued fraction).
 */
function incompleteGamma(a: number, x: number): { lower: number; upper: number } {
  if (x <= 0) return { lower: 0, upper: 1 };
  const front = Math.exp(a * Math.log(x) - x - logGamma(a));
  if (x < a + 1) {
    let term = 1 / a;
    let sum = term;
    for (let n = 1; n <= MOST_TERMS && term > ENOUGH * sum; n += 1) {
      term *= x / (a + n);
      sum += term;
    }
    return { lower: front * sum, upper: 1 - front * sum };
  }
  const upper = front / continuedFraction(x + 1 - a, (n) => [-n * (n - a), x + 2 * n + 1 - a]);
  return { lower: 1 - upper, upper };
}

/**
 * Regularised incomplete beta function I_x(a, b).
 *
 * Source  Abramowitz & Stegun, Handbook of Mathematical Functions (1964), 26.5.8.
 */
export function incompleteBeta(x: number, a: number, b: number): number {
  if (x <= 0) return 0;
  if (x >= 1) return 1;
  if (x > (a + 1) / (a + b + 2)) return 1 - incompleteBeta(1 - x, b, a);
  const logFront = a * Math.log(x) + b * Math.log1p(-x) + logGamma(a + b) - logGamma(a) - logGamma(b);
  const fraction = continuedFraction(1, (index) => {
    const m = Math.floor(index / 2);
    const even = index % 2 === 0;
    const numerator = even ? m * (b - m) * x : -(a + m) * (a + b + m) * x;
    return [numerator / ((a + 2 * m - (even ? 1 : 0)) * (a + 2 * m + (even ? 0 : 1))), 1];
  });
  return Math.exp(logFront) / (a * fraction);
}

function checkProbability(caller: string, p: number, freedom: number): void {
  if (!(p > 0 && p < 1)) throw new RangeError(`${caller}: probability must lie between 0 and 1, got ${p}`);
  if (!(freedom > 0)) throw new RangeError(`${caller}: degrees of freedom must be above 0, got ${freedom}`);
}

/** Root of a falling or rising function between two bounds by Newton's method, halving where that leaves them. */
function boundedRoot(low: number, high: number, start: number, miss: (x: number) => { value: number; slope: number }) {
  let [from, to, x] = [low, high, start];
  for (let round = 0; round < 200; round += 1) {
    const { value, slope } = miss(x);
    if (value === 0) return x;
    if (value > 0 === slope > 0) to = x;
    else from = x;
    const next = x - value / slope;
    const inside = next > from && next < to;
    const moved = inside ? next : (from + to) / 2;
    if (Math.abs(moved - x) <= 4e-16 * Math.abs(x)) return moved;
    x = moved;
  }
  return x;
}

/** Probability that Student's t with so many degrees of freedom exceeds t >= 0. */
function studentTail(t: number, freedom: number): number {
  return 0.5 * incompleteBeta(freedom / (freedom + t * t), freedom / 2, 0.5);
}

/**
 * Quantile of Student's t distribution; 0.975 gives the factor of a two-sided 95 % interval.
 *
 * Units   degrees of freedom need not be whole; Infinity: the normal distribution.
 * Throws  RangeError when p is not between 0 and 1 or the degrees of freedom are not above 0. Relative error below 1e-10.
 * Source  distribution by the incomplete beta function, Abramowitz & Stegun (1964), 26.7.1; Newton's method.
 */
export function studentTQuantile(p: number, freedom: number): number {
  checkProbability('studentTQuantile', p, freedom);
  if (p < 0.5) return -studentTQuantile(1 - p, freedom);
  if (p === 0.5) return 0;
  if (freedom >= NORMAL_FROM) return normalQuantile(p);
  const tail = 1 - p;
  const logFront = logGamma((freedom + 1) / 2) - logGamma(freedom / 2) - 0.5 * Math.log(freedom * Math.PI);
  let high = Math.max(2, 2 * normalQuantile(p));
  while (studentTail(high, freedom) > tail) high *= 4;
  return boundedRoot(0, high, Math.min(high / 2, normalQuantile(p)), (t) => {
    const density = Math.exp(logFront - ((freedom + 1) / 2) * Math.log1p((t * t) / freedom));
    return { value: tail - studentTail(t, freedom), slope: density };
  });
}

/**
 * Quantile of the chi-square distribution; 0.95 gives the limit of a global test at 5 %.
 *
 * Throws  RangeError when p is not between 0 and 1 or the degrees of freedom are not above 0. Relative error below 1e-10.
 * Source  distribution by the incomplete gamma function, Abramowitz & Stegun (1964), 26.4.19; Newton's method from
 *         E. B. Wilson, M. M. Hilferty, Proc. Natl. Acad. Sci. 17 (1931) 684.
 */
export function chiSquareQuantile(p: number, freedom: number): number {
  checkProbability('chiSquareQuantile', p, freedom);
  const half = freedom / 2;
  const ninth = 2 / (9 * freedom);
  const start = Math.max(1e-8 * freedom, freedom * (1 - ninth + normalQuantile(p) * Math.sqrt(ninth)) ** 3);
  let high = 2 * start + 10;
  while (incompleteGamma(half, high / 2).lower < p) high *= 2;
  return boundedRoot(0, high, start, (x) => {
    const { lower, upper } = incompleteGamma(half, x / 2);
    const density = 0.5 * Math.exp((half - 1) * Math.log(x / 2) - x / 2 - logGamma(half));
    // Whichever tail is the smaller keeps its digits.
    return { value: p < 0.5 ? lower - p : 1 - p - upper, slope: density };
  });
}

/** Probability that chi-square with so many degrees of freedom exceeds a value: the p-value of a global test. */
export function chiSquareTail(value: number, freedom: number): number {
  return freedom > 0 ? incompleteGamma(freedom / 2, value / 2).upper : Number.NaN;
}

/**
 * Critical size of a standard normal test statistic when the largest of several is looked at: 1 - (1 - alpha)^(1/n), both
 * sides. Throws: RangeError when alpha is not between 0 and 1 or there is no test.
 * Source  Z. Sidak, J. Am. Stat. Assoc. 62 (1967) 626.
 */
export function sidakLimit(alpha: number, tests: number): number {
  checkProbability('sidakLimit', alpha, tests);
  const each = -Math.expm1(Math.log1p(-alpha) / tests);
  return -normalQuantile(each / 2);
}
