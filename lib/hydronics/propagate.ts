import { studentTQuantile } from './distributions';

/** m functions of n inputs at x: fills `values` (m) and `slopes` (m x n row-major), both filled with zeros before. */
export type Measurand = (x: Float64Array, values: Float64Array, slopes: Float64Array) => void;

export interface PropagateInputs {
  values: Float64Array;
  /** n x n row-major; off the diagonal what errors have in common. */
  covariance: Float64Array;
  /** Degrees of freedom of each standard uncertainty; default Infinity (known exactly). */
  freedom?: Float64Array;
}

export interface Propagated {
  values: Float64Array;
  /** Standard uncertainties (k = 1). */
  sigmas: Float64Array;
  /** m x m row-major. */
  covariance: Float64Array;
  /** m x n: slope times standard uncertainty of each input, signed. Their squares add up only without correlation. */
  terms: Float64Array;
  /** Effective degrees of freedom; NaN where inputs of limited freedom are correlated: the formula does not hold there. */
  freedom: Float64Array;
}

/** Whether an input's error has something in common with another's. */
function isCorrelated(covariance: Float64Array, n: number, i: number): boolean {
  for (let j = 0; j < n; j += 1) if (j !== i && covariance[i * n + j] !== 0) return true;
  return false;
}

/** Effective degrees of freedom of one output: u^4 / SUM (c u_i)^4 / nu_i. */
function effectiveFreedom({ covariance, freedom }: PropagateInputs, terms: Float64Array, sigma: number): number {
  const n = terms.length;
  let sum = 0;
  for (let i = 0; i < n; i += 1) {
    const own = freedom?.[i] ?? Infinity;
    if (own === Infinity || terms[i] === 0) continue;
    if (isCorrelated(covariance, n, i)) return Number.NaN;
    sum += (terms[i] as number) ** 4 / own;
  }
  return sum === 0 ? Infinity : sigma ** 4 / sum;
}

/**
 * Values, standard uncertainties and covariances of functions of uncertain inputs, to first order:
 *   cov(f_k, f_l) = SUM_i SUM_j (df_k/dx_i) (df_l/dx_j) cov(x_i, x_j)
 * with effective degrees of freedom by Welch and Satterthwaite.
 *
 * Shapes  n inputs, m outputs; matrices row-major. Units: those of the inputs and outputs.
 * Gaps    NaN in, NaN out. Functions bent over the width of their inputs' uncertainty need more than the first order.
 * Throws  RangeError when a length does not fit.
 * Source  JCGM 100:2008 (GUM), equations 10, 13, H.9 and G.2b.
 */
export function propagate(inputs: PropagateInputs, outputs: number, measurand: Measurand): Propagated {
  const n = inputs.values.length;
  if (inputs.covariance.length !== n * n || (inputs.freedom && inputs.freedom.length !== n)) {
    throw new RangeError(
      `propagate: ${n} values, ${inputs.covariance.length} covariances, ${inputs.freedom?.length} freedoms`,
    );
  }
  const values = new Float64Array(outputs);
  const slopes = new Float64Array(outputs * n);
  measurand(inputs.values, values, slopes);
  const covariance = new Float64Array(outputs * outputs);
  for (let k = 0; k < outputs; k += 1) {
    for (let l = 0; l < outputs; l += 1) {
      let sum = 0;
      for (let i = 0; i < n; i += 1) {
        for (let j = 0; j < n; j += 1) {
          sum +=
            (slopes[k * n + i] as number) * (slopes[l * n + j] as number) * (inputs.covariance[i * n + j] as number);
        }
      }
      covariance[k * outputs + l] = sum;
    }
  }
  const sigmas = Float64Array.from(values, (_, k) => Math.sqrt(Math.max(0, covariance[k * outputs + k] as number)));
  const terms = slopes.map((slope, at) => slope * Math.sqrt(inputs.covariance[(at % n) * n + (at % n)] as number));
  const freedom = sigmas.map((sigma, k) => effectiveFreedom(inputs, terms.subarray(k * n, k * n + n), sigma));
  return { values, sigmas, covariance, terms, freedom };
}

/** Correlation of two outputs, or inputs, from their covariance; NaN where one has no uncertainty. */
export function correlationOf(covariance: Float64Array, n: number, i: number, j: number): number {
  const size = Math.sqrt((covariance[i * n + i] as number) * (covariance[j * n + j] as number));
  return size > 0 ? (covariance[i * n + j] as number) / size : Number.NaN;
}

/**
 * Half-width of the interval that holds the value with a probability: Student's t times the standard uncertainty.
 *
 * Gaps    NaN degrees of freedom: NaN. Throws: RangeError when the probability is not between 0 and 1.
 * Source  JCGM 100:2008, G.6.4; the guide rounds the degrees of freedom down to a whole number first.
 */
export function expandedUncertainty(sigma: number, freedom: number, probability: number): number {
  if (Number.isNaN(freedom)) return Number.NaN;
  return sigma * studentTQuantile((1 + probability) / 2, freedom);
}

/**
 * Means of quantities that were read together several times, with the covariance of the means from their scatter.
 *
 * Shapes  one series a quantity, all of one length r; freedom r - 1.
 * Gaps    NaN in, NaN out. Throws: RangeError when the lengths differ or there are fewer than two readings.
 * Source  JCGM 100:2008, equations 3 and 17.
 */
export function meansOf(series: readonly ArrayLike<number>[]): Required<PropagateInputs> {
  const n = series.length;
  const readings = series[0]?.length ?? 0;
  if (readings < 2 || series.some((each) => each.length !== readings)) {
    throw new RangeError(
      `meansOf: needs series of one length of two or more, got ${series.map((each) => each.length).join(', ')}`,
    );
  }
  const values = Float64Array.from(series, (each) => {
    let sum = 0;
    for (let k = 0; k < readings; k += 1) sum += each[k] as number;
    return sum / readings;
  });
  const covariance = new Float64Array(n * n);
  for (let i = 0; i < n; i += 1) {
    for (let j = 0; j < n; j += 1) {
      const [first, second] = [series[i] as ArrayLike<number>, series[j] as ArrayLike<number>];
      let sum = 0;
      for (let k = 0; k < readings; k += 1) {
        sum += ((first[k] as number) - (values[i] as number)) * ((second[k] as number) - (values[j] as number));
      }
      covariance[i * n + j] = sum / (readings * (readings - 1));
    }
  }
  return { values, covariance, freedom: new Float64Array(n).fill(readings - 1) };
}
