import { eliminate, isNegligible, scaleRows } from './elimination';
import type { LinearSystem, Pivot } from './elimination';
import { choleskyInPlace, choleskyInverse } from './linear-algebra';

/**
 * The constraints at x: fills `residual` (m values, 0 where a constraint holds) and `jacobian` (m x n row-major, the slopes
 * of the residuals). Both arrive filled with zeros.
 */
export type Constraints = (x: Float64Array, residual: Float64Array, jacobian: Float64Array) => void;

export interface ReconcileProblem {
  /** n measured values; NaN: not measured. */
  measured: Float64Array;
  /** n x n row-major covariance of the measurements; rows and columns of what is not measured are not read. */
  covariance: Float64Array;
  constraintCount: number;
  constraints: Constraints;
  /** Where to start, needed for what is not measured when the constraints are not linear; default: measured, else 0. */
  start?: Float64Array;
  /** Typical size of each unknown that is not measured; default 1. Only decides what counts as negligible. */
  scale?: Float64Array;
}

export interface ReconcileOptions {
  /** Least variance of an adjustment in the local test, as share of the measurement's own (VDI 2048: 0.1); default 0. */
  floorShare?: number;
  maxIterations?: number;
}

export interface Reconciliation {
  /** Reconciled values; NaN where neither measured nor determined by the constraints. */
  x: Float64Array;
  /** n x n covariance of x; NaN in rows and columns of what is not determined. */
  covariance: Float64Array;
  /** Measured less reconciled; NaN where not measured. */
  adjustments: Float64Array;
  chiSquare: number;
  degreesOfFreedom: number;
  /** Size of the adjustment over its standard deviation; NaN where not measured or not redundant. */
  z: Float64Array;
  /** Size of each constraint's residual at the measurements over its standard deviation; NaN where it holds unmeasured ones. */
  nodal: Float64Array;
  /** Measurements with the largest z; several when the constraints cannot tell them apart. Empty without redundancy. */
  mostAtOdds: number[];
  iterations: number;
  converged: boolean;
}

/** Change of the scaled unknowns at which the iteration ends. */
const STEP_TOLERANCE = 1e-10;
/** Share of a measurement's variance below which its adjustment is not redundant but rounding. */
const NOT_REDUNDANT = 1e-9;
/** Relative difference of two z that counts as a tie. */
const TIE = 1e-6;

/** Everything one linear step knows; indices are those of the unknowns. */
interface Step {
  /** Change of each unknown from the point of linearisation to the reconciled values, in units of `scale`. */
  change: Float64Array;
  /** Covariance of the scaled unknowns. */
  covariance: Float64Array;
  determined: Uint8Array;
  chiSquare: number;
  degreesOfFreedom: number;
}

/** Unit in which each unknown is counted: its own standard deviation, or its typical size when it is not measured. */
function scales({ measured, covariance, scale }: ReconcileProblem): Float64Array {
  const n = measured.length;
  return measured.map((value, i) => {
    if (Number.isNaN(value)) return scale?.[i] ?? 1;
    const sigma = Math.sqrt(covariance[i * n + i] as number);
    if (!(sigma > 0)) throw new RangeError(`reconcile: measurement ${i} has standard deviation ${sigma}`);
    return sigma;
  });
}

/** The constraints about x as a linear system in the scaled changes: J S d = -f. */
function linearise(problem: ReconcileProblem, x: Float64Array, unit: Float64Array) {
  const n = x.length;
  const m = problem.constraintCount;
  const residual = new Float64Array(m);
  const jacobian = new Float64Array(m * n);
  problem.constraints(x, residual, jacobian);
  const values = new Float64Array(m * (n + 1));
  for (let row = 0; row < m; row += 1) {
    for (let i = 0; i < n; i += 1) values[row * (n + 1) + i] = (jacobian[row * n + i] as number) * (unit[i] as number);
    values[row * (n + 1) + n] = -(residual[row] as number);
  }
  return { jacobian, system: { rows: m, columns: n + 1, values } satisfies LinearSystem };
}

/** Correlation of two measurements. */
const correlation = ({ covariance, measured }: ReconcileProblem, unit: Float64Array, i: number, j: number): number =>
  (covariance[i * measured.length + j] as number) / ((unit[i] as number) * (unit[j] as number));

/**
 * Adjusts the measurements to the rows that are free of unmeasured unknowns:
 *   d = e - C A' H^-1 (A e - b),  H = A C A',  cov = C - C A' H^-1 A C
 * with e the scaled distance of the measurements from x and C their correlations.
 */
function adjustMeasured(
  problem: ReconcileProblem,
  x: Float64Array,
  unit: Float64Array,
  known: readonly number[],
  system: LinearSystem,
  rows: readonly number[],
): Step {
  const n = x.length;
  const q = rows.length;
  const entry = (row: number, column: number) => system.values[row * system.columns + column] as number;
  const away = new Float64Array(n);
  for (const i of known) away[i] = ((problem.measured[i] as number) - (x[i] as number)) / (unit[i] as number);
  // spread[k] = C A' for row k.
  const spread = rows.map((row) => {
    const column = new Float64Array(n);
    for (const i of known) {
      for (const j of known) column[i] = (column[i] as number) + correlation(problem, unit, i, j) * entry(row, j);
    }
    return column;
  });
  const h = new Float64Array(q * q);
  const miss = new Float64Array(q);
  rows.forEach((row, k) => {
    miss[k] = known.reduce((sum, i) => sum + entry(row, i) * (away[i] as number), -entry(row, n));
    rows.forEach((_, l) => (h[k * q + l] = known.reduce((sum, i) => sum + entry(row, i) * (spread[l]?.[i] ?? 0), 0)));
  });
  const inverse = new Float64Array(q * q);
  if (!choleskyInPlace(h, q)) inverse.fill(Number.NaN);
  else choleskyInverse(h, q, inverse);
  const change = away.slice();
  const covariance = new Float64Array(n * n);
  const determined = new Uint8Array(n);
  for (const i of known) {
    determined[i] = 1;
    for (const j of known) covariance[i * n + j] = correlation(problem, unit, i, j);
  }
  let chiSquare = 0;
  for (let k = 0; k < q; k += 1) {
    for (let l = 0; l < q; l += 1) {
      const weight = inverse[k * q + l] as number;
      chiSquare += weight * (miss[k] as number) * (miss[l] as number);
      for (const i of known) {
        const share = weight * (spread[k]?.[i] ?? 0);
        change[i] = (change[i] as number) - share * (miss[l] as number);
        for (const j of known)
          covariance[i * n + j] = (covariance[i * n + j] as number) - share * (spread[l]?.[j] ?? 0);
      }
    }
  }
  return { change, covariance, determined, chiSquare, degreesOfFreedom: q };
}

/** Unmeasured unknowns from the rows that were solved for them: unknown = right-hand side - (row) (measured). */
function solveUnmeasured(
  step: Step,
  system: LinearSystem,
  pivots: readonly Pivot[],
  known: readonly number[],
  unknown: readonly number[],
): void {
  const n = step.change.length;
  const entry = (row: number, column: number) => system.values[row * system.columns + column] as number;
  const solved = pivots.filter(({ row, column }) =>
    unknown.every((other) => other === column || isNegligible(entry(row, other))),
  );
  for (const { row, column } of solved) {
    step.determined[column] = 1;
    step.change[column] = known.reduce((sum, i) => sum - entry(row, i) * (step.change[i] as number), entry(row, n));
    // Covariance with the measured ones first, then among the unmeasured.
    for (const j of known) {
      const shared = known.reduce((sum, i) => sum - entry(row, i) * (step.covariance[i * n + j] as number), 0);
      step.covariance[column * n + j] = shared;
      step.covariance[j * n + column] = shared;
    }
  }
  for (const { row, column } of solved) {
    for (const { column: other } of solved) {
      const shared = known.reduce((sum, i) => sum - entry(row, i) * (step.covariance[i * n + other] as number), 0);
      step.covariance[column * n + other] = shared;
    }
  }
}

function linearStep(problem: ReconcileProblem, x: Float64Array, unit: Float64Array) {
  const indices = Array.from(x, (_, i) => i);
  const known = indices.filter((i) => !Number.isNaN(problem.measured[i]));
  const unknown = indices.filter((i) => Number.isNaN(problem.measured[i]));
  const { jacobian, system } = linearise(problem, x, unit);
  scaleRows(system);
  const all = Array.from({ length: system.rows }, (_, row) => row);
  const pivots = eliminate(system, all, unknown);
  const solvedRows = new Set(pivots.map((pivot) => pivot.row));
  const free = all.filter((row) => !solvedRows.has(row));
  // Rows that say the same as others carry no pivot and are left out.
  const rows = eliminate(system, free, known).map((pivot) => pivot.row);
  const step = adjustMeasured(problem, x, unit, known, system, rows);
  solveUnmeasured(step, system, pivots, known, unknown);
  return { step, jacobian };
}

/** Measured less reconciled. */
const adjustmentsOf = (measured: Float64Array, x: Float64Array): Float64Array =>
  measured.map((value, i) => value - (x[i] as number));

/** Size of each adjustment over its standard deviation, which is what the covariance of x leaves of the measurement's. */
function localTests(unit: Float64Array, step: Step, adjustments: Float64Array, floorShare: number): Float64Array {
  const n = adjustments.length;
  return adjustments.map((adjustment, i) => {
    if (Number.isNaN(adjustment)) return Number.NaN;
    const variance = 1 - (step.covariance[i * n + i] as number);
    if (!(variance > NOT_REDUNDANT)) return Number.NaN;
    return Math.abs(adjustment) / ((unit[i] as number) * Math.sqrt(Math.max(variance, floorShare)));
  });
}

/** Size of each constraint's residual at the measurements over its standard deviation. */
function nodalTests(problem: ReconcileProblem, jacobian: Float64Array, adjustments: Float64Array): Float64Array {
  const n = adjustments.length;
  return Float64Array.from({ length: problem.constraintCount }, (_, row) => {
    let miss = 0;
    let variance = 0;
    for (let i = 0; i < n; i += 1) {
      const slope = jacobian[row * n + i] as number;
      if (slope === 0) continue;
      miss += slope * (adjustments[i] as number);
      for (let j = 0; j < n; j += 1) {
        const other = jacobian[row * n + j] as number;
        if (other !== 0) variance += slope * other * (problem.covariance[i * n + j] as number);
      }
    }
    return variance > 0 ? Math.abs(miss) / Math.sqrt(variance) : Number.NaN;
  });
}

/** Indices of the largest z and of those that tie with it. */
function largest(z: Float64Array): number[] {
  const most = z.reduce((best, value) => (value > best ? value : best), 0);
  if (most === 0) return [];
  return Array.from(z, (_, i) => i).filter((i) => (z[i] as number) >= most * (1 - TIE));
}

/** The scaled covariance in the unknowns' own units, NaN where nothing is determined. */
function unscaledCovariance(step: Step, unit: Float64Array): Float64Array {
  const n = unit.length;
  return step.covariance.map((value, at) => {
    const [i, j] = [Math.floor(at / n), at % n];
    return step.determined[i] && step.determined[j] ? value * (unit[i] as number) * (unit[j] as number) : Number.NaN;
  });
}

/**
 * Steady-state data reconciliation: the values nearest to the measurements, in units of their covariance V, that satisfy
 * f(x) = 0. Linear constraints are solved at once, others by repetition with the constraints and their slopes J at x:
 *   x <- y - V J' (J V J')^-1 [f(x) + J (y - x)]
 * What is not measured is first eliminated (projected out) and then solved for. Rows that repeat others count once.
 *
 * Shapes  n unknowns, m = constraintCount; matrices row-major.
 * Units   those of the measurements.
 * Gaps    NaN in `measured`: not measured. What the constraints do not determine: NaN. No convergence: `converged` false.
 * Throws  RangeError when an array has the wrong length or a measurement's standard deviation is not above zero.
 * Source  S. Narasimhan, C. Jordache, Data Reconciliation and Gross Error Detection, Gulf 2000, chapters 3, 4, 7;
 *         C. M. Crowe, Y. A. Garcia Campos, A. Hrymak, AIChE J. 29 (1983) 881 (projection); R. S. H. Mah,
 *         A. C. Tamhane, AIChE J. 28 (1982) 828 (tests); VDI 2048 Blatt 1 (2000) (floor of the local test).
 */
export function reconcile(problem: ReconcileProblem, options: ReconcileOptions = {}): Reconciliation {
  const n = problem.measured.length;
  if (problem.covariance.length !== n * n) {
    throw new RangeError(`reconcile: covariance has ${problem.covariance.length} elements, needs ${n * n}`);
  }
  const { floorShare = 0, maxIterations = 100 } = options;
  const unit = scales(problem);
  let x = problem.measured.map((value, i) => problem.start?.[i] ?? (Number.isNaN(value) ? 0 : value));
  let iterations = 0;
  let converged = false;
  let { step, jacobian } = linearStep(problem, x, unit);
  while (!converged && iterations < maxIterations) {
    iterations += 1;
    const from = x;
    const { change } = step;
    x = from.map((value, i) => value + (change[i] as number) * (unit[i] as number));
    ({ step, jacobian } = linearStep(problem, x, unit));
    converged = change.every((value, i) => {
      const size = 1 + Math.abs(from[i] as number) / (unit[i] as number);
      return Math.abs(value) <= STEP_TOLERANCE * size;
    });
  }
  const reconciled = x.map((value, i) => (step.determined[i] ? value : Number.NaN));
  const adjustments = adjustmentsOf(problem.measured, reconciled);
  const z = localTests(unit, step, adjustments, floorShare);
  return {
    x: reconciled,
    covariance: unscaledCovariance(step, unit),
    adjustments,
    chiSquare: step.chiSquare,
    degreesOfFreedom: step.degreesOfFreedom,
    z,
    nodal: nodalTests(problem, jacobian, adjustments),
    mostAtOdds: largest(z),
    iterations,
    converged,
  };
}

/**
 * Constraints A x = b.
 *
 * Shapes  a: m x n row-major; b: m, default zeros. Throws: RangeError when `a` is not a whole number of rows.
 */
export function linearConstraints(a: Float64Array, n: number, b?: Float64Array): Constraints {
  if (a.length % n !== 0) throw new RangeError(`linearConstraints: ${a.length} elements are no rows of ${n}`);
  const m = a.length / n;
  return (x, residual, jacobian) => {
    jacobian.set(a);
    for (let row = 0; row < m; row += 1) {
      let sum = -(b?.[row] ?? 0);
      for (let i = 0; i < n; i += 1) sum += (a[row * n + i] as number) * (x[i] as number);
      residual[row] = sum;
    }
  };
}

/** Covariance of independent measurements from their standard deviations. */
export function diagonalCovariance(sigmas: ArrayLike<number>): Float64Array {
  const n = sigmas.length;
  const covariance = new Float64Array(n * n);
  for (let i = 0; i < n; i += 1) covariance[i * n + i] = (sigmas[i] as number) ** 2;
  return covariance;
}
