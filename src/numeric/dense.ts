import { Matrix, QrDecomposition, SingularValueDecomposition, solve } from 'ml-matrix';
import { RankError } from './rank-revealing.ts';

/**
 * Dense least squares for small systems: the second, independent answer beside the sparse engine, and the one to fall
 * back on. Loads ml-matrix (50 ms): `await import` it where it is seldom needed.
 */

export type DenseRows = readonly (readonly number[])[];

/** Least-squares solution of a dense system. */
export interface DenseSolution {
  readonly coefficients: Float64Array;
  /**
   * (Xᵀ W X)⁻¹, under the restraint where there is one; row-major, columns × columns. Times the variance of unit weight
   * (1 where the weights are 1/u²) it is the covariance of the coefficients.
   */
  readonly covarianceFactor: Float64Array;
  /** y − X β, not weighted. */
  readonly residuals: Float64Array;
  /** Diagonal of the hat matrix; 1 − leverage is the redundancy of the row. */
  readonly leverages: Float64Array;
  /** Σ weight · residual². */
  readonly sumOfSquares: number;
  /** Rows minus coefficients that the rows had to determine. */
  readonly dof: number;
}

export interface DenseOptions {
  /** One per row, above 0; 1/u² for independent rows. All 1 where absent. */
  readonly weights?: ArrayLike<number>;
}

/** Linear conditions `rows` · β = `values` that the solution meets exactly. */
export interface Restraints {
  readonly rows: DenseRows;
  readonly values: ArrayLike<number>;
}

/** Restraint values that agree to this part of their size count as consistent. Common practice, no source. */
const CONSISTENT = 1e-9;

/**
 * Weighted least squares by Householder QR, columns scaled to unit length first.
 * @param rows the design X, a row per observation. @param y one per row.
 * @throws RankError where the columns are not independent to working precision; RangeError for weights that are not
 * above 0, or for entries that are not finite.
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 5.2 and 5.3. Cost: 2 m n².
 */
export function leastSquaresByQr(rows: DenseRows, y: ArrayLike<number>, options: DenseOptions = {}): DenseSolution {
  const columns = rows[0]?.length ?? 0;
  const roots = Array.from(rows, (_, i) => Math.sqrt(options.weights?.[i] ?? 1));
  if (!roots.every((root) => root > 0)) throw new RangeError('weights must be above 0');
  const weighted = rows.map((row, i) => row.map((entry) => entry * roots[i]!));
  const lengths = columnLengths(weighted, columns);
  requireFullRank(weighted, columns);

  const scaled = new Matrix(weighted.map((row) => row.map((entry, j) => entry / lengths[j]!)));
  const qr = new QrDecomposition(scaled);
  const q = qr.orthogonalMatrix;
  const target = Matrix.columnVector(roots.map((root, i) => root * y[i]!));
  const inverseR = solve(qr.upperTriangularMatrix, Matrix.eye(columns, columns));
  const beta = qr.solve(target);
  const coefficients = Float64Array.from(lengths, (length, j) => beta.get(j, 0) / length);

  const covarianceFactor = new Float64Array(columns * columns);
  for (let i = 0; i < columns; i++) {
    for (let j = 0; j < columns; j++) {
      let sum = 0;
      for (let k = Math.max(i, j); k < columns; k++) sum += inverseR.get(i, k) * inverseR.get(j, k);
      covarianceFactor[i * columns + j] = sum / (lengths[i]! * lengths[j]!);
    }
  }
  const residuals = Float64Array.from(rows, (row, i) => y[i]! - innerProduct(row, coefficients));
  return {
    coefficients,
    covarianceFactor,
    residuals,
    leverages: Float64Array.from(rows, (_, i) => q.getRow(i).reduce((sum, entry) => sum + entry * entry, 0)),
    sumOfSquares: residuals.reduce((sum, residual, i) => sum + (roots[i]! * residual) ** 2, 0),
    dof: rows.length - columns,
  };
}

/**
 * Weighted least squares under linear restraints, by their null space: β = β₀ + Z w with C β₀ = r, C Z = 0. Restraints
 * may repeat each other; they may not contradict each other.
 * @throws RangeError for contradicting restraints; RankError where rows and restraints together leave something open.
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 6.2.3; NIST/SEMATECH e-Handbook of Statistical Methods,
 * 2.3.3.2 (the same solution from a bordered matrix).
 */
export function leastSquaresWithRestraint(
  rows: DenseRows,
  y: ArrayLike<number>,
  restraints: Restraints,
  options: DenseOptions = {},
): DenseSolution {
  const columns = rows[0]?.length ?? 0;
  const { basis, particular } = solutionsOf(restraints, columns);
  const reduced = rows.map((row) => basis.map((direction) => innerProduct(row, direction)));
  const rest = Float64Array.from(rows, (row, i) => y[i]! - innerProduct(row, particular));
  const free = basis.length > 0 ? leastSquaresByQr(reduced, rest, options) : fixedSolution(rest, options);

  const coefficients = particular.map(
    (value, j) => value + basis.reduce((sum, direction, k) => sum + direction[j]! * free.coefficients[k]!, 0),
  );
  const covarianceFactor = new Float64Array(columns * columns);
  for (const [k, left] of basis.entries()) {
    for (const [l, right] of basis.entries()) {
      const factor = free.covarianceFactor[k * basis.length + l]!;
      for (let i = 0; i < columns; i++) {
        for (let j = 0; j < columns; j++) covarianceFactor[i * columns + j]! += left[i]! * factor * right[j]!;
      }
    }
  }
  return { ...free, coefficients, covarianceFactor };
}

/**
 * Rank by singular values, columns scaled to unit length first so that their units do not matter. A value below
 * max(rows, columns) · epsilon of the largest counts as 0.
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., 5.4.1.
 */
export function rankOf(matrix: DenseRows): number {
  const columns = matrix[0]?.length ?? 0;
  if (matrix.length === 0 || columns === 0) return 0;
  const lengths = columnLengths(matrix, columns);
  const scaled = matrix.map((row) => row.map((entry, j) => entry / (lengths[j]! || 1)));
  const { diagonal } = new SingularValueDecomposition(new Matrix(scaled), {
    autoTranspose: true,
    computeLeftSingularVectors: false,
    computeRightSingularVectors: false,
  });
  const largest = Math.max(...diagonal);
  return diagonal.filter((value) => value > Math.max(matrix.length, columns) * Number.EPSILON * largest).length;
}

function requireFullRank(rows: DenseRows, columns: number): void {
  const rank = rankOf(rows);
  if (rank < columns) throw new RankError(rank, columns);
}

/** All solutions of the restraints: one of them (the shortest), and an orthonormal basis of the directions left free. */
function solutionsOf(restraints: Restraints, columns: number): { basis: Float64Array[]; particular: Float64Array } {
  // Zero rows make it square: only then does ml-matrix return the vectors of the null space too.
  const size = Math.max(columns, restraints.rows.length);
  const square = Matrix.zeros(size, size);
  for (const [i, row] of restraints.rows.entries()) {
    for (const [j, entry] of row.entries()) square.set(i, j, entry);
  }
  const svd = new SingularValueDecomposition(square);
  const limit = size * Number.EPSILON * Math.max(...svd.diagonal);
  const basis: Float64Array[] = [];
  const particular = new Float64Array(columns);
  for (const [k, value] of svd.diagonal.entries()) {
    const direction = Float64Array.from({ length: columns }, (_, j) => svd.rightSingularVectors.get(j, k));
    if (value > limit) {
      let part = 0;
      for (let i = 0; i < restraints.rows.length; i++) {
        part += svd.leftSingularVectors.get(i, k) * restraints.values[i]!;
      }
      for (let j = 0; j < columns; j++) particular[j]! += (direction[j]! * part) / value;
    } else if (innerProduct(direction, direction) > 0.5) basis.push(direction);
  }
  for (const [i, row] of restraints.rows.entries()) {
    const value = restraints.values[i]!;
    if (Math.abs(innerProduct(row, particular) - value) > CONSISTENT * Math.max(1, Math.abs(value))) {
      throw new RangeError(`restraint ${i + 1} contradicts the others`);
    }
  }
  return { basis, particular };
}

/** Where the restraints leave nothing to the rows. */
function fixedSolution(rest: Float64Array, { weights }: DenseOptions): DenseSolution {
  return {
    coefficients: new Float64Array(0),
    covarianceFactor: new Float64Array(0),
    residuals: rest,
    leverages: new Float64Array(rest.length),
    sumOfSquares: rest.reduce((sum, residual, i) => sum + (weights?.[i] ?? 1) * residual * residual, 0),
    dof: rest.length,
  };
}

function columnLengths(rows: DenseRows, columns: number): number[] {
  const lengths = Array.from({ length: columns }, (_, j) => Math.hypot(...rows.map((row) => row[j]!)));
  // A singular value decomposition never ends on NaN.
  if (!lengths.every(Number.isFinite)) throw new RangeError('the design holds entries that are not finite');
  return lengths;
}

function innerProduct(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}
