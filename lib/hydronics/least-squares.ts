import { choleskyInPlace, choleskyInverse, choleskySolveInPlace } from './linear-algebra';

/**
 * Adds up one least-squares problem at `parameters` (p of them), with residual r = model - observed, each over its sigma:
 *   returns the cost, HALF the sum of squares: (1/2) SUM r^2
 *   gradient[i] = SUM r dr/dp_i, the slope of the cost; normal[i * p + j] = SUM dr/dp_i dr/dp_j, lower triangle at least
 * `normal` and `gradient` arrive filled with zeros. A robust loss may stand in for the squares as long as the gradient is
 * the slope of what is returned. A cost that is not finite says that the model does not exist there: the step is taken back.
 */
export type AccumulateNormalEquations = (
  parameters: Float64Array,
  normal: Float64Array,
  gradient: Float64Array,
) => number;

export interface MinimiseOptions {
  /** Calls of `accumulate` at most, the first included. */
  maxIterations?: number;
  /** Done when no parameter moves by more than this share of itself ... */
  stepTolerance?: number;
  /** ... or when no column of derivatives correlates with the residuals beyond this. */
  gradientTolerance?: number;
  /** Share of the diagonal added at first: small trusts the start, large creeps. */
  damping?: number;
  /**
   * Takes every undamped step without asking the cost: for scoring, where the gradient is that of a likelihood whose
   * covariances are held and the cost is not its exact primitive.
   */
  scoring?: boolean;
}

export interface Minimum {
  parameters: Float64Array;
  /** Inverse of the normal matrix, p x p row-major: the covariance for residuals of unit variance. NaN when it is singular. */
  covariance: Float64Array;
  /** Half the sum of squares. */
  cost: number;
  /** Calls of `accumulate`. */
  iterations: number;
  converged: boolean;
}

/** Damping beyond which the steps are below rounding: nothing nearby is lower. */
const DAMPING_LIMIT = 1e16;
/** A fall of the cost by less than this share of it is lost in the rounding of its sum. */
const ROUNDING = 1e-13;
/** Where damping starts again after a step that failed undamped. */
const DAMPING_FLOOR = 1e-9;

/** Buffers of one point: parameters and what was added up there. */
interface Point {
  parameters: Float64Array;
  normal: Float64Array;
  gradient: Float64Array;
  cost: number;
}

const emptyPoint = (p: number): Point => ({
  parameters: new Float64Array(p),
  normal: new Float64Array(p * p),
  gradient: new Float64Array(p),
  cost: Number.NaN,
});

function accumulateAt(point: Point, accumulate: AccumulateNormalEquations): void {
  point.normal.fill(0);
  point.gradient.fill(0);
  point.cost = accumulate(point.parameters, point.normal, point.gradient);
}

/** Largest cosine of the angle between the residuals and a column of derivatives; 0 at a minimum, whatever the units. */
function largestCosine(point: Point, p: number): number {
  let largest = 0;
  for (let i = 0; i < p; i += 1) {
    const length = Math.sqrt((point.normal[i * p + i] as number) * 2 * point.cost);
    if (length > 0) largest = Math.max(largest, Math.abs(point.gradient[i] as number) / length);
  }
  return largest;
}

/**
 * The step d of (N + damping D) d = -gradient, D the largest diagonal met so far (1 where no datum bears on a parameter).
 * Returns the fall of the cost that the quadratic model predicts, or NaN when the system has no solution.
 */
function dampedStep(at: Point, damping: number, scale: Float64Array, factor: Float64Array, step: Float64Array): number {
  const p = step.length;
  factor.set(at.normal);
  for (let i = 0; i < p; i += 1) {
    factor[i * p + i] = (at.normal[i * p + i] as number) + damping * ((scale[i] as number) || 1);
    step[i] = -(at.gradient[i] as number);
  }
  if (!choleskyInPlace(factor, p)) return Number.NaN;
  choleskySolveInPlace(factor, p, step);
  let fall = 0;
  for (let i = 0; i < p; i += 1) {
    const move = step[i] as number;
    fall += 0.5 * move * (damping * ((scale[i] as number) || 1) * move - (at.gradient[i] as number));
  }
  return fall;
}

function widenScale(scale: Float64Array, normal: Float64Array): void {
  const p = scale.length;
  for (let i = 0; i < p; i += 1) scale[i] = Math.max(scale[i] as number, normal[i * p + i] as number);
}

/** True when no parameter moves by more than `tolerance` of itself. */
function isSmall(step: Float64Array, parameters: Float64Array, tolerance: number): boolean {
  return step.every((move, i) => Math.abs(move) <= tolerance * (Math.abs(parameters[i] as number) + tolerance));
}

/** Inverse of the normal matrix, or NaN throughout where the data leave a parameter undetermined. */
function covarianceOf(normal: Float64Array, p: number): Float64Array {
  const factor = normal.slice();
  const covariance = new Float64Array(p * p).fill(Number.NaN);
  if (choleskyInPlace(factor, p)) choleskyInverse(factor, p, covariance);
  return covariance;
}

/**
 * Least squares by damped Gauss-Newton (Levenberg-Marquardt) on accumulated normal equations: the data stay with the
 * caller, who adds up p x p numbers a pass, so the size of the record does not matter. Nothing is kept between calls.
 *
 * Shapes  start: p values, left as they are.
 * Gaps    A start where the cost is not finite: returned as it is, not converged.
 * Throws  RangeError when there is no parameter or one of the start is not finite.
 * Source  D. W. Marquardt, J. SIAM 11 (1963) 431; scaling by the largest diagonal met: J. J. More, in G. A. Watson
 *         (ed.), Numerical Analysis, Springer 1978, 105; damping by the gain ratio: K. Madsen, H. B. Nielsen, O. Tingleff, Methods for
 *         Non-linear Least Squares Problems, 2nd ed. 2004, section 3.2.
 */
export function minimise(
  start: Float64Array,
  accumulate: AccumulateNormalEquations,
  options: MinimiseOptions = {},
): Minimum {
  const { maxIterations = 200, stepTolerance = 1e-12, gradientTolerance = 1e-12 } = options;
  const p = start.length;
  if (p === 0 || !start.every(Number.isFinite))
    throw new RangeError(`minimise: start must be finite, got [${start.join(', ')}]`);
  let at = emptyPoint(p);
  let trial = emptyPoint(p);
  at.parameters.set(start);
  accumulateAt(at, accumulate);
  const [scale, factor, step] = [new Float64Array(p), new Float64Array(p * p), new Float64Array(p)];
  widenScale(scale, at.normal);
  let [damping, growth, iterations, converged] = [options.damping ?? 1e-3, 2, 1, false];
  while (Number.isFinite(at.cost)) {
    converged = largestCosine(at, p) <= gradientTolerance;
    if (converged || iterations >= maxIterations || damping > DAMPING_LIMIT) break;
    const predicted = dampedStep(at, damping, scale, factor, step);
    // A short step under heavy damping says only that longer ones failed.
    converged = damping <= 1 && isSmall(step, at.parameters, stepTolerance);
    if (converged) break;
    const beyondRounding = !(predicted <= ROUNDING * at.cost);
    let gain = -1;
    if (predicted > 0) {
      for (let i = 0; i < p; i += 1) trial.parameters[i] = (at.parameters[i] as number) + (step[i] as number);
      accumulateAt(trial, accumulate);
      iterations += 1;
      // Near the minimum the cost no longer shows a step's worth; the gradient still does.
      const flatter = largestCosine(at, p) - largestCosine(trial, p);
      gain = beyondRounding ? (at.cost - trial.cost) / predicted : flatter > 0 ? 1 : -1;
    }
    // NaN, from a trial where the model does not exist, counts as no gain.
    if (gain > 0 || (options.scoring && Number.isFinite(trial.cost) && predicted > 0)) {
      [at, trial] = [trial, at];
      widenScale(scale, at.normal);
      damping *= options.scoring ? 1 : Math.max(1 / 3, 1 - (2 * gain - 1) ** 3);
      growth = 2;
    } else {
      converged = !beyondRounding;
      if (converged) break;
      damping = Math.max(damping, DAMPING_FLOOR) * growth;
      growth *= 2;
    }
  }
  return { parameters: at.parameters, covariance: covarianceOf(at.normal, p), cost: at.cost, iterations, converged };
}
