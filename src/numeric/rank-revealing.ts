import { Matrix, SVD } from 'ml-matrix';

/** Singular values below this part of the largest count as 0. Source: Golub & Van Loan, Matrix Computations, 4th ed., 5.4.1. */
const relativeTolerance = (rows: number, columns: number) => Math.max(rows, columns) * Number.EPSILON;

/** Raised where a design that the graph takes for solvable is not, to working precision. */
export class RankError extends Error {
  readonly rank: number;
  readonly columns: number;

  constructor(rank: number, columns: number) {
    super(`rank ${rank} of ${columns}`);
    this.name = 'RankError';
    this.rank = rank;
    this.columns = columns;
  }
}

/**
 * (Xᵀ X)⁻¹ of a dense design by singular values, after scaling its columns to unit length.
 * @returns row-major, columns × columns.
 * @throws RankError where the scaled design has no full column rank.
 */
export function inverseNormalMatrix(design: readonly (readonly number[])[]): Float64Array {
  const n = design[0]?.length ?? 0;
  const lengths = Array.from({ length: n }, (_, j) => Math.hypot(...design.map((row) => row[j]!)));
  const scaled = new Matrix(design.map((row) => row.map((entry, j) => entry / (lengths[j]! || 1))));
  const svd = new SVD(scaled, { computeLeftSingularVectors: false, autoTranspose: true });
  // A transposed decomposition swaps the two sets of vectors; with rows ≥ columns ml-matrix leaves them in place.
  const singular = svd.diagonal;
  const limit = relativeTolerance(design.length, n) * Math.max(...singular);
  const rank = singular.filter((value) => value > limit).length;
  if (rank < n) throw new RankError(rank, n);
  const v = svd.rightSingularVectors;
  const inverse = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      let sum = 0;
      for (let k = 0; k < n; k++) sum += (v.get(i, k) * v.get(j, k)) / singular[k]! ** 2;
      inverse[i * n + j] = sum / (lengths[i]! * lengths[j]!);
    }
  }
  return inverse;
}
