import { choleskyInPlace, choleskyInverse } from './cholesky.ts';
import { climbVariances, type VarianceLikelihood } from './climb-variances.ts';
import type { DenseRows } from './dense.ts';
import { RankError } from './rank-revealing.ts';

/** y = X β + Σ Z b + e for several independent responses y that share X, Z and the variances. */
export interface MixedModel {
  /** X, a row a reading; its columns must be independent. */
  readonly fixed: DenseRows;
  /** One Z a variance: b is normal around 0 with that variance. */
  readonly random: readonly DenseRows[];
  readonly responses: readonly ArrayLike<number>[];
  /** Known variances of e; absent where e has one variance that is to be estimated. */
  readonly knownVariances?: ArrayLike<number>;
}

export interface RemlFit {
  /** One a Z, not below 0. */
  readonly variances: Float64Array;
  /** NaN where it is known. */
  readonly residualVariance: number;
  /** Standard uncertainty of the variances, the residual's last where it is estimated; NaN for a variance at 0. */
  readonly standardErrors: Float64Array;
  /** Generalised least-squares coefficients, one array a response. */
  readonly coefficients: readonly Float64Array[];
  /** Covariance of the coefficients of any one response, row-major. */
  readonly covariance: Float64Array;
  /** Predicted (shrunken) random effects: by response, then by Z. */
  readonly predictions: readonly (readonly Float64Array[])[];
  /** −2 × the restricted log-likelihood, constants included, log|XᵀX| not. */
  readonly criterion: number;
  readonly iterations: number;
  readonly converged: boolean;
}

/** A pivot below this part of its diagonal is rounding. */
const RANK_TOLERANCE = 1e-12;

/**
 * Restricted maximum likelihood for a few variances, by Fisher scoring that keeps them from going below 0.
 * Meant for small dense models, up to some hundreds of readings, and as the independent answer beside `nestedReml`.
 * @throws RankError where the columns of X are not independent.
 * Source: Patterson & Thompson 1971, Biometrika 58, 545–554; Searle, Casella & McCulloch, Variance Components, 1992,
 * section 6.6 (section number recalled from memory). Cost: iterations × variances × readings³.
 */
export function reml(model: MixedModel): RemlFit {
  const { fixed, random, responses, knownVariances } = model;
  const n = fixed.length;
  const shapes = random.map(outerProduct);
  const estimated = knownVariances === undefined ? [...shapes, identity(n)] : shapes;
  const known = knownVariances === undefined ? undefined : diagonal(knownVariances);
  const effects = [...random.map((z) => z[0]!.length), n].map((count) => count * responses.length);
  const ordinary = restricted(known ?? identity(n), fixed);
  const mean = responses.reduce((sum, y) => sum + form(ordinary.p, y, n), 0) / responses.length;
  const start = startingVariance(mean, n - fixed[0]!.length, known, ordinary);
  const evaluate = (variances: Float64Array) => likelihood(variances, estimated, known, fixed, responses);
  const climbed = climbVariances(
    Float64Array.from(estimated, () => start / estimated.length),
    effects,
    evaluate,
    known === undefined ? shapes.length : undefined,
  );
  const { p, covariance, weighted } = restricted(total(climbed.variances, estimated, known, n), fixed);
  return {
    variances: climbed.variances.slice(0, shapes.length),
    residualVariance: known === undefined ? climbed.variances[shapes.length]! : Number.NaN,
    standardErrors: climbed.standardErrors,
    coefficients: responses.map((y) => times(covariance, times(weighted, y, fixed[0]!.length), fixed[0]!.length)),
    covariance,
    predictions: responses.map((y) => {
      const py = times(p, y, n);
      return random.map((z, k) =>
        Float64Array.from(
          z[0]!,
          (_, j) => climbed.variances[k]! * z.reduce((sum, row, i) => sum + row[j]! * py[i]!, 0),
        ),
      );
    }),
    criterion: -2 * climbed.logLikelihood,
    iterations: climbed.iterations,
    converged: climbed.converged,
  };
}

// With known variances yᵀPy is already in units of them: what exceeds its expectation is taken for excess variance.
function startingVariance(mean: number, dof: number, known: Float64Array | undefined, { p }: Restricted): number {
  if (known === undefined) return mean / dof;
  const n = Math.sqrt(p.length);
  let trace = 0;
  for (let i = 0; i < n; i++) trace += p[i * n + i]!;
  return Math.max(mean - dof, 1) / trace;
}

interface Restricted {
  /** V⁻¹ − V⁻¹ X (XᵀV⁻¹X)⁻¹ XᵀV⁻¹. */
  readonly p: Float64Array;
  /** (XᵀV⁻¹X)⁻¹. */
  readonly covariance: Float64Array;
  /** XᵀV⁻¹. */
  readonly weighted: Float64Array;
  /** log|V| + log|XᵀV⁻¹X|. */
  readonly logDeterminants: number;
}

function restricted(v: Float64Array, fixed: DenseRows): Restricted {
  const n = fixed.length;
  const columns = fixed[0]!.length;
  const ofV = inverted(v, n);
  if (ofV === undefined) throw new RangeError('the covariance of the readings is not positive definite');
  const weighted = new Float64Array(columns * n);
  const normal = new Float64Array(columns * columns);
  for (let a = 0; a < columns; a++) {
    for (let i = 0; i < n; i++) {
      let sum = 0;
      for (let j = 0; j < n; j++) sum += fixed[j]![a]! * ofV.inverse[j * n + i]!;
      weighted[a * n + i] = sum;
      for (let b = 0; b < columns; b++) normal[a * columns + b]! += sum * fixed[i]![b]!;
    }
  }
  const ofNormal = inverted(normal, columns);
  if (ofNormal === undefined) throw new RankError(columns - 1, columns);
  const p = ofV.inverse;
  for (let a = 0; a < columns; a++) {
    for (let b = 0; b < columns; b++) {
      const factor = ofNormal.inverse[a * columns + b]!;
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) p[i * n + j]! -= weighted[a * n + i]! * factor * weighted[b * n + j]!;
      }
    }
  }
  return {
    p,
    covariance: ofNormal.inverse,
    weighted,
    logDeterminants: ofV.logDeterminant + ofNormal.logDeterminant,
  };
}

function likelihood(
  variances: Float64Array,
  shapes: readonly Float64Array[],
  known: Float64Array | undefined,
  fixed: DenseRows,
  responses: readonly ArrayLike<number>[],
): VarianceLikelihood {
  const n = fixed.length;
  const { p, logDeterminants } = restricted(total(variances, shapes, known, n), fixed);
  const products = shapes.map((shape) => product(p, shape, n));
  const count = shapes.length;
  const information = new Float64Array(count * count);
  const score = new Float64Array(count);
  let forms = 0;
  products.forEach((a, k) => {
    for (let i = 0; i < n; i++) score[k]! -= (a[i * n + i]! / 2) * responses.length;
    products.forEach((b, l) => {
      let trace = 0;
      for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) trace += a[i * n + j]! * b[j * n + i]!;
      information[k * count + l] = (trace / 2) * responses.length;
    });
  });
  for (const y of responses) {
    forms += form(p, y, n);
    const py = times(p, y, n);
    shapes.forEach((shape, k) => {
      score[k]! += form(shape, py, n) / 2;
    });
  }
  const constant = (n - fixed[0]!.length) * Math.log(2 * Math.PI);
  return { logLikelihood: -(responses.length * (logDeterminants + constant) + forms) / 2, score, information };
}

function total(
  variances: Float64Array,
  shapes: readonly Float64Array[],
  known: Float64Array | undefined,
  n: number,
): Float64Array {
  const v = known === undefined ? new Float64Array(n * n) : Float64Array.from(known);
  shapes.forEach((shape, k) => {
    for (let i = 0; i < v.length; i++) v[i]! += variances[k]! * shape[i]!;
  });
  return v;
}

function inverted(matrix: Float64Array, n: number) {
  const factor = Float64Array.from(matrix);
  if (!choleskyInPlace(factor, n)) return undefined;
  let logDeterminant = 0;
  for (let i = 0; i < n; i++) {
    const pivot = factor[i * n + i]! ** 2;
    if (!(pivot > RANK_TOLERANCE * matrix[i * n + i]!)) return undefined;
    logDeterminant += Math.log(pivot);
  }
  const inverse = new Float64Array(n * n);
  choleskyInverse(factor, n, inverse, new Float64Array(n * n));
  return { inverse, logDeterminant };
}

function outerProduct(z: DenseRows): Float64Array {
  return Float64Array.from({ length: z.length ** 2 }, (_, cell) => {
    const [a, b] = [z[Math.floor(cell / z.length)]!, z[cell % z.length]!];
    return a.reduce((sum, value, j) => sum + value * b[j]!, 0);
  });
}

function identity(n: number): Float64Array {
  return diagonal(new Float64Array(n).fill(1));
}

function diagonal(values: ArrayLike<number>): Float64Array {
  const matrix = new Float64Array(values.length ** 2);
  for (let i = 0; i < values.length; i++) matrix[i * values.length + i] = values[i]!;
  return matrix;
}

function product(a: Float64Array, b: Float64Array, n: number): Float64Array {
  const result = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < n; k++) {
      const entry = a[i * n + k]!;
      for (let j = 0; j < n; j++) result[i * n + j]! += entry * b[k * n + j]!;
    }
  }
  return result;
}

/** Row-major matrix of as many columns as the vector has entries, times the vector. */
function times(matrix: Float64Array, vector: ArrayLike<number>, rows: number): Float64Array {
  const width = vector.length;
  return Float64Array.from({ length: rows }, (_, i) => {
    let sum = 0;
    for (let j = 0; j < width; j++) sum += matrix[i * width + j]! * vector[j]!;
    return sum;
  });
}

function form(matrix: Float64Array, vector: ArrayLike<number>, n: number): number {
  return times(matrix, vector, n).reduce((sum, value, i) => sum + value * vector[i]!, 0);
}
