import { choleskyInPlace, choleskyInverse } from './cholesky.ts';
import { climbVariances, type VarianceLikelihood } from './climb-variances.ts';
import { type NestedRows, type NestedScratch, type NestedVariances, solveNested, weighNested } from './nested-rows.ts';

/** Responses that share a design. Parts of one fit share the variances only. */
export interface NestedPart {
  /** Of independent columns. */
  readonly rows: NestedRows;
  readonly responses: readonly Float64Array[];
}

export interface NestedRemlFit {
  /** NaN for a step that counts as absent. */
  readonly variances: NestedVariances;
  readonly iterations: number;
  readonly converged: boolean;
}

/** The order in which variances are handed to the climb. */
const STEPS = ['outer', 'inner', 'within'] as const;
type Step = (typeof STEPS)[number];

/**
 * Restricted maximum likelihood for outer groups, inner groups and readings, pooled over independent responses and over
 * designs (average information, not below 0). The covariance is never formed: each outer group is inverted in closed form.
 * @param start a starting value each; undefined for a step that the design cannot show, which then counts as absent.
 * Source: Patterson & Thompson 1971, Biometrika 58, 545–554; Gilmour, Thompson & Cullis 1995, Biometrics 51, 1440–1450.
 * Cost: iterations × (responses × (8 readings × entries + columns²) + parts × columns³).
 */
export function nestedReml(
  parts: readonly NestedPart[],
  start: { readonly outer: number | undefined; readonly inner: number | undefined; readonly within: number },
): NestedRemlFit {
  const active = STEPS.filter((step) => start[step] !== undefined);
  const effects = active.map((step) =>
    parts.reduce((sum, { rows, responses }) => sum + responses.length * groupsOf(rows, step), 0),
  );
  const climbed = climbVariances(
    Float64Array.from(active, (step) => start[step]!),
    effects,
    (values) => {
      const at = (step: Step) => values[active.indexOf(step)] ?? 0;
      const variances = { outer: at('outer'), inner: at('inner'), within: at('within') };
      return sumOf(parts.map(({ rows, responses }) => likelihood(rows, responses, variances, active)));
    },
    active.indexOf('within'),
  );
  const found = (step: Step) => climbed.variances[active.indexOf(step)] ?? Number.NaN;
  return {
    variances: { outer: found('outer'), inner: found('inner'), within: found('within') },
    iterations: climbed.iterations,
    converged: climbed.converged,
  };
}

function groupsOf(rows: NestedRows, step: Step): number {
  return step === 'outer' ? rows.outerCount : step === 'inner' ? rows.innerCount : rows.count;
}

function sumOf(likelihoods: readonly VarianceLikelihood[]): VarianceLikelihood {
  const [first, ...rest] = likelihoods;
  return rest.reduce(
    (sum, part) => ({
      logLikelihood: sum.logLikelihood + part.logLikelihood,
      score: sum.score.map((value, k) => value + part.score[k]!),
      information: sum.information.map((value, k) => value + part.information[k]!),
    }),
    first!,
  );
}

// Log-likelihood without its constants.
function likelihood(
  rows: NestedRows,
  responses: readonly Float64Array[],
  variances: NestedVariances,
  active: readonly Step[],
): VarianceLikelihood {
  const { columns, count } = rows;
  const weighed = weighNested(rows, variances);
  const factor = weighed.normal;
  if (!choleskyInPlace(factor, columns)) throw new Error('columns that were kept as independent are not');
  let logNormal = 0;
  for (let k = 0; k < columns; k++) logNormal += 2 * Math.log(factor[k * columns + k]!);
  const inverse = new Float64Array(columns * columns);
  choleskyInverse(factor, columns, inverse, new Float64Array(columns * columns));

  const size = active.length;
  const score = Float64Array.from(active, (step) => {
    const { trace, normal } = weighed.derivatives[step];
    let sum = trace;
    for (let cell = 0; cell < normal.length; cell++) sum -= inverse[cell]! * normal[cell]!;
    return (-sum * responses.length) / 2;
  });
  const information = new Float64Array(size * size);
  let forms = 0;
  const scratch = { inner: new Float64Array(rows.innerCount), outer: new Float64Array(rows.outerCount) };
  const solved = new Float64Array(count);
  const py = new Float64Array(count);
  const beta = new Float64Array(columns);
  const moved = active.map(() => new Float64Array(count));
  const weighedMoved = active.map(() => new Float64Array(count));
  const sides = active.map(() => new Float64Array(columns));
  const fittedSides = active.map(() => new Float64Array(columns));
  for (const y of responses) {
    solveNested(rows, weighed, variances, y, solved, scratch);
    transposed(rows, solved, beta);
    multiply(inverse, beta.slice(), beta);
    subtractFitted(rows, y, beta, solved);
    solveNested(rows, weighed, variances, solved, py, scratch);
    forms += product(y, py);
    active.forEach((step, k) => {
      spread(rows, step, py, moved[k]!, scratch);
      score[k]! += product(py, moved[k]!) / 2;
      solveNested(rows, weighed, variances, moved[k]!, weighedMoved[k]!, scratch);
      transposed(rows, weighedMoved[k]!, sides[k]!);
      multiply(inverse, sides[k]!, fittedSides[k]!);
    });
    for (let k = 0; k < size; k++) {
      for (let l = 0; l <= k; l++) {
        const entry = (product(moved[k]!, weighedMoved[l]!) - product(sides[k]!, fittedSides[l]!)) / 2;
        information[k * size + l]! += entry;
        if (l < k) information[l * size + k]! += entry;
      }
    }
  }
  return {
    logLikelihood: -(responses.length * (weighed.logDeterminant + logNormal) + forms) / 2,
    score,
    information,
  };
}

/** Z Zᵀ v of a step: each reading gets the sum over its group. */
function spread(rows: NestedRows, step: Step, v: Float64Array, into: Float64Array, scratch: NestedScratch): void {
  if (step === 'within') {
    into.set(v);
    return;
  }
  const of = rows[step];
  const sums = scratch[step].fill(0);
  for (let r = 0; r < rows.count; r++) sums[of[r]!]! += v[r]!;
  for (let r = 0; r < rows.count; r++) into[r] = sums[of[r]!]!;
}

function transposed({ start, column, factor, count }: NestedRows, v: Float64Array, into: Float64Array): void {
  into.fill(0);
  for (let r = 0; r < count; r++) {
    for (let i = start[r]!; i < start[r + 1]!; i++) into[column[i]!]! += factor[i]! * v[r]!;
  }
}

function subtractFitted(rows: NestedRows, y: Float64Array, beta: Float64Array, into: Float64Array): void {
  const { start, column, factor, count } = rows;
  for (let r = 0; r < count; r++) {
    let rest = y[r]!;
    for (let i = start[r]!; i < start[r + 1]!; i++) rest -= factor[i]! * beta[column[i]!]!;
    into[r] = rest;
  }
}

function multiply(matrix: Float64Array, vector: Float64Array, into: Float64Array): void {
  const n = vector.length;
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += matrix[i * n + j]! * vector[j]!;
    into[i] = sum;
  }
}

function product(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}
