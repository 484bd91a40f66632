/**
 * Small dense symmetric systems, row-major in Float64Array: element (i, j) of an n x n matrix stands at i * n + j.
 * Everything works in the caller's arrays, so that a loop over a record allocates nothing. Arrays may be longer than needed.
 */

/**
 * A pivot below this share of its own diagonal element is rounding, not information. Compared element by element, so the
 * test does not depend on the units of the unknowns.
 */
const PIVOT_FLOOR = 1e-14;

function checkLength(caller: string, name: string, array: Float64Array, needed: number): void {
  if (array.length < needed) throw new RangeError(`${caller}: ${name} has ${array.length} elements, needs ${needed}`);
}

/**
 * Cholesky factor of a symmetric positive definite matrix, A = L L', in place.
 * Only the lower triangle is read; it is replaced by L. The upper triangle is left as it was.
 *
 * Shapes  a: n x n row-major. Returns true when A is positive definite.
 * Gaps    A NaN or infinite element, or a matrix that is singular to rounding: false, and `a` is then of no use.
 * Throws  RangeError when `a` is too short.
 * Source  G. H. Golub, C. F. Van Loan, Matrix Computations, 4th ed. 2013, section 4.2.
 */
export function choleskyInPlace(a: Float64Array, n: number): boolean {
  checkLength('choleskyInPlace', 'a', a, n * n);
  for (let column = 0; column < n; column += 1) {
    const columnStart = column * n;
    const diagonal = a[columnStart + column] as number;
    let pivot = diagonal;
    for (let k = 0; k < column; k += 1) pivot -= (a[columnStart + k] as number) ** 2;
    // Written so that NaN fails too.
    if (!(pivot > PIVOT_FLOOR * diagonal && pivot < Infinity)) return false;
    const root = Math.sqrt(pivot);
    a[columnStart + column] = root;
    for (let row = column + 1; row < n; row += 1) {
      const rowStart = row * n;
      let sum = a[rowStart + column] as number;
      for (let k = 0; k < column; k += 1) sum -= (a[rowStart + k] as number) * (a[columnStart + k] as number);
      a[rowStart + column] = sum / root;
    }
  }
  return true;
}

/**
 * Solves L y = b in place. With A = L L', the sum of squares of y is b' A^-1 b: a chi-square without an inverse.
 *
 * Shapes  factor: n x n from choleskyInPlace; b: n. Gaps: NaN in, NaN out. Throws: RangeError when an array is too short.
 */
export function forwardSubstituteInPlace(factor: Float64Array, n: number, b: Float64Array): void {
  checkLength('forwardSubstituteInPlace', 'factor', factor, n * n);
  checkLength('forwardSubstituteInPlace', 'b', b, n);
  for (let row = 0; row < n; row += 1) {
    const rowStart = row * n;
    let sum = b[row] as number;
    for (let k = 0; k < row; k += 1) sum -= (factor[rowStart + k] as number) * (b[k] as number);
    b[row] = sum / (factor[rowStart + row] as number);
  }
}

/**
 * Solves A x = b in place from the Cholesky factor of A.
 *
 * Shapes  factor: n x n from choleskyInPlace; b: n, becomes x.
 * Gaps    NaN in, NaN out. Throws: RangeError when an array is too short.
 */
export function choleskySolveInPlace(factor: Float64Array, n: number, b: Float64Array): void {
  forwardSubstituteInPlace(factor, n, b);
  for (let row = n - 1; row >= 0; row -= 1) {
    let sum = b[row] as number;
    for (let k = row + 1; k < n; k += 1) sum -= (factor[k * n + row] as number) * (b[k] as number);
    b[row] = sum / (factor[row * n + row] as number);
  }
}

/** Lower triangle of L^-1, column by column, into `out`. */
function invertLower(factor: Float64Array, n: number, out: Float64Array): void {
  for (let column = 0; column < n; column += 1) {
    out[column * n + column] = 1 / (factor[column * n + column] as number);
    for (let row = column + 1; row < n; row += 1) {
      let sum = 0;
      for (let k = column; k < row; k += 1) sum -= (factor[row * n + k] as number) * (out[k * n + column] as number);
      out[row * n + column] = sum / (factor[row * n + row] as number);
    }
  }
}

/**
 * Inverse of A from its Cholesky factor: A^-1 = L^-T L^-1, both triangles filled.
 *
 * Shapes  factor, out: n x n; two different arrays.
 * Gaps    NaN in, NaN out. Throws: RangeError when an array is too short or both are one.
 */
export function choleskyInverse(factor: Float64Array, n: number, out: Float64Array): void {
  checkLength('choleskyInverse', 'factor', factor, n * n);
  checkLength('choleskyInverse', 'out', out, n * n);
  if (factor === out) throw new RangeError('choleskyInverse: factor and out are one array');
  invertLower(factor, n, out);
  // Element (i, j), i >= j, needs rows i.. of both columns: working downwards, those are still untouched.
  for (let i = 0; i < n; i += 1) {
    for (let j = 0; j <= i; j += 1) {
      let sum = 0;
      for (let k = i; k < n; k += 1) sum += (out[k * n + i] as number) * (out[k * n + j] as number);
      out[i * n + j] = sum;
      out[j * n + i] = sum;
    }
  }
}

/** Logarithm of the determinant of A from its Cholesky factor; does not overflow where the determinant would. */
export function choleskyLogDeterminant(factor: Float64Array, n: number): number {
  checkLength('choleskyLogDeterminant', 'factor', factor, n * n);
  let sum = 0;
  for (let row = 0; row < n; row += 1) sum += Math.log(factor[row * n + row] as number);
  return 2 * sum;
}

/**
 * x' A x of a symmetric matrix with both triangles filled.
 *
 * Shapes  a: n x n; x: n. Gaps: NaN in, NaN out. Throws: RangeError when an array is too short.
 */
export function quadraticForm(a: Float64Array, n: number, x: Float64Array): number {
  checkLength('quadraticForm', 'a', a, n * n);
  checkLength('quadraticForm', 'x', x, n);
  let total = 0;
  for (let row = 0; row < n; row += 1) {
    let sum = 0;
    for (let column = 0; column < n; column += 1) sum += (a[row * n + column] as number) * (x[column] as number);
    total += sum * (x[row] as number);
  }
  return total;
}

/**
 * x' A^-1 x from the Cholesky factor of A: the square of a vector's distance in units of its covariance.
 *
 * Shapes  factor: n x n; x: n, left as it is; workspace: n, overwritten. Gaps: NaN in, NaN out.
 * Throws  RangeError when an array is too short.
 */
export function inverseQuadraticForm(
  factor: Float64Array,
  n: number,
  x: Float64Array,
  workspace: Float64Array,
): number {
  checkLength('inverseQuadraticForm', 'x', x, n);
  checkLength('inverseQuadraticForm', 'workspace', workspace, n);
  for (let row = 0; row < n; row += 1) workspace[row] = x[row] as number;
  forwardSubstituteInPlace(factor, n, workspace);
  let total = 0;
  for (let row = 0; row < n; row += 1) total += (workspace[row] as number) ** 2;
  return total;
}
