/**
 * Lower Cholesky factor of a symmetric positive-definite matrix, row-major: A = L·Lᵀ.
 * A diagonal that is not positive beyond rounding takes a factor of zero in that column, so that a semi-definite
 * covariance (an effect known exactly) can be drawn from. Throws a RangeError on a clearly negative diagonal or NaN.
 * Cost: n³/6 multiplications.
 */
export function choleskyFactor(matrix: ArrayLike<number>, size: number): Float64Array {
  const lower = new Float64Array(size * size);
  let largest = 0;
  for (let i = 0; i < size; i += 1) largest = Math.max(largest, Math.abs(matrix[i * size + i]));
  const floor = 1e-12 * largest;
  for (let j = 0; j < size; j += 1) {
    let diagonal = matrix[j * size + j];
    for (let k = 0; k < j; k += 1) diagonal -= lower[j * size + k] * lower[j * size + k];
    if (!(diagonal > -1e-6 * largest - 1e-300)) throw new RangeError(`matrix is not positive definite at row ${j}`);
    if (diagonal <= floor) continue;
    const root = Math.sqrt(diagonal);
    lower[j * size + j] = root;
    for (let i = j + 1; i < size; i += 1) {
      let sum = matrix[i * size + j];
      for (let k = 0; k < j; k += 1) sum -= lower[i * size + k] * lower[j * size + k];
      lower[i * size + j] = sum / root;
    }
  }
  return lower;
}

/** Solves L·Lᵀ·x = b in place, given the factor. */
export function choleskySolve(lower: Float64Array, size: number, b: Float64Array): Float64Array {
  for (let i = 0; i < size; i += 1) {
    let sum = b[i];
    for (let k = 0; k < i; k += 1) sum -= lower[i * size + k] * b[k];
    b[i] = sum / lower[i * size + i];
  }
  for (let i = size - 1; i >= 0; i -= 1) {
    let sum = b[i];
    for (let k = i + 1; k < size; k += 1) sum -= lower[k * size + i] * b[k];
    b[i] = sum / lower[i * size + i];
  }
  return b;
}

/** Inverse of A = L·Lᵀ from its factor, row-major. Cost: n³. */
export function choleskyInverse(lower: Float64Array, size: number): Float64Array {
  const inverse = new Float64Array(size * size);
  const column = new Float64Array(size);
  for (let j = 0; j < size; j += 1) {
    column.fill(0);
    column[j] = 1;
    choleskySolve(lower, size, column);
    for (let i = 0; i < size; i += 1) inverse[i * size + j] = column[i];
  }
  return inverse;
}

/** Log determinant of A = L·Lᵀ. */
export function choleskyLogDeterminant(lower: Float64Array, size: number): number {
  let sum = 0;
  for (let i = 0; i < size; i += 1) sum += Math.log(lower[i * size + i]);
  return 2 * sum;
}
