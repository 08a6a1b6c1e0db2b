import { choleskyInPlace, choleskyInverse, choleskySolve, symmetricNorm } from '../numeric/cholesky.ts';
import type { Incidence } from './incidence.ts';

/** The least-squares system of frequencies that share readings, relative weights and restraints. n links of each frequency, G gains. */
export interface BlockSystem {
  readonly incidence: Incidence;
  /** Weight of each row, relative to the first one. */
  readonly weights: Float64Array;
  /** Links with a known value, and the relative weights of those values. */
  readonly priorLinks: readonly number[];
  readonly priorWeights: Float64Array;
  /** One vector of n coefficients a free direction. */
  readonly restraints: readonly Float64Array[];
  readonly links: number;
  readonly gains: number;
}

/** A factored block: what serves every frequency of it. Matrices are row-major. */
export interface FactoredBlock {
  /** n × n covariance of the links for weights of unit variance, under the restraints. */
  readonly covariance: Float64Array;
  /** Solves the normal equations in place, under the restraints. */
  readonly solve: (rightHandSide: Float64Array) => void;
  /** n × G: by how much the links move, per dB of gain taken out. */
  readonly coupling: Float64Array;
  /** G × G: what remains of the gains' normal matrix when the links are eliminated (Schur complement). */
  readonly schur: Float64Array;
  /** The restraints as they stand in the normal equations: √κ c. */
  readonly restraints: readonly Float64Array[];
  /** 1-norm condition number of the restrained normal matrix. */
  readonly condition: number;
  /** Whether the condition was too poor for the Cholesky factor; without a fallback the block is then of no use. */
  readonly poor: boolean;
}

/**
 * Beyond this condition number of the normal matrix, the design itself is factored instead: rounding would take more
 * than a tenth of the 1e-9 that is promised for the covariance.
 */
const POOR_CONDITION = 1e7;

/**
 * Assembles and factors a block. A restraint c joins the normal matrix N as κ c cᵀ; then the restrained covariance is
 * (N + κ Σ c cᵀ)⁻¹ − Σ z zᵀ with z = √κ (N + κ Σ c cᵀ)⁻¹ c, as (N + κ C Cᵀ) maps the free directions onto C.
 * Source: restraints as in NIST/SEMATECH e-Handbook of Statistical Methods, 2.3.3.2; the identity is derived in
 * DEVELOPERS.md. Gains are eliminated as the border of an arrowhead matrix: Björck, Numerical Methods for Least Squares
 * Problems, 1996, section 6.3.
 * @param fallback used where the condition is poor; absent until it is needed, as it takes time to load.
 */
export function factorBlock(system: BlockSystem, fallback: RankRevealingInverse | undefined): FactoredBlock {
  const { links: n, gains } = system;
  const normal = normalMatrix(system);
  const scale = Math.sqrt(meanDiagonal(normal, n) || 1);
  const restraints = system.restraints.map((restraint) => restraint.map((entry) => entry * scale));
  for (const restraint of restraints) addOuterProduct(normal, restraint, n, 1);

  const inverse = new Float64Array(n * n);
  const factor = Float64Array.from(normal);
  const definite = choleskyInPlace(factor, n);
  if (definite) choleskyInverse(factor, n, inverse, new Float64Array(n * n));
  const condition = definite ? symmetricNorm(normal, n) * symmetricNorm(inverse, n) : Number.POSITIVE_INFINITY;
  const poor = !(condition < POOR_CONDITION);
  if (poor && fallback !== undefined) inverse.set(fallback(designOf(system, restraints)));
  const solve = poor
    ? (b: Float64Array) => b.set(multiply(inverse, b, n))
    : (b: Float64Array) => choleskySolve(factor, n, b);

  const border = gains === 0 ? new Float64Array(0) : gainBorder(system);
  const coupling = columnsSolved(border, n, gains, solve);
  const schur = schurComplement(system, border, coupling);
  const covariance = inverse;
  // Each z is taken from the inverse before any is subtracted: the identity above is for all restraints together.
  const corrections = restraints.map((restraint) => multiply(inverse, restraint, n));
  for (const z of corrections) addOuterProduct(covariance, z, n, -1);
  return { covariance, solve, coupling, schur, restraints, condition, poor };
}

/** (Xᵀ X)⁻¹, row-major, of a dense design X by way of its singular values; throws where the rank is not full. */
export type RankRevealingInverse = (design: readonly (readonly number[])[]) => Float64Array;

// Weighted readings, known values and restraints as the rows of one dense design.
function designOf(system: BlockSystem, restraints: readonly Float64Array[]): number[][] {
  const { incidence, weights, links: n } = system;
  const rows: number[][] = [];
  weights.forEach((weight, r) => {
    const row = new Array<number>(n).fill(0);
    for (let i = incidence.start[r]!; i < incidence.start[r + 1]!; i++) {
      row[incidence.link[i]!] = Math.sqrt(weight) * incidence.factor[i]!;
    }
    rows.push(row);
  });
  system.priorLinks.forEach((prior, k) => {
    const row = new Array<number>(n).fill(0);
    row[prior] = Math.sqrt(system.priorWeights[k]!);
    rows.push(row);
  });
  return [...rows, ...restraints.map((restraint) => Array.from(restraint))];
}

function normalMatrix(system: BlockSystem): Float64Array {
  const { incidence, weights, links: n } = system;
  const { start, link, factor } = incidence;
  const normal = new Float64Array(n * n);
  for (let r = 0; r < weights.length; r++) {
    for (let i = start[r]!; i < start[r + 1]!; i++) {
      const weighted = weights[r]! * factor[i]!;
      for (let j = start[r]!; j < start[r + 1]!; j++) {
        const cell = link[i]! * n + link[j]!;
        normal[cell] = normal[cell]! + weighted * factor[j]!;
      }
    }
  }
  system.priorLinks.forEach((prior, k) => {
    normal[prior * n + prior] = normal[prior * n + prior]! + system.priorWeights[k]!;
  });
  return normal;
}

function gainBorder(system: BlockSystem): Float64Array {
  const { incidence, weights, links: n, gains } = system;
  const border = new Float64Array(n * gains);
  for (let r = 0; r < weights.length; r++) {
    const gain = incidence.gain[r]!;
    if (gain < 0) continue;
    for (let i = incidence.start[r]!; i < incidence.start[r + 1]!; i++) {
      const cell = incidence.link[i]! * gains + gain;
      border[cell] = border[cell]! + weights[r]! * incidence.factor[i]!;
    }
  }
  return border;
}

function columnsSolved(border: Float64Array, n: number, gains: number, solve: (b: Float64Array) => void): Float64Array {
  const solved = new Float64Array(n * gains);
  const column = new Float64Array(n);
  for (let g = 0; g < gains; g++) {
    for (let i = 0; i < n; i++) column[i] = border[i * gains + g]!;
    solve(column);
    for (let i = 0; i < n; i++) solved[i * gains + g] = column[i]!;
  }
  return solved;
}

function schurComplement(system: BlockSystem, border: Float64Array, coupling: Float64Array): Float64Array {
  const { incidence, weights, links: n, gains } = system;
  const schur = new Float64Array(gains * gains);
  for (let r = 0; r < weights.length && gains > 0; r++) {
    const gain = incidence.gain[r]!;
    if (gain >= 0) schur[gain * gains + gain] = schur[gain * gains + gain]! + weights[r]!;
  }
  for (let a = 0; a < gains; a++) {
    for (let b = 0; b < gains; b++) {
      let sum = 0;
      for (let i = 0; i < n; i++) sum += border[i * gains + a]! * coupling[i * gains + b]!;
      schur[a * gains + b] = schur[a * gains + b]! - sum;
    }
  }
  return schur;
}

function meanDiagonal(matrix: Float64Array, n: number): number {
  let sum = 0;
  for (let i = 0; i < n; i++) sum += matrix[i * n + i]!;
  return sum / n;
}

function addOuterProduct(matrix: Float64Array, vector: Float64Array, n: number, sign: number): void {
  for (let i = 0; i < n; i++) {
    const entry = sign * vector[i]!;
    if (entry === 0) continue;
    for (let j = 0; j < n; j++) matrix[i * n + j] = matrix[i * n + j]! + entry * vector[j]!;
  }
}

function multiply(matrix: Float64Array, vector: Float64Array, n: number): Float64Array {
  const product = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += matrix[i * n + j]! * vector[j]!;
    product[i] = sum;
  }
  return product;
}
