/**
 * Cholesky factor of a symmetric positive definite matrix, in place: the lower triangle of `a` becomes L with A = L Lᵀ;
 * the upper triangle is left alone. False where a pivot is not above 0: the matrix is not positive definite.
 * @param a row-major, n × n.
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., algorithm 4.2.1 (row version). Cost: n³/3.
 */
export function choleskyInPlace(a: Float64Array, n: number): boolean {
  for (let i = 0; i < n; i++) {
    const rowI = i * n;
    for (let j = 0; j <= i; j++) {
      const rowJ = j * n;
      let sum = a[rowI + j]!;
      for (let k = 0; k < j; k++) sum -= a[rowI + k]! * a[rowJ + k]!;
      if (i === j) {
        if (!(sum > 0)) return false;
        a[rowI + i] = Math.sqrt(sum);
      } else a[rowI + j] = sum / a[rowJ + j]!;
    }
  }
  return true;
}

/** Solves A x = b in place with the factor L of A. Cost: 2 n². */
export function choleskySolve(factor: Float64Array, n: number, b: Float64Array): void {
  for (let i = 0; i < n; i++) {
    let sum = b[i]!;
    for (let k = 0; k < i; k++) sum -= factor[i * n + k]! * b[k]!;
    b[i] = sum / factor[i * n + i]!;
  }
  for (let i = n - 1; i >= 0; i--) {
    let sum = b[i]!;
    for (let k = i + 1; k < n; k++) sum -= factor[k * n + i]! * b[k]!;
    b[i] = sum / factor[i * n + i]!;
  }
}

/**
 * Inverse of A from its factor L, both triangles filled.
 * @param scratch room for n × n numbers.
 * Cost: 2 n³/3.
 */
export function choleskyInverse(factor: Float64Array, n: number, inverse: Float64Array, scratch: Float64Array): void {
  // Row j of scratch holds column j of L⁻¹, so that both inner loops run along memory.
  for (let j = 0; j < n; j++) {
    const row = j * n;
    scratch[row + j] = 1 / factor[row + j]!;
    for (let i = j + 1; i < n; i++) {
      let sum = 0;
      for (let k = j; k < i; k++) sum -= factor[i * n + k]! * scratch[row + k]!;
      scratch[row + i] = sum / factor[i * n + i]!;
    }
  }
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = 0;
      for (let k = i; k < n; k++) sum += scratch[i * n + k]! * scratch[j * n + k]!;
      inverse[i * n + j] = sum;
      inverse[j * n + i] = sum;
    }
  }
}

/** Largest column sum of absolute values of a symmetric matrix (its 1-norm). */
export function symmetricNorm(a: Float64Array, n: number): number {
  let norm = 0;
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += Math.abs(a[i * n + j]!);
    norm = Math.max(norm, sum);
  }
  return norm;
}
