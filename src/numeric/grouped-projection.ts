import { choleskySolve } from './cholesky.ts';

/** A matrix with few entries a row: row r has those from `start[r]` to `start[r + 1]`. A column comes at most once in a row. */
export interface SparseRows {
  readonly start: Int32Array;
  readonly column: Int32Array;
  readonly factor: Float64Array;
  readonly columns: number;
}

/** Rows sorted into groups numbered from 0; every group has at least one row. */
export interface Grouping {
  readonly of: Int32Array;
  readonly sizes: Float64Array;
}

/** The projection onto all vectors that are constant within the groups, plus the columns of a sparse matrix. */
export interface GroupedProjection {
  readonly rows: SparseRows;
  /** Absent where there are columns only. */
  readonly groups: Grouping | undefined;
  /** Columns that say something beyond the groups and the columns before them. */
  readonly kept: Int32Array;
  /** For each column its place among the kept ones, or −1. */
  readonly place: Int32Array;
  /** Cholesky factor of the kept columns' normal matrix, after their group means are taken out; row-major. */
  readonly factor: Float64Array;
  /** Dimension of the space projected onto. */
  readonly rank: number;
}

/** A pivot below this part of its column's square is rounding. Columns hold small whole numbers, so that true pivots stay far above. */
const RANK_TOLERANCE = 1e-9;

export function grouping(of: Int32Array): Grouping {
  let count = 0;
  for (const group of of) count = Math.max(count, group + 1);
  const sizes = new Float64Array(count);
  for (const group of of) sizes[group]! += 1;
  return { of, sizes };
}

/** Prepares the projection. Cost: rows × entries² + columns³ / 6. */
export function groupedProjection(rows: SparseRows, groups: Grouping | undefined): GroupedProjection {
  const n = rows.columns;
  const gram = new Float64Array(n * n);
  addOuterProducts(gram, rows, undefined, 1);
  const squares = Float64Array.from({ length: n }, (_, j) => gram[j * n + j]!);
  if (groups !== undefined) addOuterProducts(gram, rowSums(rows, groups), groups.sizes, -1);
  const kept: number[] = [];
  const triangle: Float64Array[] = [];
  for (let j = 0; j < n; j++) {
    const row = new Float64Array(kept.length + 1);
    let pivot = gram[j * n + j]!;
    for (let k = 0; k < kept.length; k++) {
      let sum = gram[j * n + kept[k]!]!;
      for (let m = 0; m < k; m++) sum -= row[m]! * triangle[k]![m]!;
      row[k] = sum / triangle[k]![k]!;
      pivot -= row[k]! ** 2;
    }
    if (!(pivot > RANK_TOLERANCE * squares[j]!)) continue;
    row[kept.length] = Math.sqrt(pivot);
    kept.push(j);
    triangle.push(row);
  }
  const place = new Int32Array(n).fill(-1);
  kept.forEach((column, k) => {
    place[column] = k;
  });
  const factor = new Float64Array(kept.length ** 2);
  triangle.forEach((row, k) => {
    factor.set(row, k * kept.length);
  });
  return {
    rows,
    groups,
    kept: Int32Array.from(kept),
    place,
    factor,
    rank: (groups?.sizes.length ?? 0) + kept.length,
  };
}

/** y − Π y, written into `into` (which may be `y` itself). Cost: the entries, plus kept columns². */
export function projectionResiduals(projection: GroupedProjection, y: Float64Array, into: Float64Array): void {
  const { rows, groups, kept, place, factor } = projection;
  if (into !== y) into.set(y);
  if (groups !== undefined) centre(into, groups);
  if (kept.length === 0) return;
  const side = new Float64Array(kept.length);
  for (let r = 0; r < into.length; r++) {
    for (let i = rows.start[r]!; i < rows.start[r + 1]!; i++) {
      const k = place[rows.column[i]!]!;
      if (k >= 0) side[k]! += rows.factor[i]! * into[r]!;
    }
  }
  choleskySolve(factor, kept.length, side);
  for (let r = 0; r < into.length; r++) {
    for (let i = rows.start[r]!; i < rows.start[r + 1]!; i++) {
      const k = place[rows.column[i]!]!;
      if (k >= 0) into[r]! -= rows.factor[i]! * side[k]!;
    }
  }
  if (groups !== undefined) centre(into, groups);
}

/** The sum of the rows of each group. */
export function rowSums(rows: SparseRows, groups: Grouping): SparseRows {
  const sums = Array.from(groups.sizes, () => new Map<number, number>());
  for (let r = 0; r < groups.of.length; r++) {
    const own = sums[groups.of[r]!]!;
    for (let i = rows.start[r]!; i < rows.start[r + 1]!; i++) {
      own.set(rows.column[i]!, (own.get(rows.column[i]!) ?? 0) + rows.factor[i]!);
    }
  }
  const start = new Int32Array(sums.length + 1);
  sums.forEach((own, g) => {
    start[g + 1] = start[g]! + own.size;
  });
  return {
    start,
    column: Int32Array.from(sums.flatMap((own) => [...own.keys()])),
    factor: Float64Array.from(sums.flatMap((own) => [...own.values()])),
    columns: rows.columns,
  };
}

function centre(vector: Float64Array, { of, sizes }: Grouping): void {
  const means = new Float64Array(sizes.length);
  for (let r = 0; r < vector.length; r++) means[of[r]!]! += vector[r]!;
  for (let g = 0; g < means.length; g++) means[g]! /= sizes[g]!;
  for (let r = 0; r < vector.length; r++) vector[r]! -= means[of[r]!]!;
}

// Adds sign · Σ row rowᵀ / divisor.
function addOuterProducts(
  gram: Float64Array,
  rows: SparseRows,
  divisors: Float64Array | undefined,
  sign: number,
): void {
  const { start, column, factor, columns } = rows;
  for (let r = 0; r + 1 < start.length; r++) {
    const scale = sign / (divisors?.[r] ?? 1);
    for (let i = start[r]!; i < start[r + 1]!; i++) {
      for (let j = start[r]!; j < start[r + 1]!; j++) {
        gram[column[i]! * columns + column[j]!]! += scale * factor[i]! * factor[j]!;
      }
    }
  }
}
